import type { BreakerStore } from '../../store/breaker.ts';
import type { LogStore } from '../../store/log.ts';
import type { Quarrels } from './push.ts';

/** Quarrels with push services, kept beside the breakers of the forecast hosts and remembered for one invocation. */
export function storedQuarrels(stores: { readonly breaker: BreakerStore; readonly log: LogStore }): Quarrels {
  const known = new Map<string, Promise<number | null>>();
  const keyOf = (origin: string): string => `push ${origin}`;
  const read = async (origin: string): Promise<number | null> => {
    const untilMs = Number(await stores.breaker.get(keyOf(origin)));
    return untilMs > 0 ? untilMs : null;
  };
  return {
    untilMs(origin) {
      const found = known.get(origin) ?? read(origin);
      known.set(origin, found);
      return found;
    },
    async begin(origin, untilMs, nowMs) {
      // Sends that were side by side are one quarrel.
      if (((await known.get(origin)) ?? 0) > nowMs) return;
      known.set(origin, Promise.resolve(untilMs));
      await stores.breaker.put(keyOf(origin), String(untilMs), nowMs);
      await stores.log.write([{ level: 'error', step: 'deliver', event: 'push-service-refuses-us', detail: { origin } }], nowMs);
    },
  };
}
