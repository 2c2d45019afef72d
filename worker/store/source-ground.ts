import type { Database, Statement } from './database.ts';

interface Row {
  readonly source: string;
  readonly groundM: number;
}

/** The model's ground that a source first gave for a site: a jump away from it means another grid point. */
export function sourceGroundStore(db: Database) {
  return {
    async ofSite(siteId: string): Promise<Readonly<Record<string, number>>> {
      const rows = await db.read<Row>('SELECT source, ground_m AS groundM FROM source_ground WHERE site_id = ?', siteId);
      return Object.fromEntries(rows.map((row) => [row.source, row.groundM]));
    },
    /** Keeps what is there: a jump must not become the new normal by happening. */
    keepFirst(grounds: readonly { readonly siteId: string; readonly source: string; readonly groundM: number }[], nowMs: number): Statement {
      return {
        sql: `INSERT OR IGNORE INTO source_ground (site_id, source, ground_m, stored_at)
          SELECT value ->> 'siteId', value ->> 'source', value ->> 'groundM', ?2 FROM json_each(?1)`,
        values: [JSON.stringify(grounds), nowMs],
      };
    },
  };
}

export type SourceGroundStore = ReturnType<typeof sourceGroundStore>;
