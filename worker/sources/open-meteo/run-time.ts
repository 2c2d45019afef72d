/**
 * When the run behind an answer was initialised, from the service's meta.json. Its servers agree on a new run only ten
 * minutes after it became available: before that the answer may still be, or be mixed with, the run before, so the age
 * counts from that one.
 */
import { fieldOf } from '../values.ts';
import { isoUtc } from '../../../lib/time.ts';

const SETTLED_AFTER_S = 600;
/** 2000 to 2100, in unix seconds. */
const [EARLIEST_S, LATEST_S] = [946_684_800, 4_102_444_800];

/** ISO 8601 UTC; null when the file does not say. */
export function runAtOf(meta: unknown, nowMs: number): string | null {
  const runS = secondsOf(meta, 'last_run_initialisation_time');
  const availableS = secondsOf(meta, 'last_run_availability_time');
  if (runS === null || availableS === null) return null;
  // A run ahead of our clock is told as it is: the frame refuses it, and nothing before it may stand in for it.
  const isSettled = nowMs / 1000 >= availableS + SETTLED_AFTER_S || runS * 1000 > nowMs;
  if (isSettled) return isoUtc(runS * 1000);
  const intervalS = fieldOf(meta, 'update_interval_seconds');
  const isInterval = typeof intervalS === 'number' && intervalS > 0 && intervalS <= 86_400;
  return isInterval ? isoUtc((runS - intervalS) * 1000) : null;
}

function secondsOf(meta: unknown, name: string): number | null {
  const value = fieldOf(meta, name);
  return typeof value === 'number' && Number.isInteger(value) && value >= EARLIEST_S && value <= LATEST_S ? value : null;
}

/** The older of several runs, when one answer is made from several; null when any of them is unknown. */
export function olderRun(runs: readonly (string | null)[]): string | null {
  const known = runs.filter((run) => run !== null).sort();
  return known.length === runs.length ? (known[0] ?? null) : null;
}
