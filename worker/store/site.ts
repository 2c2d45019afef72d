import type { Database, Statement } from './database.ts';

/** A site as it was handed in: a GeoJSON feature. lib/config turns it into a Site each time it is read. */
export interface StoredSite {
  readonly id: string;
  readonly feature: string;
  readonly demo: boolean;
  /** When it was handed in: magnetic headings are turned to true as of then. */
  readonly storedAtMs: number;
}

interface Row {
  readonly id: string;
  readonly feature: string;
  readonly demo: number;
  readonly storedAtMs: number;
}

const COLUMNS = 'id, feature, demo, stored_at AS storedAtMs';

function stored(row: Row): StoredSite {
  return { ...row, demo: row.demo === 1 };
}

export function siteStore(db: Database) {
  return {
    async all(): Promise<StoredSite[]> {
      return (await db.read<Row>(`SELECT ${COLUMNS} FROM site WHERE retired_at IS NULL ORDER BY id`)).map(stored);
    },
    async some(ids: readonly string[]): Promise<StoredSite[]> {
      const sql = `SELECT ${COLUMNS} FROM site WHERE retired_at IS NULL AND id IN (SELECT value FROM json_each(?)) ORDER BY id`;
      return (await db.read<Row>(sql, JSON.stringify(ids))).map(stored);
    },
    /** These are the sites from now on; others are retired, their briefs stay. What was fetched for one that is another now is of another place. */
    replaceAll(sites: readonly Omit<StoredSite, 'storedAtMs'>[], nowMs: number): Statement[] {
      const list = JSON.stringify(sites.map((site) => ({ ...site, demo: site.demo ? 1 : 0 })));
      const changed = `(SELECT s.id FROM site AS s JOIN json_each(?1) AS j ON j.value ->> 'id' = s.id WHERE s.feature <> j.value ->> 'feature')`;
      return [
        { sql: `DELETE FROM source_ground WHERE site_id IN ${changed}`, values: [list] },
        { sql: `UPDATE run SET outcome = NULL, finished_at = 0 WHERE step = 'fetch' AND state <> 'wanted' AND site_id IN ${changed}`, values: [list] },
        {
          sql: `INSERT INTO site (id, feature, demo, stored_at)
            SELECT value ->> 'id', value ->> 'feature', value ->> 'demo', ?2 FROM json_each(?1) WHERE true
            ON CONFLICT (id) DO UPDATE SET feature = excluded.feature, demo = excluded.demo, retired_at = NULL,
              stored_at = CASE feature WHEN excluded.feature THEN stored_at ELSE excluded.stored_at END`,
          values: [list, nowMs],
        },
        {
          sql: `UPDATE site SET retired_at = ?2 WHERE retired_at IS NULL AND id NOT IN (SELECT value ->> 'id' FROM json_each(?1))`,
          values: [list, nowMs],
        },
      ];
    },
  };
}

export type SiteStore = ReturnType<typeof siteStore>;
