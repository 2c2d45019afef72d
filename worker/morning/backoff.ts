import { MINUTE_MS } from '../../lib/time.ts';

/** Waits before the next attempt, after the first, second, ... has failed: seven attempts within an hour and a quarter. */
const WAITS_MS = [15_000, MINUTE_MS, 3 * MINUTE_MS, 8 * MINUTE_MS, 20 * MINUTE_MS, 45 * MINUTE_MS] as const;

export type NextAttempt = { readonly atMs: number } | { readonly never: 'given up' | 'too late' };

export interface FailedAttempt {
  readonly nowMs: number;
  /** Attempts so far. */
  readonly attempts: number;
  readonly validUntilMs: number;
  /** What the receiver asked for, by Retry-After. */
  readonly afterMs: number | null;
  /** 0 to 1. */
  readonly random: number;
}

/**
 * Full jitter: anywhere between at once and the whole wait, so that what failed together does not come back together; what
 * the receiver asks for comes before that, and the end of the message's time cuts it short. A receiver that says when to
 * come back is not given up for being busy, however often: only time ends that.
 */
export function nextAttempt({ nowMs, attempts, validUntilMs, afterMs, random }: FailedAttempt): NextAttempt {
  const waitMs = WAITS_MS[attempts - 1] ?? (afterMs === null ? undefined : WAITS_MS[5]);
  if (waitMs === undefined) return { never: 'given up' };
  const earliestMs = nowMs + (afterMs ?? 0);
  const leftMs = validUntilMs - earliestMs;
  return leftMs > 0 ? { atMs: earliestMs + Math.floor(Math.min(waitMs, leftMs) * random) } : { never: 'too late' };
}
