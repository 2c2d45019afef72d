/**
 * When a source that asked for a pause may be asked again. A service empties its buckets on the full minute and need not
 * say which one is full, so that before the next full minute asking is of no use whatever it says. Anything else that went
 * wrong has had its second try by then: it does not get better by being asked once more this morning.
 */
import type { SourceFailure } from './failure.ts';
import { epochOf, MINUTE_MS } from '../time.ts';

/** Epoch ms; null for a failure that names no time. */
export function askAgainMs(failed: SourceFailure, nowMs: number): number | null {
  const nextMinuteMs = (Math.floor(nowMs / MINUTE_MS) + 1) * MINUTE_MS;
  if (failed.kind === 'rate-limited') return Math.max(nextMinuteMs, nowMs + (failed.retryAfterS ?? 0) * 1000);
  if (failed.kind !== 'breaker-open') return null;
  const untilMs = epochOf(failed.until);
  return Number.isFinite(untilMs) ? Math.max(untilMs, nowMs + 1000) : null;
}
