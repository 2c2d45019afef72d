/**
 * How old a forecast may be. Age counts from the model run, not from the fetch: a fresh copy of an old run is old.
 * Bounds: design "Ages": refused over 18 h, said over 12 h, refetched over 3 h after the fetch, a run at most 1 h ahead of
 * our clock. Runs come every 3 to 6 h and reach us 2 to 8 h later, so that 18 h tolerates one missed run.
 */
import { epochOf, HOUR_MS } from '../time.ts';

export const MAX_RUN_AGE_H = 18;
const SAID_RUN_AGE_H = 12;
const REFETCH_AFTER_H = 3;
export const MAX_RUN_AHEAD_H = 1;

/** Hours from the model run to `now` (ISO 8601 UTC), negative for a run ahead of it; null when there is no run time. */
export function runAgeHours(runAt: string | null, now: string): number | null {
  if (runAt === null) return null;
  const hours = (epochOf(now) - epochOf(runAt)) / HOUR_MS;
  return Number.isFinite(hours) ? hours : null;
}

/** Whether the age must be said beside everything computed from it. */
export function isAgeSaid(ageHours: number): boolean {
  return ageHours > SAID_RUN_AGE_H;
}

/** Whether a fetch is too long ago to make a brief from without asking again; an unreadable time is. */
export function needsRefetch(fetchedAt: string, now: string): boolean {
  const hours = (epochOf(now) - epochOf(fetchedAt)) / HOUR_MS;
  return Number.isFinite(hours) ? hours > REFETCH_AFTER_H : true;
}
