/** A block in words. The verdict stands before its hours, so that a cut leaves less and never more. */
import { causeClause } from '../../brief/words/causes.ts';
import { capital, clockTime, counted, hourName, hourSpan, listed, placeName, sentence, verdictPhrase, type Reader } from '../../brief/words/index.ts';
import { figure } from '../../brief/units-out.ts';
import { epochOf } from '../../time.ts';
import type { Block, BlockEnd } from '../day-plan.ts';
import { closedClause } from './closed.ts';

export function blockPlace(block: Pick<Block, 'site' | 'siteName'>): string {
  return placeName({ name: block.siteName, id: block.site });
}

/** "9 to 12 h at Tivvern Strip". */
export function blockWhere(block: Pick<Block, 'site' | 'siteName' | 'from' | 'to'>, timeZone: string): string {
  return `${hourSpan(block, timeZone)} at ${blockPlace(block)}`;
}

/** "Close to a limit at 7 and 8 h", "Within limits". */
function blockVerdict(block: Pick<Block, 'verdict' | 'closeAt'>, timeZone: string): string {
  const at = block.verdict === 'close' && block.closeAt.length > 0 ? ` at ${listed(block.closeAt.map((hour) => hourName(hour, timeZone)))}` : '';
  return `${capital(verdictPhrase(block.verdict))}${at}`;
}

/** "last launch 11:48" where the window's is known and falls into the block; else when everybody is down. */
function blockLastLaunch(block: Pick<Block, 'window' | 'from' | 'to'>, timeZone: string): string {
  const last = block.window?.lastLaunch ?? null;
  const isInside = last !== null && epochOf(last) >= epochOf(block.from) && epochOf(last) < epochOf(block.to);
  return isInside ? `last launch ${clockTime(last, timeZone)}` : `everybody down by ${clockTime(block.to, timeZone)}`;
}

/** "Close to a limit at 7 h, last launch 9:48, 7 to 10 h at Tivvern Strip." */
export function blockSentence(block: Block, timeZone: string): string {
  return sentence(`${blockVerdict(block, timeZone)}, ${blockLastLaunch(block, timeZone)}, ${blockWhere(block, timeZone)}`);
}

/** Why it stands: what is least of what is left, and what ends it. */
export function blockReason(block: Block, timeZone: string, reader: Reader): string {
  const { tightest, endsAt } = block;
  const least = tightest === null ? 'No margin of these hours has a number' : `Tightest at ${hourName(tightest.validAt, timeZone)}: ${causeClause(tightest.margin, reader)} (${spareWords(block.spare)})`;
  const end = endsAt === null ? [] : [sentence(`It ends at ${hourName(block.to, timeZone)} because ${endClause(endsAt, timeZone, reader)}`)];
  return [sentence(least), ...end].join(' ');
}

function endClause(end: BlockEnd, timeZone: string, reader: Reader): string {
  switch (end.kind) {
    case 'wish': return 'the group has the hours it wished';
    case 'less spare': return `the hour after it would leave less than any hour of the plan (${spareWords(end.spare)})`;
    case 'elsewhere': return 'its place, its instructors or the group itself are wanted elsewhere';
    case 'group hours': case 'site hours': case 'lost': case 'not judged': case 'margin': return closedClause(end, timeZone, reader);
  }
}

/** "spare 1.3 close bands": how the spares of unlike margins compare. Rounded down: it never looks larger than it is. */
export function spareWords(spare: number | null): string {
  if (spare === null || !Number.isFinite(spare)) return 'spare not in numbers';
  return `spare ${figure(spare, { decimals: spare < 1 ? 2 : 1, rounding: 'down' })} close bands`;
}

export function moveWords(block: Block): string | null {
  if (block.movingMin === null) return null;
  return block.movingMin === 0 ? `Then, at ${blockPlace(block)}:` : `Then ${counted(block.movingMin, 'minute', 'minutes')} on the way to ${blockPlace(block)}:`;
}
