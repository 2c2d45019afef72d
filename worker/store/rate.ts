import type { Database, Statement } from './database.ts';

/** So many of something from one somebody in a stretch of time, counted for all isolates together. */
export interface RateRule {
  readonly most: number;
  readonly withinMs: number;
}

export function rateStore(db: Database) {
  return {
    /** Counts one; seconds to wait when it is one too many, else 0. A key holds no address, only a keyed hash of it. */
    async take(key: string, { most, withinMs }: RateRule, nowMs: number): Promise<number> {
      const sinceMs = Math.floor(nowMs / withinMs) * withinMs;
      const [row] = await db.take<{ count: number }>(
        'INSERT INTO rate (key, since, count) VALUES (?, ?, 1) ON CONFLICT (key, since) DO UPDATE SET count = count + 1 RETURNING count',
        key, sinceMs,
      );
      return (row?.count ?? 1) > most ? Math.ceil((sinceMs + withinMs - nowMs) / 1000) : 0;
    },
    /** Whether one more would be one too many; counts nothing. */
    async isUsedUp(key: string, { most, withinMs }: RateRule, nowMs: number): Promise<boolean> {
      const [row] = await db.read<{ count: number }>('SELECT count FROM rate WHERE key = ? AND since = ?', key, Math.floor(nowMs / withinMs) * withinMs);
      return (row?.count ?? 0) >= most;
    },
    /** No stretch is longer than a day. */
    dropOld(nowMs: number): Statement {
      return { sql: 'DELETE FROM rate WHERE since < ?', values: [nowMs - 24 * 3_600_000] };
    },
  };
}

export type RateStore = ReturnType<typeof rateStore>;
