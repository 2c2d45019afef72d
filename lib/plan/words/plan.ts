/** The plan in words: its title, what it could not do, what else there would be. */
import { causeClause } from '../../brief/words/causes.ts';
import { capital, clockTime, counted, dateName, hourName, hourSpan, INVENTED, listed, mostRestrictive, placeName, plainText, sentence, verdictPhrase, type Reader } from '../../brief/words/index.ts';
import type { PlanNotice } from '../changes.ts';
import type { Alternative, Block, DayPlan, GroupPlan, IfLost, PlanObjective } from '../day-plan.ts';
import { blockPlace, blockWhere, spareWords } from './blocks.ts';
import { closedClause } from './closed.ts';

type Day = Pick<DayPlan, 'timeZone'>;

export function groupName(name: string): string {
  return plainText(name, 40) || 'a group without a name';
}

/** "as of 5:30", of the oldest brief behind the plan. */
function asOfWords(plan: Pick<DayPlan, 'asOf' | 'timeZone'>): string {
  return plan.asOf === null ? 'nothing judged' : `as of ${clockTime(plan.asOf, plan.timeZone)}`;
}

/** "Invented weather: 1 group without a place; close to a limit; plan as of 5:30, Fri 14 May". */
export function planTitle(plan: DayPlan): string {
  const out = plan.groups.filter(({ leftOut }) => leftOut !== null).length;
  const verdicts = plan.groups.flatMap(({ blocks }) => blocks.map(({ verdict }) => verdict));
  const parts = [
    ...(out === 0 ? [] : [`${counted(out, 'group', 'groups')} without a place`]),
    ...(verdicts.length === 0 ? [] : [verdictPhrase(mostRestrictive(verdicts))]),
    `plan ${asOfWords(plan)}, ${dateName(plan.date, 'short')}`,
  ].join('; ');
  return plan.demo ? `${INVENTED}: ${parts}` : capital(parts);
}

/** "Invented weather, as of 5:30 Fri 14 May: Tow course at Tivvern Strip". No verdict: it is read long after it was written. */
export function eventTitle(plan: DayPlan, group: Pick<GroupPlan, 'name'>, block: Pick<Block, 'site' | 'siteName'>): string {
  const asOf = `${asOfWords(plan)} ${dateName(plan.date, 'short')}`;
  return `${plan.demo ? `${INVENTED}, ${asOf}` : capital(asOf)}: ${groupName(group.name)} at ${blockPlace(block)}`;
}

/** The plan in one line, what it could not do first. */
export function planSentence(plan: DayPlan): string {
  const { placed, hours, moves, spare } = plan.objective;
  const out = plan.groups.filter(({ leftOut }) => leftOut !== null).map(({ name }) => groupName(name));
  const what = placed === 0 ? [] : [sentence(`${counted(placed, 'group has', 'groups have')} ${counted(hours, 'hour', 'hours')} together with ${moves === 0 ? 'no move' : counted(moves, 'move', 'moves')}; ${spareWords(spare)} in the tightest hour`)];
  return [
    ...(out.length === 0 ? [] : [sentence(`No place for ${listed(out)}`)]),
    ...what,
    ...(plan.proven ? [] : ['The search ended early: a better plan may exist.']),
  ].join(' ');
}

export function leftOutSentence(group: GroupPlan, plan: Day, reader: Reader): string {
  const { leftOut } = group;
  switch (leftOut?.kind) {
    case undefined: return '';
    case 'instructors': return sentence(`No place: it needs ${counted(leftOut.needed, 'instructor', 'instructors')}, more than there are`);
    case 'shared': return sentence(`No place beside the others: too few ${leftOut.lacking === 'places' ? 'places at its sites' : leftOut.lacking === 'instructors' ? 'instructors' : 'places and instructors'}`);
    case 'no hours': {
      const nearest = `${placeName({ name: leftOut.siteName, id: leftOut.site })} comes nearest with ${leftOut.longestHours === 0 ? 'no hour' : `${leftOut.longestHours} h at a stretch`}`;
      return [sentence(`No place: ${nearest}`), ...(leftOut.cause === null ? [] : [sentence(limiting(leftOut.cause, plan, reader))])].join(' ');
    }
  }
}

function limiting(cause: Parameters<typeof closedClause>[0], plan: Day, reader: Reader): string {
  switch (cause.kind) {
    case 'group hours': return 'What limits it: its own hours';
    case 'site hours': return 'What limits it: the hours of the site';
    case 'lost': return 'What limits it: hours taken out by hand';
    case 'not judged': return 'What limits it: nothing is judged in its hours';
    case 'margin': return `What limits it: ${closedClause(cause, plan.timeZone, reader)}`;
  }
}

/** "2 groups, 5 h, spare 0.4 close bands, 1 move". */
function objectiveWords({ placed, hours, moves, spare }: PlanObjective): string {
  return placed === 0 ? 'no group has a place' : `${counted(placed, 'group', 'groups')}, ${hours} h, ${spareWords(spare)}, ${moves === 0 ? 'no move' : counted(moves, 'move', 'moves')}`;
}

function changeWords({ changes }: Alternative, plan: Day): string {
  if (changes.length === 0) return 'nothing else changes';
  return changes.map(({ group, blocks }) => `${groupName(group)} ${blocks.length === 0 ? 'has no place' : listed(blocks.map((block) => blockWhere(block, plan.timeZone)))}`).join('; ');
}

export function nextBestSentence(plan: DayPlan): string {
  if (plan.nextBest === null) return 'There is no other plan.';
  return sentence(`Next best: ${changeWords(plan.nextBest, plan)} (${objectiveWords(plan.nextBest.objective)})`);
}

/** "Without 9 to 10 h at Tivvern Strip: Tow course 10 to 12 h at Tivvern Strip (3 groups, 7 h, ...)." */
export function ifLostSentence(lost: IfLost, plan: Day): string {
  return sentence(`Without ${hourSpan(lost, plan.timeZone)} at ${placeName({ name: lost.siteName, id: lost.site })}: ${changeWords(lost, plan)} (${objectiveWords(lost.objective)})`);
}

/** "Beyond a limit at 10 h: First hops, 9 to 11 h at Wennet Meadow. A gust ...": the verdict first, as everywhere. */
export function noticeSentence(notice: PlanNotice, plan: Day, reader: Reader): string {
  const head = `${capital(verdictPhrase(notice.verdict))} at ${hourName(notice.validAt, plan.timeZone)}: ${groupName(notice.group)}, ${blockWhere(notice.block, plan.timeZone)}`;
  const why = notice.margin === null ? 'nothing is judged for it any more' : causeClause(notice.margin, reader);
  return `${sentence(head)} ${sentence(why)}`;
}
