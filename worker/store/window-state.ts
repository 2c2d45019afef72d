import type { JudgedHour, JudgedWindow } from '../../lib/brief/day.ts';
import type { BriefKey, PairDay } from './brief.ts';
import type { Database, Statement } from './database.ts';
import { OUTBOX_FORMAT } from './outbox.ts';

/**
 * What subscribers have been told, and what has been judged since. There is no table of it: the outbox holds what was
 * said (`content` of briefs and change notices), the briefs what was judged, so the two can never disagree.
 */

/** A brief or change notice of a subscriber that says, or is about to say, something of a day. */
export interface TellingRow {
  readonly id: string;
  readonly subscriptionId: string;
  readonly dueLocalDate: string;
  readonly kind: 'brief' | 'change';
  readonly seq: number;
  /** The highest of that day, whatever became of it. */
  readonly lastSeq: number;
  readonly state: 'pending' | 'sent';
  /** Somebody is sending it. */
  readonly isLeased: boolean;
  /** null while it can still take up whatever is newest. */
  readonly content: string | null;
}

/** A revision as far as a change is concerned. */
export interface SlimBrief extends BriefKey {
  readonly issuedAtMs: number;
  readonly validUntilMs: number;
  readonly hours: readonly Pick<JudgedHour, 'validAt' | 'verdict'>[];
  readonly windows: readonly JudgedWindow[];
}

export interface PlannedChange {
  readonly subscriptionId: string;
  readonly dueLocalDate: string;
  readonly seq: number;
  readonly validUntilMs: number;
  readonly content: string;
}

const PAIR = `b.site_id AS siteId, b.local_date AS localDate, b.wing_key AS wingKey, b.sheet_id AS sheetId`;

const SLIM = `${PAIR}, b.sheet_version AS sheetVersion, b.revision, b.issued_at AS issuedAtMs, b.valid_until AS validUntilMs, b.digest -> '$.windows' AS windows,
  (SELECT json_group_array(json_object('validAt', h.value ->> 'validAt', 'verdict', h.value ->> 'verdict')) FROM json_each(b.digest, '$.hours') AS h) AS hours`;

const SAME = (t: string, j: string): string => `${t}.site_id = ${j}.value ->> 'siteId' AND ${t}.local_date = ${j}.value ->> 'localDate'
  AND ${t}.wing_key = ${j}.value ->> 'wingKey' AND ${t}.sheet_id = ${j}.value ->> 'sheetId'`;

/** A brief due then may still be about a day that has not ended. */
const TOLD_MS = 40 * 3_600_000;

/** Whatever is due since then is of a day since then: a notice bears the date of its brief, which may have been about the day after. */
const OF_DAYS_MS = TOLD_MS + 72 * 3_600_000;

type Packed = Omit<SlimBrief, 'hours' | 'windows'> & { readonly hours: string; readonly windows: string };

function slim(row: Packed): SlimBrief {
  return { ...row, hours: JSON.parse(row.hours) as SlimBrief['hours'], windows: JSON.parse(row.windows) as SlimBrief['windows'] };
}

export function windowStateStore(db: Database) {
  return {
    /** The pair-days that active subscribers have been told about and that have not ended. By the index, or a fortnight of messages is read for two days of them. */
    toldPairDays(nowMs: number): Promise<PairDay[]> {
      return db.read<PairDay>(
        `SELECT DISTINCT j.value ->> 'siteId' AS siteId, j.value ->> 'localDate' AS localDate, j.value ->> 'wingKey' AS wingKey, j.value ->> 'sheetId' AS sheetId
          FROM outbox AS o INDEXED BY outbox_by_due CROSS JOIN subscription AS s ON s.id = o.subscription_id AND s.state = 'active', json_each(o.content, '$.briefs') AS j
          WHERE o.due_at > ?1 - ${TOLD_MS} AND o.kind IN ('brief', 'change') AND o.state IN ('pending', 'sent') AND o.content IS NOT NULL
          ORDER BY 1, 2, 3, 4`,
        nowMs,
      );
    },
    /** Pair-days with a revision issued since then, and not over. Left to itself, the search for distinct ones reads every brief there is. */
    freshPairDays(sinceMs: number, nowMs: number): Promise<PairDay[]> {
      return db.read<PairDay>(`SELECT DISTINCT ${PAIR} FROM brief AS b INDEXED BY brief_by_issue WHERE b.issued_at > ? AND b.valid_until > ?`, sinceMs, nowMs);
    },
    /** The newest two revisions of these pair-days, the newest first. */
    async newestTwo(pairDays: readonly PairDay[]): Promise<SlimBrief[]> {
      const sql = `SELECT ${SLIM} FROM json_each(?) AS j CROSS JOIN brief AS b ON b.rowid IN (SELECT n.rowid FROM brief AS n WHERE ${SAME('n', 'j')} ORDER BY n.issued_at DESC, n.revision DESC LIMIT 2)
        ORDER BY b.issued_at DESC, b.revision DESC`;
      return (await db.read<Packed>(sql, JSON.stringify(pairDays))).map(slim);
    },
    /** These very revisions. */
    async exact(keys: readonly BriefKey[]): Promise<SlimBrief[]> {
      const sql = `SELECT ${SLIM} FROM json_each(?) AS j JOIN brief AS b ON ${SAME('b', 'j')}
        AND b.sheet_version = j.value ->> 'sheetVersion' AND b.revision = j.value ->> 'revision'`;
      return (await db.read<Packed>(sql, JSON.stringify(keys))).map(slim);
    },
    /** What active subscribers of these pairs were told lately, the oldest first. Found from the pairs: from the outbox, everybody's rows are read for each handful of sites. */
    async tellings(pairDays: readonly PairDay[], nowMs: number): Promise<TellingRow[]> {
      const sql = `SELECT o.id, o.subscription_id AS subscriptionId, o.due_local_date AS dueLocalDate, o.kind, o.seq, o.state, o.content,
          (SELECT MAX(n.seq) FROM outbox AS n INDEXED BY outbox_of_day WHERE n.subscription_id = o.subscription_id AND n.due_local_date = o.due_local_date) AS lastSeq,
          (o.lease_until IS NOT NULL AND o.lease_until > ?2) AS isLeased
        FROM (SELECT DISTINCT p.subscription_id AS id FROM json_each(?1) AS j CROSS JOIN subscription_site AS p
            ON p.site_id = j.value ->> 'siteId' AND p.wing_key = j.value ->> 'wingKey' AND p.sheet_id = j.value ->> 'sheetId') AS w
          CROSS JOIN subscription AS s ON s.id = w.id AND s.state = 'active'
          CROSS JOIN outbox AS o INDEXED BY outbox_of_day ON o.subscription_id = s.id AND o.due_local_date >= date((?2 - ${OF_DAYS_MS}) / 1000, 'unixepoch')
        WHERE o.due_at > ?2 - ${TOLD_MS} AND o.due_at <= ?2 AND o.kind IN ('brief', 'change') AND o.state IN ('pending', 'sent')
        ORDER BY o.subscription_id, o.due_at, o.seq, o.created_at, o.id`;
      const rows = await db.read<Omit<TellingRow, 'isLeased'> & { isLeased: number }>(sql, JSON.stringify(pairDays), nowMs);
      return rows.map((row) => ({ ...row, isLeased: row.isLeased === 1 }));
    },
    /** A notice for each first channel. `seq` was counted by whoever planned it, so that a repeat finds its row. */
    planChanges(changes: readonly PlannedChange[], nowMs: number, kind: 'change' | 'plan' = 'change'): Statement {
      return {
        sql: `INSERT INTO outbox (id, subscription_id, channel_id, due_local_date, kind, seq, format, due_at, ready_by, valid_until,
            state, next_attempt_at, content, created_at)
          SELECT 'msg_' || lower(hex(randomblob(16))), s.id, c.id, j.value ->> 'dueLocalDate', '${kind}', j.value ->> 'seq', ${OUTBOX_FORMAT},
            ?2, ?2, j.value ->> 'validUntilMs', 'pending', ?2, j.value ->> 'content', ?2
          FROM json_each(?1) AS j JOIN subscription AS s ON s.id = j.value ->> 'subscriptionId' AND s.state = 'active'
          JOIN channel AS c ON c.subscription_id = s.id AND c.state <> 'dead'
            AND c.rank = (SELECT MIN(rank) FROM channel WHERE subscription_id = s.id AND state <> 'dead')
          WHERE true
          ON CONFLICT (subscription_id, channel_id, due_local_date, kind, seq) DO NOTHING`,
        values: [JSON.stringify(changes), nowMs],
      };
    },
    /** Messages that were never sent and that a newer one takes the place of; one that is being sent is left alone. */
    supersede(ids: readonly string[], nowMs: number): Statement {
      return {
        sql: `UPDATE outbox SET state = 'suppressed', reason = 'a newer message took its place', settled_at = ?2, lease_until = NULL, lease_by = NULL
          WHERE id IN (SELECT value FROM json_each(?1)) AND state = 'pending' AND (lease_until IS NULL OR lease_until <= ?2)`,
        values: [JSON.stringify(ids), nowMs],
      };
    },
  };
}

export type WindowStateStore = ReturnType<typeof windowStateStore>;
