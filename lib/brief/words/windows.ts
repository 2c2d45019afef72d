/** Windows in words. The verdict and the last launch come before the hours, so that a cut leaves less, never more. */
import type { JudgedDay, JudgedWindow } from '../day.ts';
import { epochOf } from '../../time.ts';
import { clockTime, hourName, hourSpan } from './clock.ts';
import { capital, listed } from './plain.ts';
import { verdictPhrase } from './verdicts.ts';

/** "last launch 11:48", or null when no flight that begins in the window is known to end in it. */
export function lastLaunchWords(window: JudgedWindow, day: Pick<JudgedDay, 'timeZone'>): string | null {
  const { lastLaunch, from } = window;
  return lastLaunch === null || epochOf(lastLaunch) < epochOf(from) ? null : `last launch ${clockTime(lastLaunch, day.timeZone)}`;
}

/** "Close to a limit, last launch 11:48, window 9 to 12 h." */
export function windowSentence(window: JudgedWindow, day: Pick<JudgedDay, 'timeZone'>): string {
  const last = lastLaunchWords(window, day) ?? 'no flight known to end in it';
  return `${capital(verdictPhrase(window.verdict))}, ${last}, window ${hourSpan(window, day.timeZone)}.`;
}

/** "9 h to last launch 11:48 (close to a limit)": the window as an exception in the day sentence. */
function windowException(window: JudgedWindow, day: Pick<JudgedDay, 'timeZone'>): string {
  const from = hourName(window.from, day.timeZone);
  const last = lastLaunchWords(window, day);
  const until = last === null ? ' with no flight known to end in it' : ` to ${last}`;
  return `${from}${until} (${verdictPhrase(window.verdict)})`;
}

/** All windows as one exception, or null without any. */
export function exceptions(day: Pick<JudgedDay, 'timeZone' | 'windows'>): string | null {
  if (day.windows.length === 0) return null;
  return listed(day.windows.map((window) => windowException(window, day)));
}

/** When to stop: after the last launch of the last window. */
export function lastLaunchOfDay(day: Pick<JudgedDay, 'timeZone' | 'windows'>): string {
  const last = day.windows.map((window) => lastLaunchWords(window, day)).filter((words) => words !== null).at(-1);
  return last === undefined ? 'No launch: no window in which a flight is known to end.' : `Stop after the ${last}.`;
}
