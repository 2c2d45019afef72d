import type { PairDay } from './brief.ts';
import type { Database, Statement } from './database.ts';
import { FETCHED, free } from './run-work.ts';

export interface WantedFetch {
  readonly siteId: string;
  readonly localDate: string;
  readonly source: string;
  readonly dueAtMs: number;
  /** Place of the source in the order in which they are asked. */
  readonly position: number;
}

export interface WantedAssess extends PairDay {
  readonly dueAtMs: number;
  /** From then on it is judged with what there is. */
  readonly startByMs: number;
}

/** Longer than a queue may hold a message, so that a late one finds its work done. */
const KEPT_MS = 15 * 24 * 3_600_000;

export function fetchKey(run: { readonly siteId: string; readonly localDate: string; readonly source: string }): string {
  return `fetch|${run.source}|${run.siteId}|${run.localDate}`;
}

export function assessKey(pair: PairDay): string {
  return `assess|${pair.siteId}|${pair.localDate}|${pair.wingKey}|${pair.sheetId}`;
}

const WANT = (columns: string, values: string, step: string): string => `INSERT INTO run (key, step, site_id, local_date, ${columns},
    due_at, start_by, state, next_attempt_at)
  SELECT value ->> 'key', '${step}', value ->> 'siteId', value ->> 'localDate', ${values}, value ->> 'dueAtMs', value ->> 'startByMs', 'wanted', 0
  FROM json_each(?) WHERE true
  ON CONFLICT (key) DO UPDATE SET
    due_at = CASE state WHEN 'wanted' THEN MIN(due_at, excluded.due_at) ELSE excluded.due_at END,
    start_by = CASE state WHEN 'wanted' THEN MIN(start_by, excluded.start_by) ELSE excluded.start_by END,
    attempts = CASE state WHEN 'wanted' THEN attempts ELSE 0 END,
    next_attempt_at = CASE state WHEN 'wanted' THEN next_attempt_at ELSE 0 END,
    state = 'wanted'`;

export function runStore(db: Database) {
  return {
    /** Notes that a tick has begun; false when it had been noted before. */
    async beginTick(scheduledAtMs: number, nowMs: number): Promise<boolean> {
      const sql = `INSERT INTO run (key, step, due_at, start_by, state, next_attempt_at, finished_at)
        VALUES ('tick|' || ?1, 'tick', ?1, ?1, 'done', 0, ?2) ON CONFLICT (key) DO NOTHING RETURNING key`;
      return (await db.take(sql, scheduledAtMs, nowMs)).length > 0;
    },
    /** Fetches that ended well or badly no longer ago than they may be used. */
    async fresh(siteDays: readonly { readonly siteId: string; readonly localDate: string }[], since: { readonly goodMs: number; readonly failedMs: number }): Promise<ReadonlySet<string>> {
      const sql = `SELECT r.key FROM json_each(?1) AS j JOIN run AS r ON r.site_id = j.value ->> 'siteId' AND r.local_date = j.value ->> 'localDate'
        WHERE r.step = 'fetch' AND (r.state = 'wanted' OR r.finished_at >= CASE r.outcome ->> 'ok' WHEN 1 THEN ?2 ELSE ?3 END)`;
      const rows = await db.read<{ key: string }>(sql, JSON.stringify(siteDays), since.goodMs, since.failedMs);
      return new Set(rows.map((row) => row.key));
    },
    wantFetches(wanted: readonly WantedFetch[]): Statement {
      const list = wanted.map((item) => ({ ...item, startByMs: item.dueAtMs + item.position, key: fetchKey(item) }));
      return { sql: WANT('source', `value ->> 'source'`, 'fetch'), values: [JSON.stringify(list)] };
    },
    wantAssessments(wanted: readonly WantedAssess[]): Statement {
      const list = wanted.map((item) => ({ ...item, key: assessKey(item) }));
      return { sql: WANT('wing_key, sheet_id', `value ->> 'wingKey', value ->> 'sheetId'`, 'assess'), values: [JSON.stringify(list)] };
    },
    /** Whether there is a fetch to begin, and how many jobs the assessments make that may begin, of these sites or of all. */
    async ready(nowMs: number, chunk: number, siteIds: readonly string[] | null): Promise<{ readonly fetch: number; readonly assessJobs: number }> {
      const wanted = siteIds === null ? 'run AS a INDEXED BY run_wanted' : '(SELECT DISTINCT value AS id FROM json_each(?3)) AS j CROSS JOIN run AS a INDEXED BY run_wanted_of_site ON a.site_id = j.id';
      const [row] = await db.read<{ fetch: number; assessJobs: number }>(
        `SELECT EXISTS (SELECT 1 FROM run AS f INDEXED BY run_wanted WHERE f.step = 'fetch' AND ${free('f')}) AS fetch,
          (SELECT COALESCE(SUM((n + ?2 - 1) / ?2), 0) FROM (SELECT COUNT(*) AS n FROM ${wanted}
            WHERE a.step = 'assess' AND ${free('a')} AND ${FETCHED} GROUP BY a.site_id, a.local_date)) AS assessJobs`,
        nowMs, chunk, ...(siteIds === null ? [] : [JSON.stringify(siteIds)]),
      );
      return row ?? { fetch: 0, assessJobs: 0 };
    },
    /** What is still to do, whether or not its time has come. */
    async openCounts(): Promise<{ readonly fetch: number; readonly assess: number; readonly failed: number }> {
      const [row] = await db.read<{ fetch: number; assess: number; failed: number }>(
        `SELECT COALESCE(SUM(step = 'fetch' AND state = 'wanted'), 0) AS fetch, COALESCE(SUM(step = 'assess' AND state = 'wanted'), 0) AS assess,
          COALESCE(SUM(state = 'failed'), 0) AS failed FROM run WHERE step <> 'tick'`,
      );
      return row ?? { fetch: 0, assess: 0, failed: 0 };
    },
    dropOld(nowMs: number): Statement[] {
      return [
        { sql: `DELETE FROM run WHERE step = 'tick' AND finished_at < ?`, values: [nowMs - KEPT_MS] },
        { sql: `DELETE FROM run WHERE step <> 'tick' AND state <> 'wanted' AND finished_at < ?`, values: [nowMs - KEPT_MS] },
      ];
    },
  };
}

export type RunStore = ReturnType<typeof runStore>;
