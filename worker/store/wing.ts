import type { Database, Statement } from './database.ts';

export interface StoredWing {
  /** `EN B`, or `own-<hash>` for a wing with its own figures. */
  readonly key: string;
  readonly name: string;
  readonly body: string;
}

export function wingStore(db: Database) {
  return {
    all(): Promise<StoredWing[]> {
      return db.read<StoredWing>('SELECT key, name, body FROM wing ORDER BY key');
    },
    some(keys: readonly string[]): Promise<StoredWing[]> {
      return db.read<StoredWing>('SELECT key, name, body FROM wing WHERE key IN (SELECT value FROM json_each(?))', JSON.stringify(keys));
    },
    put(wings: readonly StoredWing[]): Statement {
      return {
        sql: `INSERT INTO wing (key, name, body)
          SELECT value ->> 'key', value ->> 'name', value ->> 'body' FROM json_each(?) WHERE true
          ON CONFLICT (key) DO UPDATE SET name = excluded.name, body = excluded.body`,
        values: [JSON.stringify(wings)],
      };
    },
  };
}

export type WingStore = ReturnType<typeof wingStore>;
