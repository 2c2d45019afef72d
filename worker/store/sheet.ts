import type { Database, Statement } from './database.ts';

export interface StoredSheet {
  readonly id: string;
  readonly version: number;
  readonly body: string;
}

/** The newest version of every sheet. */
const NEWEST = `SELECT id, version, body FROM sheet AS s
  WHERE version = (SELECT MAX(version) FROM sheet AS newer WHERE newer.id = s.id)`;

export function sheetStore(db: Database) {
  return {
    newest(): Promise<StoredSheet[]> {
      return db.read<StoredSheet>(`${NEWEST} ORDER BY id`);
    },
    newestOf(ids: readonly string[]): Promise<StoredSheet[]> {
      return db.read<StoredSheet>(`${NEWEST} AND id IN (SELECT value FROM json_each(?)) ORDER BY id`, JSON.stringify(ids));
    },
    /** A sheet of the same id and version is replaced: raise the version to keep what earlier briefs were held to. */
    put(sheets: readonly StoredSheet[], nowMs: number): Statement {
      return {
        sql: `INSERT INTO sheet (id, version, body, stored_at)
          SELECT value ->> 'id', value ->> 'version', value ->> 'body', ?2 FROM json_each(?1) WHERE true
          ON CONFLICT (id, version) DO UPDATE SET body = excluded.body, stored_at = excluded.stored_at`,
        values: [JSON.stringify(sheets), nowMs],
      };
    },
  };
}

export type SheetStore = ReturnType<typeof sheetStore>;
