/** Words for messages and feeds besides the brief itself: what was missed, and titles that must not age badly. */
import type { JudgedDay, JudgedWindow } from '../day.ts';
import { clockTime, dateName } from './clock.ts';
import { CLOSING } from './closing.ts';
import { INVENTED } from './day-sentence.ts';
import { counted, placeName } from './plain.ts';
import { lastLaunchWords } from './windows.ts';

/** A morning that this service slept through is owned up to: silence must not read as good news. */
export function missedNotice({ date, demo }: { readonly date: string; readonly demo: boolean }): { readonly title: string; readonly text: string } {
  const invented = demo ? `${INVENTED}: ` : '';
  const text = `Cannot say: the brief of ${dateName(date)} was neither computed nor sent, because this service did not run at its time. The next one comes at its usual hour.`;
  return { title: `${invented}${demo ? 'cannot' : 'Cannot'} say: no brief was computed for ${dateName(date, 'short')}`, text: `${invented}${text}\n\n${CLOSING}\n` };
}

/** Stands in the place of the reason why there is no legal day: "Cannot say: the brief was not computed in time". */
export const NOT_COMPUTED = 'the brief was not computed in time';

/** "As of 8:36": first in a title that a calendar goes on showing, and no verdict after it. */
function asOf(day: JudgedDay): string {
  const at = `As of ${clockTime(day.issuedAt, day.timeZone)}`;
  return day.demo ? `${INVENTED}. ${at}` : at;
}

/** "As of 8:36: Tivvern Strip, 1 window" */
export function calendarDayTitle(day: JudgedDay): string {
  const windows = day.windows.length === 0 ? 'no window' : counted(day.windows.length, 'window', 'windows');
  return `${asOf(day)}: ${placeName({ name: day.siteName, id: day.siteId })}, ${windows}`;
}

/** "As of 8:36: Tivvern Strip, last launch 11:52" */
export function calendarWindowTitle(day: JudgedDay, window: JudgedWindow): string {
  const last = lastLaunchWords(window, day);
  return `${asOf(day)}: ${placeName({ name: day.siteName, id: day.siteId })}${last === null ? ', no flight known to end in it' : `, ${last}`}`;
}

/** "As of 8:36: no longer a window, Tivvern Strip" */
export function calendarGoneTitle(day: JudgedDay): string {
  return `${asOf(day)}: ${GONE}, ${placeName({ name: day.siteName, id: day.siteId })}`;
}

export const GONE = 'no longer a window';
