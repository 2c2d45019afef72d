import type { PairDay } from './brief.ts';
import type { Database, Statement } from './database.ts';
import type { FetchOutcome } from './forecast.ts';
import type { Claim } from './outbox.ts';

/** The work of a run: taking it, ending it, putting it off. What is wanted at all is the business of run.ts. */

/** A fetch of one source for one site-day. */
export interface FetchRun {
  readonly key: string;
  readonly siteId: string;
  readonly localDate: string;
  readonly source: string;
  readonly attempts: number;
}

/** How a fetch came out, and what is to become of it. */
export interface EndedFetch {
  readonly key: string;
  readonly outcome: FetchOutcome;
  /** When the service may be asked again; null when asking again would help nothing. */
  readonly askAgainMs?: number | null;
  /** Whether an earlier forecast of this day stands. */
  readonly keepsLast?: boolean;
}

/** The assessment of one pair-day. */
export interface AssessRun extends PairDay {
  readonly key: string;
  readonly attempts: number;
}

/** Work that ended three times without an answer is given up. */
const MAX_ATTEMPTS = 3;

/** Rows of `run`, named t, that may be taken at ?1. */
export function free(t: string): string {
  return `${t}.state = 'wanted' AND ${t}.next_attempt_at <= ?1 AND (${t}.lease_until IS NULL OR ${t}.lease_until <= ?1) AND ${t}.attempts < ${MAX_ATTEMPTS}`;
}

/** Assessments, named a, all of whose fetches have ended, or whose time is up. */
export const FETCHED = `(a.start_by <= ?1 OR NOT EXISTS (SELECT 1 FROM run AS f INDEXED BY run_wanted_of_site WHERE f.site_id = a.site_id
  AND f.step = 'fetch' AND f.local_date = a.local_date AND f.state = 'wanted'))`;

export function runWorkStore(db: Database) {
  return {
    /** Leases fetches of one source for one date. */
    claimFetches({ nowMs, leaseMs, by, limit }: Claim): Promise<FetchRun[]> {
      return db.take<FetchRun>(
        `UPDATE run SET lease_until = ?1 + ?2, lease_by = ?3, attempts = attempts + 1 WHERE key IN (
          SELECT r.key FROM run AS r INDEXED BY run_wanted WHERE r.step = 'fetch' AND ${free('r')} AND (r.source, r.local_date) = (
            SELECT source, local_date FROM run AS f INDEXED BY run_wanted WHERE step = 'fetch' AND ${free('f')} ORDER BY start_by, key LIMIT 1)
          ORDER BY r.start_by, r.key LIMIT ?4)
          RETURNING key, site_id AS siteId, local_date AS localDate, source, attempts`,
        nowMs, leaseMs, by, limit,
      );
    },
    /** Leases assessments of one site-day. */
    claimAssessments({ nowMs, leaseMs, by, limit }: Claim): Promise<AssessRun[]> {
      return db.take<AssessRun>(
        `UPDATE run SET lease_until = ?1 + ?2, lease_by = ?3, attempts = attempts + 1 WHERE key IN (
          SELECT r.key FROM (SELECT a.site_id, a.local_date FROM run AS a INDEXED BY run_wanted WHERE a.step = 'assess' AND ${free('a')}
              AND ${FETCHED} ORDER BY a.start_by, a.key LIMIT 1) AS first
            CROSS JOIN run AS r INDEXED BY run_wanted_of_site ON r.site_id = first.site_id AND r.local_date = first.local_date
          WHERE r.step = 'assess' AND ${free('r')} ORDER BY r.start_by, r.key LIMIT ?4)
          RETURNING key, site_id AS siteId, local_date AS localDate, wing_key AS wingKey, sheet_id AS sheetId, attempts`,
        nowMs, leaseMs, by, limit,
      );
    },
    /** Gives leased work back as if it had not been taken. */
    release(keys: readonly string[]): Statement {
      return {
        sql: `UPDATE run SET lease_until = NULL, lease_by = NULL, attempts = attempts - 1
          WHERE key IN (SELECT value FROM json_each(?)) AND state = 'wanted' AND lease_until IS NOT NULL`,
        values: [JSON.stringify(keys)],
      };
    },
    /**
     * Ends fetches with what came of them. One that is told when to ask again stays wanted until then, if it is not due
     * before or somebody still waits for it by then; what came of it stands meanwhile. One that failed on the way leaves in place what an earlier
     * fetch of the same day has brought: its age speaks for itself.
     */
    finishFetches(ended: readonly EndedFetch[], nowMs: number): Statement {
      const list = ended.map(({ key, outcome, askAgainMs = null, keepsLast = false }) => ({ key, outcome: JSON.stringify(outcome), askAgainMs, keepsLast }));
      const isAwaited = `(j.again IS NOT NULL AND (run.due_at > j.again OR EXISTS (SELECT 1 FROM run AS a INDEXED BY run_wanted_of_site WHERE a.step = 'assess' AND a.state = 'wanted'
        AND a.site_id = run.site_id AND a.local_date = run.local_date AND a.start_by > j.again)))`;
      const stands = `(j.keeps AND run.outcome ->> 'ok' = 1)`;
      return {
        sql: `UPDATE run SET outcome = CASE WHEN ${stands} THEN run.outcome ELSE j.outcome END,
            finished_at = CASE WHEN ${stands} THEN finished_at ELSE ?2 END,
            state = CASE WHEN ${isAwaited} THEN 'wanted' ELSE 'done' END,
            attempts = CASE WHEN ${isAwaited} THEN attempts - 1 ELSE attempts END,
            next_attempt_at = COALESCE(j.again, next_attempt_at), lease_until = NULL, lease_by = NULL
          FROM (SELECT value ->> 'key' AS key, value ->> 'outcome' AS outcome, value ->> 'askAgainMs' AS again, value ->> 'keepsLast' AS keeps
            FROM json_each(?1)) AS j WHERE run.key = j.key`,
        values: [JSON.stringify(list), nowMs],
      };
    },
    /** Puts open fetches of some sources behind all others: their host has just shown that it costs more time than it gives. */
    putBehind(sources: readonly string[], nowMs: number): Statement {
      return {
        sql: `UPDATE run SET start_by = MAX(start_by, ?2) WHERE step = 'fetch' AND state = 'wanted' AND lease_until IS NULL
          AND source IN (SELECT value FROM json_each(?1))`,
        values: [JSON.stringify(sources), nowMs],
      };
    },
    finishAssessments(keys: readonly string[], nowMs: number): Statement {
      return {
        sql: `UPDATE run SET state = 'done', outcome = NULL, finished_at = ?2, lease_until = NULL, lease_by = NULL
          WHERE key IN (SELECT value FROM json_each(?1))`,
        values: [JSON.stringify(keys), nowMs],
      };
    },
    /** Tries again later; after the third time it is given up, with the reason. */
    putOff(keys: readonly string[], reason: string, times: { readonly againAtMs: number; readonly nowMs: number }): Statement {
      return {
        sql: `UPDATE run SET lease_until = NULL, lease_by = NULL, next_attempt_at = ?3, outcome = json_object('ok', 0, 'reason', ?2),
            state = CASE WHEN attempts < ${MAX_ATTEMPTS} THEN 'wanted' ELSE 'failed' END,
            finished_at = CASE WHEN attempts < ${MAX_ATTEMPTS} THEN finished_at ELSE ?4 END
          WHERE key IN (SELECT value FROM json_each(?1)) AND state = 'wanted'`,
        values: [JSON.stringify(keys), reason, times.againAtMs, times.nowMs],
      };
    },
    /** Work that was begun three times and never came back. */
    giveUp(nowMs: number): Statement {
      return {
        sql: `UPDATE run SET state = 'failed', outcome = json_object('ok', 0, 'reason', 'begun ' || attempts || ' times without an answer'),
            finished_at = ?1, lease_until = NULL, lease_by = NULL
          WHERE state = 'wanted' AND attempts >= ${MAX_ATTEMPTS} AND (lease_until IS NULL OR lease_until <= ?1)`,
        values: [nowMs],
      };
    },
  };
}

export type RunWorkStore = ReturnType<typeof runWorkStore>;
