/** The time stamps of a series: hourly, on the hour, UTC, rising, each once. Never interpolated, never repaired. */
import type { SourceFailure } from './failure.ts';
import { HOUR_MS } from '../time.ts';

export type TimesFault = Extract<SourceFailure, { kind: 'times' }>['why'];

/** What is wrong with stamps given in epoch ms (NaN: one that is not a UTC instant), null when nothing is. */
export function timesFault(stampsMs: readonly number[]): TimesFault | null {
  if (stampsMs.length === 0) return 'empty';
  const gaps: number[] = [];
  let previous: number | null = null;
  for (const stamp of stampsMs) {
    if (!Number.isFinite(stamp)) return 'not-utc';
    if (stamp % HOUR_MS !== 0) return 'not-hourly';
    if (previous !== null) {
      if (stamp === previous) return 'duplicate';
      if (stamp < previous) return 'unsorted';
      gaps.push(stamp - previous);
    }
    previous = stamp;
  }
  return isHourly(gaps) ? null : 'not-hourly';
}

/** A hole costs its hours; a series whose usual step is longer than an hour is another kind of series. */
function isHourly(gaps: readonly number[]): boolean {
  const inOrder = [...gaps].sort((a, b) => a - b);
  const median = inOrder[Math.floor((inOrder.length - 1) / 2)] ?? HOUR_MS;
  return median <= HOUR_MS;
}
