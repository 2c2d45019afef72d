import { legalDay } from '../../lib/sky/sun.ts';
import type { Site } from '../../lib/site.ts';
import { instantOfLocal, localDate, localDay, MINUTE_MS, HOUR_MS, shiftDate } from '../../lib/time.ts';

/** A fetch older than three hours is made again before a brief; one that failed is tried again sooner. */
export const REFETCH_AFTER_MS = 3 * HOUR_MS;
export const RETRY_FAILED_FETCH_AFTER_MS = 10 * MINUTE_MS;

/** Whatever the forecasts do, the message leaves: how long it waits for its briefs, and the briefs for their forecasts. */
export interface Patience {
  readonly assessWithinMs: number;
  readonly readyWithinMs: number;
}

export const USUAL_PATIENCE: Patience = { assessWithinMs: 4 * MINUTE_MS, readyWithinMs: 10 * MINUTE_MS };
/** Somebody sits and watches. Two hosts that hang for ten seconds each still leave time to ask all others. */
export const SHORT_PATIENCE: Patience = { assessWithinMs: 35_000, readyWithinMs: 40_000 };

/** A brief that could not be handed over within six hours is of no use for the morning it was made for. */
export const DELIVER_WITHIN_MS = 6 * HOUR_MS;

export const LEASE_MS = MINUTE_MS;
export const SEND_TIMEOUT_MS = 15_000;

/** Whether a brief is wanted on a date; bit 0 of the days is Monday. */
function isWanted(date: string, days: number): boolean {
  return ((days >> ((new Date(`${date}T00:00:00Z`).getUTCDay() + 6) % 7)) & 1) === 1;
}

/** The instant after `afterMs` at which a zone's clocks next show this minute of the day, on a day that is wanted. */
export function followingDueMs(group: { readonly timeZone: string; readonly deliverMinute: number; readonly days?: number }, afterMs: number): number {
  const clock = { hour: Math.floor(group.deliverMinute / 60), minute: group.deliverMinute % 60 };
  const today = localDate(afterMs, group.timeZone);
  for (let ahead = 0; ahead <= 9; ahead += 1) {
    const date = shiftDate(today, ahead);
    const at = instantOfLocal(date, clock, group.timeZone);
    if (at > afterMs && isWanted(date, group.days ?? 127)) return at;
  }
  throw new Error(`no ${clock.hour}:${clock.minute} within nine days of ${new Date(afterMs).toISOString()} in "${group.timeZone}"`);
}

/** The local date that a brief asked for at an instant is about: once the legal day has ended, "this morning" is tomorrow's. */
export function judgedDate(site: Site, atMs: number): string {
  const today = localDate(atMs, site.timeZone);
  const legal = legalDay(site, today);
  return 'toMs' in legal && atMs > legal.toMs ? shiftDate(today, 1) : today;
}

/** What to ask a source for: the whole local day and an hour more on each side, on the hour. */
export function instantsAround(site: Site, date: string): { readonly fromMs: number; readonly toMs: number } {
  const day = localDay(date, site.timeZone);
  return { fromMs: Math.floor(day.fromMs / HOUR_MS) * HOUR_MS - HOUR_MS, toMs: Math.ceil(day.toMs / HOUR_MS) * HOUR_MS + HOUR_MS };
}
