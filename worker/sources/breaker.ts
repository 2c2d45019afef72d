/**
 * A circuit breaker for each host: five failures within a minute, or one hang, open it; after half a minute one probe may pass, and
 * each probe that fails doubles the wait, up to ten minutes. A host that says 429 is left alone at least until its next
 * full minute. Pure: state and time in, state out.
 */
import { isOfTheHost, type SourceFailure } from '../../lib/forecast/failure.ts';

export interface BreakerState {
  /** Failures of the last minute, epoch ms. */
  readonly failuresMs: readonly number[];
  /** Nothing passes before this; null when closed. */
  readonly openUntilMs: number | null;
  /** How long the next failed probe keeps it open. */
  readonly waitMs: number;
  /** When the probe that is under way began. */
  readonly probeMs: number | null;
}

export const CLOSED: BreakerState = { failuresMs: [], openUntilMs: null, waitMs: 30_000, probeMs: null };

const FAILURES_TO_OPEN = 5;
const WINDOW_MS = 60_000;
const LONGEST_WAIT_MS = 600_000;
/** A probe that has not reported after this has died with its process. */
const PROBE_LOST_MS = 60_000;
const LONGEST_RATE_LIMIT_MS = 24 * 3_600_000;

export type Permit = { readonly allowed: true; readonly state: BreakerState } | { readonly allowed: false; readonly untilMs: number };

export function permit(state: BreakerState, nowMs: number): Permit {
  if (state.openUntilMs === null) return { allowed: true, state };
  if (nowMs < state.openUntilMs) return { allowed: false, untilMs: state.openUntilMs };
  if (state.probeMs !== null && nowMs < state.probeMs + PROBE_LOST_MS) return { allowed: false, untilMs: state.probeMs + PROBE_LOST_MS };
  return { allowed: true, state: { ...state, probeMs: nowMs } };
}

export function afterSuccess(): BreakerState {
  return CLOSED;
}

export function afterFailure(state: BreakerState, failed: SourceFailure, nowMs: number): BreakerState {
  if (failed.kind === 'rate-limited') return afterRateLimit(state, failed.retryAfterS, nowMs);
  if (!isOfTheHost(failed)) return state.openUntilMs === null ? state : CLOSED;
  if (state.probeMs !== null) return opened(state, nowMs, Math.min(state.waitMs * 2, LONGEST_WAIT_MS));
  const failuresMs = [...state.failuresMs.filter((at) => at > nowMs - WINDOW_MS), nowMs];
  // A hang has taken more of a morning than five quick failures: nobody else waits for this host before it has been probed.
  const isOver = failed.kind === 'timeout' || failuresMs.length >= FAILURES_TO_OPEN;
  return isOver ? opened(state, nowMs, CLOSED.waitMs) : { ...state, failuresMs };
}

function opened(state: BreakerState, nowMs: number, waitMs: number): BreakerState {
  return { ...state, failuresMs: [], openUntilMs: nowMs + waitMs, waitMs, probeMs: null };
}

/** Their buckets are emptied on the full minute, hour and day; they do not say which one is full. */
function afterRateLimit(state: BreakerState, retryAfterS: number | null, nowMs: number): BreakerState {
  const nextMinuteMs = (Math.floor(nowMs / 60_000) + 1) * 60_000 - nowMs;
  const waitMs = state.probeMs === null ? CLOSED.waitMs : Math.min(state.waitMs * 2, LONGEST_WAIT_MS);
  const askedMs = Math.min((retryAfterS ?? 0) * 1000, LONGEST_RATE_LIMIT_MS);
  return { ...opened(state, nowMs, waitMs), openUntilMs: nowMs + Math.max(nextMinuteMs, askedMs, state.probeMs === null ? 0 : waitMs) };
}

/** The state as it is stored; anything that is not one is a closed breaker. */
export function parseBreaker(body: string | null): BreakerState {
  if (body === null) return CLOSED;
  try {
    const found = JSON.parse(body) as Partial<BreakerState> | null;
    const isTime = (value: unknown): boolean => value === null || typeof value === 'number';
    const isState = Array.isArray(found?.failuresMs) && isTime(found.openUntilMs) && isTime(found.probeMs) && typeof found.waitMs === 'number';
    return isState ? (found as BreakerState) : CLOSED;
  } catch {
    return CLOSED;
  }
}
