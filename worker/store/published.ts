import type { Database, Statement } from './database.ts';

/** What a brief is computed for, besides the day: a site, a wing and a sheet. */
export interface Pair {
  readonly siteId: string;
  readonly wingKey: string;
  readonly sheetId: string;
}

/** The pairs that the operator shows on the board. */
export function publishedStore(db: Database) {
  return {
    all(): Promise<Pair[]> {
      return db.read<Pair>(`SELECT p.site_id AS siteId, p.wing_key AS wingKey, p.sheet_id AS sheetId FROM published AS p
        JOIN site ON site.id = p.site_id AND site.retired_at IS NULL ORDER BY p.site_id, p.wing_key, p.sheet_id`);
    },
    replaceAll(pairs: readonly Pair[]): Statement[] {
      return [
        { sql: 'DELETE FROM published', values: [] },
        {
          sql: `INSERT OR IGNORE INTO published (site_id, wing_key, sheet_id)
            SELECT value ->> 'siteId', value ->> 'wingKey', value ->> 'sheetId' FROM json_each(?)`,
          values: [JSON.stringify(pairs)],
        },
      ];
    },
  };
}

export type PublishedStore = ReturnType<typeof publishedStore>;
