import type { Database } from './database.ts';

/** The state of a source's circuit breaker, as JSON that only worker/sources reads. */
export function breakerStore(db: Database) {
  return {
    async get(source: string): Promise<string | null> {
      const [row] = await db.read<{ body: string }>('SELECT body FROM breaker WHERE source = ?', source);
      return row?.body ?? null;
    },
    async put(source: string, body: string, nowMs: number): Promise<void> {
      const sql = `INSERT INTO breaker (source, body, stored_at) VALUES (?, ?, ?)
        ON CONFLICT (source) DO UPDATE SET body = excluded.body, stored_at = excluded.stored_at`;
      await db.write(sql, source, body, nowMs);
    },
  };
}

export type BreakerStore = ReturnType<typeof breakerStore>;
