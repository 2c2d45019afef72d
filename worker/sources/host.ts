/**
 * A forecast host as the adapters see it: a question in, an answer or a tagged failure out, one question at a time, with
 * the host's breaker in between. Made for one invocation; the breaker's state is read once and written when it changes.
 * A breaker that cannot be read or kept must not cost anyone their weather.
 */
import { afterFailure, afterSuccess, CLOSED, parseBreaker, permit, type BreakerState } from './breaker.ts';
import { safeFetch, type Answer, type Outside } from './safe-fetch.ts';
import type { SourceFailure } from '../../lib/forecast/failure.ts';
import { failure, type Result } from '../../lib/result.ts';
import { isoUtc } from '../../lib/time.ts';

/** Where breakers are kept between invocations, as texts that only this folder reads. */
export interface BreakerStore {
  get(host: string): Promise<string | null>;
  put(host: string, body: string, nowMs: number): Promise<void>;
}

export interface Host {
  readonly origin: string;
  readonly now: () => number;
  ask(path: string, headers?: Readonly<Record<string, string>>): Promise<Result<Answer, SourceFailure>>;
}

export function createHost(origin: string, outside: Outside & { readonly breakers: BreakerStore }): Host {
  let state: BreakerState | null = null;

  const keep = async (next: BreakerState): Promise<void> => {
    if (JSON.stringify(next) === JSON.stringify(state)) return;
    state = next;
    await outside.breakers.put(origin, JSON.stringify(next), outside.now()).catch(() => undefined);
  };

  return {
    origin,
    now: outside.now,
    async ask(path, headers = {}) {
      state ??= parseBreaker(await outside.breakers.get(origin).catch(() => null));
      const permission = permit(state, outside.now());
      if (!permission.allowed) return failure({ kind: 'breaker-open', until: isoUtc(permission.untilMs) });
      await keep(permission.state);
      const result = await safeFetch({ url: origin + path, origins: [origin], headers }, outside);
      await keep(result.ok ? afterSuccess() : afterFailure(state ?? CLOSED, result.error, outside.now()));
      return result;
    },
  };
}
