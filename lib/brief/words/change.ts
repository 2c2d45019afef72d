/**
 * Words for what a service says besides its briefs: what has changed, that there is no brief, that it is testing itself.
 * A change for the worse names its hours first; a change for the better names no verdict before the day sentence does.
 */
import type { DayChange } from '../change/change.ts';
import type { JudgedDay } from '../day.ts';
import { epochOf, HOUR_MS } from '../../time.ts';
import { briefText, briefTitle } from './brief.ts';
import { ageName, dateName, hourSpan } from './clock.ts';
import { CLOSING } from './closing.ts';
import { INVENTED } from './day-sentence.ts';
import { listed, placeName, plainText } from './plain.ts';
import type { Reader } from './reader.ts';
import { verdictPhrase } from './verdicts.ts';

export interface ChangedDay {
  readonly day: JudgedDay;
  readonly change: Omit<DayChange, 'told'>;
}

/** Runs of consecutive hours: "11 to 13 h and 16 h". */
function spans(instants: readonly string[], timeZone: string): string {
  const runs: { from: string; to: string }[] = [];
  for (const at of [...instants].sort()) {
    const run = runs.at(-1);
    if (run !== undefined && epochOf(at) - epochOf(run.to) === HOUR_MS) run.to = at;
    else runs.push({ from: at, to: at });
  }
  return listed(runs.map((run) => hourSpan(run, timeZone)));
}

/** "Kestrel Edge, worse: 11 to 13 h now beyond a limit; 15 h can no longer be confirmed: cannot say. The forecast has changed." */
export function changeSentence({ day, change }: ChangedDay): string {
  const { timeZone } = day;
  const name = placeName({ name: day.siteName, id: day.siteId });
  const at = (now: 'beyond' | 'unknown') => change.worse.filter((hour) => hour.now === now).map((hour) => hour.validAt);
  const [beyond, unknown] = [at('beyond'), at('unknown')];
  const worse = [
    ...(beyond.length === 0 ? [] : [`${spans(beyond, timeZone)} now ${verdictPhrase('beyond')}`]),
    ...(unknown.length === 0 ? [] : [`${spans(unknown, timeZone)} can no longer be confirmed: ${verdictPhrase('unknown')}`]),
  ];
  const other = change.better.length === 0 ? [] : [`other than was said at ${spans(change.better, timeZone)}`];
  const why = change.reason === 'limits' ? `The limits of the sheet ${plainText(day.sheetName)} have changed.` : 'The forecast has changed.';
  return `${day.demo ? `${INVENTED}, ` : ''}${name}, ${worse.length > 0 ? 'worse' : 'changed'}: ${[...worse, ...other].join('; ')}. ${why}`;
}

/** One notice for all sites of a subscriber; what has not changed stands in it too, because it takes the place of what came before. */
export function changeNotice(days: readonly JudgedDay[], changed: readonly ChangedDay[], reader: Reader): { readonly title: string; readonly text: string } {
  const isWorse = changed.some(({ change }) => change.worse.length > 0);
  const order = [...changed].sort((a, b) => Number(b.change.worse.length > 0) - Number(a.change.worse.length > 0));
  return { title: retitled(briefTitle(days), isWorse ? 'Worse' : 'Changed'), text: `${order.map(changeSentence).join('\n')}\n\n${briefText(days, reader)}` };
}

/** The mark of invented weather stays the first thing said. */
function retitled(title: string, word: string): string {
  const mark = `${INVENTED}: `;
  const lower = (text: string): string => text.slice(0, 1).toLowerCase() + text.slice(1);
  return title.startsWith(mark) ? `${mark}${lower(word)}: ${title.slice(mark.length)}` : `${word}: ${lower(title)}`;
}

/** Why there is no brief, where this service knows. */
export type AbsentReason = 'not-run' | 'self-check' | 'not-made';

function reasonWords(reason: AbsentReason): string {
  switch (reason) {
    case 'not-run': return 'this service did not run at its time';
    case 'self-check': return 'this service found a fault in its own judging and stopped';
    case 'not-made': return 'it was not made in time';
  }
}

/** "No brief today" owns up: silence must not read as good news. */
export function absentNotice({ date, reason, demo }: { readonly date: string; readonly reason: AbsentReason; readonly demo: boolean }): { readonly title: string; readonly text: string } {
  const mark = demo ? `${INVENTED}: ` : '';
  const say = demo ? 'cannot say' : 'Cannot say';
  return {
    title: `${mark}${say}: no brief for ${dateName(date, 'short')}`,
    text: `${mark}${say}: there is no brief for ${dateName(date)}, because ${reasonWords(reason)}. Nothing that came before holds for this day.\n\n${CLOSING}\n`,
  };
}

/** Once a week, to every way of reaching somebody: that it works can only be seen by using it. */
export function testNotice({ atMs, reachedAtMs, asked = false }: { readonly atMs: number; readonly reachedAtMs: number | null; /** On the page of the subscription, not by the week. */ readonly asked?: boolean }): { readonly title: string; readonly text: string } {
  const last = reachedAtMs === null ? 'Nothing has been handed over on this way so far.' : `Something was last handed over on this way ${ageName(atMs - reachedAtMs)} before.`;
  return {
    title: 'Test: cannot say anything about any day',
    text: asked
      ? `This is a test that was asked for on the page of your subscription. It says nothing about any site or day. ${last}\n\n${CLOSING}\n`
      : `This is the weekly test of this way of reaching you. It says nothing about any site or day. ${last} If you see no such message for more than a week, this way no longer reaches you.\n\n${CLOSING}\n`,
  };
}
