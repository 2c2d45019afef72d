/**
 * A forecast host as the adapters see it: a question in, an answer or a tagged failure out, one question at a time, with
 * the host's breaker and quota in between. Made for one invocation; the breaker's state is read once and written when it changes.
 * A breaker that cannot be read or kept must not cost anyone their weather.
 */
import { afterFailure, afterSuccess, CLOSED, parseBreaker, permit, type BreakerState } from './breaker.ts';
import { afterUse, fullUntilMs, parseUsage, type Quota, type Usage } from './quota.ts';
import { isWorthAnotherTry, safeFetch, type Answer, type Outside } from './safe-fetch.ts';
import type { SourceFailure } from '../../lib/forecast/failure.ts';
import { failure, type Result } from '../../lib/result.ts';
import { isoUtc } from '../../lib/time.ts';

/** Where breakers are kept between invocations, as texts that only this folder reads. */
export interface BreakerStore {
  get(host: string): Promise<string | null>;
  put(host: string, body: string, nowMs: number): Promise<void>;
}

export interface HostQuestion {
  readonly path: string;
  readonly headers?: Readonly<Record<string, string>>;
  /** What it costs of the host's quota; 0 where nothing is counted. */
  readonly weight?: number;
}

export interface Host {
  readonly origin: string;
  readonly now: () => number;
  ask(question: HostQuestion): Promise<Result<Answer, SourceFailure>>;
}

/** A quota that several hosts may share, counted under one name. */
export interface SharedQuota {
  readonly name: string;
  readonly quota: Quota;
}

/** Two tries that failed are two failures. */
function afterTries(state: BreakerState, failed: SourceFailure, nowMs: number): BreakerState {
  const once = afterFailure(state, failed, nowMs);
  const isOpened = once.openUntilMs !== null && once.openUntilMs > nowMs;
  return isWorthAnotherTry(failed) && !isOpened ? afterFailure(once, failed, nowMs) : once;
}

export function createHost(origin: string, outside: Outside & { readonly breakers: BreakerStore }, shared: SharedQuota | null = null): Host {
  let state: BreakerState | null = null;

  /** Refuses what would overflow a bucket, as the service would, without asking it; else counts it. */
  const counted = async (weight: number): Promise<SourceFailure | null> => {
    if (shared === null || weight === 0) return null;
    const nowMs = outside.now();
    const usage: Usage = parseUsage(await outside.breakers.get(shared.name).catch(() => null));
    const untilMs = fullUntilMs(usage, shared.quota, { atMs: nowMs, weight });
    if (untilMs !== null) return { kind: 'rate-limited', retryAfterS: Math.ceil((untilMs - nowMs) / 1000) };
    await outside.breakers.put(shared.name, JSON.stringify(afterUse(usage, { atMs: nowMs, weight })), nowMs).catch(() => undefined);
    return null;
  };

  const keep = async (next: BreakerState): Promise<void> => {
    if (JSON.stringify(next) === JSON.stringify(state)) return;
    state = next;
    await outside.breakers.put(origin, JSON.stringify(next), outside.now()).catch(() => undefined);
  };

  return {
    origin,
    now: outside.now,
    async ask({ path, headers = {}, weight = 0 }) {
      state ??= parseBreaker(await outside.breakers.get(origin).catch(() => null));
      const permission = permit(state, outside.now());
      if (!permission.allowed) return failure({ kind: 'breaker-open', until: isoUtc(permission.untilMs) });
      const refusal = await counted(weight);
      if (refusal !== null) return failure(refusal);
      await keep(permission.state);
      const result = await safeFetch({ url: origin + path, origins: [origin], headers }, outside);
      await keep(result.ok ? afterSuccess() : afterTries(state ?? CLOSED, result.error, outside.now()));
      return result;
    },
  };
}
