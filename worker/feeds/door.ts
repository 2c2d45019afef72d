/**
 * What stands before the feeds: whoever polls too often waits, and what was made is given again for a minute, so that a
 * storm of polls is one reading of the database. A feed that was revoked is found out when it is made the next time.
 */
import { limiter } from '../routes/limiter.ts';

/** Of one token; a calendar asks every quarter of an hour at most. */
const MOST_A_MINUTE = 30;
export const KEPT_MS = 60_000;
const WAITS = { most: 100, ms: 50 };

/** A feed as it was made; without a body where its token leads nowhere. */
export interface MadeFeed {
  readonly body: string | null;
  readonly etag: string;
  readonly untilMs: number;
}

export interface FeedDoor {
  /** Seconds to wait, or 0. */
  take(key: string, nowMs: number): number;
  made(key: string, nowMs: number, make: () => Promise<MadeFeed>): Promise<MadeFeed>;
}

/** `key`: an address with a hash of what was asked for, never the token in it. `cache`: shared by the isolates of a data centre; null keeps nothing. */
export function feedDoor(cache: Pick<Cache, 'match' | 'put'> | null, sleep: (ms: number) => Promise<void>): FeedDoor {
  const perMinute = limiter(MOST_A_MINUTE);
  const making = new Set<string>();

  async function kept(key: string, nowMs: number): Promise<MadeFeed | null> {
    const found = await (await cache?.match(key))?.json<MadeFeed>();
    return found !== undefined && found.untilMs > nowMs && found.untilMs <= nowMs + KEPT_MS ? found : null;
  }

  return {
    take: (key, nowMs) => perMinute.take(key, nowMs),
    async made(key, nowMs, make) {
      // Those that come while it is being made wait for what the first of them puts down.
      for (let wait = 0; ; wait += 1) {
        const found = await kept(key, nowMs);
        if (found !== null) return found;
        if (!making.has(key) || wait === WAITS.most) break;
        await sleep(WAITS.ms);
      }
      making.add(key);
      try {
        const made = await make();
        await cache?.put(key, Response.json(made, { headers: { 'cache-control': `max-age=${KEPT_MS / 1000}` } }));
        return made;
      } finally {
        making.delete(key);
      }
    },
  };
}
