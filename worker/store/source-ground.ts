import type { Database, Statement } from './database.ts';

interface Row {
  readonly source: string;
  readonly groundM: number;
}

export interface Ground extends Row {
  readonly siteId: string;
}

/** The stored ground is read anew after so long. */
const REREAD_AFTER_MS = 30 * 24 * 3_600_000;

/** The model's ground that a source gave for a site: a jump away from it means another grid point. */
export function sourceGroundStore(db: Database) {
  return {
    async ofSite(siteId: string): Promise<Readonly<Record<string, number>>> {
      const rows = await db.read<Row>('SELECT source, ground_m AS groundM FROM source_ground WHERE site_id = ?', siteId);
      return Object.fromEntries(rows.map((row) => [row.source, row.groundM]));
    },
    /**
     * Stores what is new, and once a month reads anew what is known. A jump never becomes the new normal by happening,
     * however long it lasts: the source has no vote until the site is handed in again, which forgets its grounds.
     */
    keep(grounds: readonly Ground[], toleranceM: number, nowMs: number): Statement {
      return {
        sql: `INSERT INTO source_ground (site_id, source, ground_m, stored_at)
          SELECT value ->> 'siteId', value ->> 'source', value ->> 'groundM', ?2 FROM json_each(?1) WHERE true
          ON CONFLICT (site_id, source) DO UPDATE SET ground_m = excluded.ground_m, stored_at = excluded.stored_at
            WHERE stored_at <= ?2 - ${REREAD_AFTER_MS} AND ABS(ground_m - excluded.ground_m) <= ?3`,
        values: [JSON.stringify(grounds), nowMs, toleranceM],
      };
    },
    /** Those that lie too far from what is stored, by how much. */
    moved(grounds: readonly Ground[], toleranceM: number): Promise<{ readonly siteId: string; readonly source: string; readonly byM: number }[]> {
      return db.read(
        `SELECT g.site_id AS siteId, g.source, CAST(ROUND(ABS(g.ground_m - (j.value ->> 'groundM'))) AS INTEGER) AS byM
          FROM json_each(?1) AS j JOIN source_ground AS g ON g.site_id = j.value ->> 'siteId' AND g.source = j.value ->> 'source'
          WHERE ABS(g.ground_m - (j.value ->> 'groundM')) > ?2 ORDER BY 1`,
        JSON.stringify(grounds), toleranceM,
      );
    },
  };
}

export type SourceGroundStore = ReturnType<typeof sourceGroundStore>;
