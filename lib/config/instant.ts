/** Instants as requests write them: ISO 8601 in UTC, a date that exists, hours 00 to 23. */
import { epochOf, isCalendarDate } from '../time.ts';

/** Epoch ms, NaN for a text that is no such instant. Date.parse alone takes 30 February for 2 March, and 24:00. */
export function instantMs(text: string): number {
  return isCalendarDate(text.slice(0, 10)) && !text.includes('T24') ? epochOf(text) : NaN;
}
