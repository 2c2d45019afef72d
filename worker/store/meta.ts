import type { Database, Statement } from './database.ts';

/** The number of the newest migration that this code was written for; each migration writes its own. */
export const SCHEMA_VERSION = 54;

/** What is wrong with a database of this schema; null when this code can use it. Newer tables serve older code: migrations only add. */
export function schemaProblem(schema: string | undefined): string | null {
  if (Number(schema) >= SCHEMA_VERSION) return null;
  return `the database has schema ${schema ?? 'none'}, this code needs ${SCHEMA_VERSION}: apply the migrations`;
}

export type MetaKey = 'schema' | 'last-tick' | 'last-fetch' | 'last-assess' | 'last-deliver' | 'last-sweep' | 'last-tidy'
  | 'last-recheck' | 'last-notice' | 'last-self-test' | 'judge-fault' | 'clock-fault' | 'last-absent' | 'last-weekly-test' | 'last-heartbeat' | 'last-balance' | 'canary';

export function metaStore(db: Database) {
  return {
    async all(): Promise<ReadonlyMap<string, string>> {
      const rows = await db.read<{ key: string; value: string }>('SELECT key, value FROM meta');
      return new Map(rows.map((row) => [row.key, row.value]));
    },
    set(key: MetaKey, value: string): Promise<number> {
      return db.write(setting(key, value).sql, ...setting(key, value).values);
    },
    setting,
  };
}

function setting(key: MetaKey, value: string): Statement {
  return { sql: 'INSERT INTO meta (key, value) VALUES (?, ?) ON CONFLICT (key) DO UPDATE SET value = excluded.value', values: [key, value] };
}

export type MetaStore = ReturnType<typeof metaStore>;
