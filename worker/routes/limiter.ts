/** So many requests a minute from one address. Counted in one isolate: a brake against floods, not an account of use. */
export interface Limiter {
  /** Seconds to wait, or 0. */
  take(who: string, nowMs: number): number;
}

const WINDOW_MS = 60_000;
const MOST_ADDRESSES = 10_000;

export function limiter(perMinute: number): Limiter {
  const counts = new Map<string, { sinceMs: number; count: number }>();
  return {
    take(who, nowMs) {
      const found = counts.get(who);
      if (found === undefined || nowMs - found.sinceMs >= WINDOW_MS) {
        if (counts.size >= MOST_ADDRESSES) counts.clear();
        counts.set(who, { sinceMs: nowMs, count: 1 });
        return 0;
      }
      found.count += 1;
      return found.count > perMinute ? Math.ceil((found.sinceMs + WINDOW_MS - nowMs) / 1000) : 0;
    },
  };
}
