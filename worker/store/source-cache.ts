import type { Database, Statement } from './database.ts';

/** Small answers of providers that may be kept (run times, grid points), under a key that begins with their origin. */
export function sourceCacheStore(db: Database) {
  return {
    async get(key: string, nowMs: number): Promise<{ readonly body: string; readonly storedAtMs: number } | null> {
      const sql = 'SELECT body, stored_at AS storedAtMs FROM source_cache WHERE key = ? AND expires_at > ?';
      const [row] = await db.read<{ body: string; storedAtMs: number }>(sql, key, nowMs);
      return row ?? null;
    },
    async put(key: string, entry: { readonly body: string; readonly expiresAtMs: number }, nowMs: number): Promise<void> {
      const sql = `INSERT INTO source_cache (key, body, stored_at, expires_at) VALUES (?, ?, ?, ?)
        ON CONFLICT (key) DO UPDATE SET body = excluded.body, stored_at = excluded.stored_at, expires_at = excluded.expires_at`;
      await db.write(sql, key, entry.body, nowMs, entry.expiresAtMs);
    },
    dropExpired(nowMs: number): Statement {
      return { sql: 'DELETE FROM source_cache WHERE expires_at <= ?', values: [nowMs] };
    },
  };
}

export type SourceCacheStore = ReturnType<typeof sourceCacheStore>;
