import type { SheetChange } from '../../lib/config/sheet-change.ts';
import type { Database, Statement } from './database.ts';
import type { StoredSheet } from './sheet.ts';

/** What a version of a sheet changed against the one before it, and whether anything in it loosens. */
export interface StoredSheetChange {
  readonly sheetId: string;
  readonly version: number;
  readonly against: number | null;
  readonly changes: readonly SheetChange[];
  readonly storedAtMs: number;
}

interface Row extends Omit<StoredSheetChange, 'changes'> {
  readonly changes: string;
}

const COLUMNS = 'sheet_id AS sheetId, version, against, changes, stored_at AS storedAtMs';

function stored(row: Row): StoredSheetChange {
  return { ...row, changes: JSON.parse(row.changes) as SheetChange[] };
}

export function sheetHistoryStore(db: Database) {
  return {
    add(change: StoredSheetChange): Statement {
      return {
        sql: 'INSERT OR REPLACE INTO sheet_change (sheet_id, version, against, changes, loosens, stored_at) VALUES (?, ?, ?, ?, ?, ?)',
        values: [change.sheetId, change.version, change.against, JSON.stringify(change.changes), change.changes.some(({ loosens }) => loosens) ? 1 : 0, change.storedAtMs],
      };
    },
    /** Shipped sheets that have no row yet: a brief is held to a row. */
    putNew(sheets: readonly StoredSheet[], nowMs: number): Statement {
      return {
        sql: `INSERT OR IGNORE INTO sheet (id, version, body, stored_at)
          SELECT value ->> 'id', value ->> 'version', value ->> 'body', ?2 FROM json_each(?1)
          WHERE NOT EXISTS (SELECT 1 FROM sheet AS s WHERE s.id = value ->> 'id')`,
        values: [JSON.stringify(sheets), nowMs],
      };
    },
    async of(sheetId: string): Promise<StoredSheetChange[]> {
      return (await db.read<Row>(`SELECT ${COLUMNS} FROM sheet_change WHERE sheet_id = ? ORDER BY version DESC LIMIT 100`, sheetId)).map(stored);
    },
    /** What was loosened since then in any of these sheets. */
    async loosened(sheetIds: readonly string[], sinceMs: number): Promise<StoredSheetChange[]> {
      const sql = `SELECT ${COLUMNS} FROM sheet_change WHERE loosens = 1 AND stored_at > ? AND sheet_id IN (SELECT value FROM json_each(?)) ORDER BY sheet_id, version`;
      return (await db.read<Row>(sql, sinceMs, JSON.stringify(sheetIds))).map(stored);
    },
  };
}

export type SheetHistoryStore = ReturnType<typeof sheetHistoryStore>;
