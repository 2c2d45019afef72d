import type { Verdict } from '../../lib/margin/ids.ts';
import type { Database, Statement } from './database.ts';
import type { Pair } from './published.ts';

export interface PairDay extends Pair {
  /** yyyy-mm-dd in the site's zone. */
  readonly localDate: string;
}

export interface BriefKey extends PairDay {
  readonly sheetVersion: number;
  readonly revision: number;
}

/** A brief without most of its margins: all that a message, a board or a feed needs. */
export interface BriefHead extends BriefKey {
  readonly verdict: Verdict;
  readonly demo: boolean;
  readonly issuedAtMs: number;
  readonly validUntilMs: number;
  /** The oldest run among the sources that voted, null when none did or one had no run time. */
  readonly runAtMs: number | null;
  /** Of everything the brief was computed from: the same again means the same brief. */
  readonly inputHash: string;
  /** The judged day as JSON with only those margins that the words of a brief are made of. */
  readonly digest: string;
}

export interface NewBrief extends Omit<BriefHead, 'revision'> {
  readonly body: string;
}

interface Row extends Omit<BriefHead, 'demo'> {
  readonly demo: number;
}

const HEAD = `b.site_id AS siteId, b.local_date AS localDate, b.wing_key AS wingKey, b.sheet_id AS sheetId,
  b.sheet_version AS sheetVersion, b.revision, b.verdict, b.demo, b.issued_at AS issuedAtMs, b.valid_until AS validUntilMs,
  b.run_at AS runAtMs, b.input_hash AS inputHash, b.digest`;

/** Briefs are kept for a fortnight, as what was sent of them is; kept for a season, those of own wings alone would fill a small database. */
const KEPT_MS = 14 * 24 * 3_600_000;

function head(row: Row): BriefHead {
  return { ...row, demo: row.demo === 1 };
}

/**
 * The newest brief b of each pair-day j: of several versions of a sheet and revisions of a brief the one issued last counts.
 * Found from its end by the index brief_newest: joined the other way round, every revision of the day is read for it.
 */
const NEWEST = `FROM json_each(?) AS j CROSS JOIN brief AS b ON b.rowid = (SELECT n.rowid FROM brief AS n WHERE n.site_id = j.value ->> 'siteId'
  AND n.local_date = j.value ->> 'localDate' AND n.wing_key = j.value ->> 'wingKey' AND n.sheet_id = j.value ->> 'sheetId'
  ORDER BY n.issued_at DESC, n.revision DESC LIMIT 1)`;

export function briefStore(db: Database) {
  return {
    /** Takes the next revision. Running the statement twice adds one brief: issued_at tells the repeat. */
    add(brief: NewBrief): Statement {
      return {
        sql: `INSERT INTO brief (site_id, local_date, wing_key, sheet_id, sheet_version, revision, verdict, demo, issued_at,
            valid_until, run_at, input_hash, digest, body)
          SELECT ?1, ?2, ?3, ?4, ?5, 1 + COALESCE(MAX(revision), 0), ?6, ?7, ?8, ?9, ?10, ?11, ?12, ?13
          FROM brief WHERE site_id = ?1 AND local_date = ?2 AND wing_key = ?3 AND sheet_id = ?4 AND sheet_version = ?5
          HAVING COALESCE(MAX(issued_at), -1) <> ?8`,
        values: [
          brief.siteId, brief.localDate, brief.wingKey, brief.sheetId, brief.sheetVersion, brief.verdict, brief.demo ? 1 : 0,
          brief.issuedAtMs, brief.validUntilMs, brief.runAtMs, brief.inputHash, brief.digest, brief.body,
        ],
      };
    },
    /** The newest brief of each of these pair-days that has one. */
    async heads(pairDays: readonly PairDay[]): Promise<BriefHead[]> {
      return (await db.read<Row>(`SELECT ${HEAD} ${NEWEST}`, JSON.stringify(pairDays))).map(head);
    },
    /** These very revisions, as far as they are still kept. */
    async exact(keys: readonly BriefKey[]): Promise<BriefHead[]> {
      const sql = `SELECT ${HEAD} FROM json_each(?) AS j JOIN brief AS b ON b.site_id = j.value ->> 'siteId'
        AND b.local_date = j.value ->> 'localDate' AND b.wing_key = j.value ->> 'wingKey' AND b.sheet_id = j.value ->> 'sheetId'
        AND b.sheet_version = j.value ->> 'sheetVersion' AND b.revision = j.value ->> 'revision'`;
      return (await db.read<Row>(sql, JSON.stringify(keys))).map(head);
    },
    /** Every revision of these pair-days, each day's in the order in which they were issued. */
    async history(pairDays: readonly PairDay[]): Promise<BriefHead[]> {
      const sql = `SELECT ${HEAD} FROM json_each(?) AS j JOIN brief AS b ON b.site_id = j.value ->> 'siteId'
        AND b.local_date = j.value ->> 'localDate' AND b.wing_key = j.value ->> 'wingKey' AND b.sheet_id = j.value ->> 'sheetId'
        ORDER BY b.local_date, b.site_id, b.wing_key, b.sheet_id, b.issued_at, b.revision`;
      return (await db.read<Row>(sql, JSON.stringify(pairDays))).map(head);
    },
    /** One of those with its body, the judged day as JSON. */
    async newest(pairDay: PairDay): Promise<(BriefHead & { readonly body: string }) | null> {
      const sql = `SELECT ${HEAD}, b.body FROM brief AS b WHERE b.site_id = ? AND b.local_date = ? AND b.wing_key = ? AND b.sheet_id = ?
        ORDER BY b.issued_at DESC, b.revision DESC LIMIT 1`;
      const [row] = await db.read<Row & { body: string }>(sql, pairDay.siteId, pairDay.localDate, pairDay.wingKey, pairDay.sheetId);
      return row === undefined ? null : { ...head(row), body: row.body };
    },
    /** The bodies of the newest briefs of these pair-days, for pages that show pictures. */
    async bodies(pairDays: readonly PairDay[]): Promise<(PairDay & { readonly revision: number; readonly body: string })[]> {
      return db.read(`SELECT b.site_id AS siteId, b.local_date AS localDate, b.wing_key AS wingKey, b.sheet_id AS sheetId, b.revision, b.body ${NEWEST}`, JSON.stringify(pairDays));
    },
    dropOld(nowMs: number): Statement {
      return { sql: 'DELETE FROM brief WHERE valid_until < ?', values: [nowMs - KEPT_MS] };
    },
  };
}

export type BriefStore = ReturnType<typeof briefStore>;
