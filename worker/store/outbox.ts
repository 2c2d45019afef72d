import type { Database, Statement } from './database.ts';
import type { Mark } from './mark.ts';

/** What a message is: the morning's brief, what changed since, the notice that there was none, a planned block that turned, the weekly test. */
export type MessageKind = 'brief' | 'change' | 'missed' | 'plan' | 'test';

export type SettledState = 'sent' | 'expired' | 'dead' | 'suppressed';

/** The format of the rows that this code writes; rows of a newer one are left to newer code. */
export const OUTBOX_FORMAT = 1;

/** Messages of one instant to a group of subscribers. */
export interface PlannedGroup {
  readonly timeZone: string;
  readonly deliverMinute: number;
  /** The days of the week of its subscribers; of all where none are given. */
  readonly days?: number;
  readonly nextDueAtMs: number;
  readonly kind: MessageKind;
  readonly dueLocalDate: string;
  readonly dueAtMs: number;
  /** From then on it is sent as it is: what has not been computed by then is said to be missing. */
  readonly readyByMs: number;
  readonly validUntilMs: number;
}

export interface OutboxRow {
  readonly id: string;
  readonly subscriptionId: string;
  readonly channelId: string;
  readonly kind: MessageKind;
  readonly dueLocalDate: string;
  readonly seq: number;
  readonly dueAtMs: number;
  readonly validUntilMs: number;
  /** Attempts so far, this one included. */
  readonly attempts: number;
  readonly leaseUntilMs: number;
  readonly content: string | null;
}

export interface Claim {
  readonly nowMs: number;
  readonly leaseMs: number;
  readonly by: string;
  readonly limit: number;
}

/** Rows of outbox, named o, that may be sent at ?1. */
const READY = `o.state = 'pending' AND o.format <= ${OUTBOX_FORMAT} AND o.next_attempt_at <= ?1 AND o.valid_until > ?1
  AND (o.lease_until IS NULL OR o.lease_until <= ?1)`;

/** Briefs that nobody has begun to send. */
const WAITING = (t: string): string => `${t}.state = 'pending' AND ${t}.kind = 'brief' AND ${t}.content IS NULL`;

export function outboxStore(db: Database) {
  return {
    /**
     * One row for every first-rank channel of everyone in the groups; a row that exists stays as it is. The ids of one
     * planning ascend from a random beginning: written in the order of their index, a hundred thousand take half as long.
     */
    plan(groups: readonly PlannedGroup[], nowMs: number): Statement {
      return {
        sql: `INSERT INTO outbox (id, subscription_id, channel_id, due_local_date, kind, seq, format, due_at, ready_by, valid_until,
            state, next_attempt_at, created_at)
          WITH g AS MATERIALIZED (SELECT value ->> 'timeZone' AS zone, value ->> 'deliverMinute' AS minute, value ->> 'nextDueAtMs' AS next_due,
            value ->> 'days' AS days, value ->> 'dueLocalDate' AS date, value ->> 'kind' AS kind, value ->> 'dueAtMs' AS due,
            value ->> 'readyByMs' AS ready, value ->> 'validUntilMs' AS valid, ABS(RANDOM() % 4000000000) AS first FROM json_each(?1))
          SELECT 'msg_' || printf('%08x', g.first + ROW_NUMBER() OVER ()) || lower(hex(randomblob(12))), s.id, c.id, g.date, g.kind, 1, ${OUTBOX_FORMAT},
            g.due, g.ready, g.valid, 'pending', CASE g.kind WHEN 'brief' THEN g.ready ELSE g.due END, ?2
          FROM g CROSS JOIN subscription AS s ON s.state = 'active' AND s.next_due_at = g.next_due
            AND s.time_zone = g.zone AND s.deliver_minute = g.minute AND s.days = COALESCE(g.days, s.days)
          JOIN channel AS c ON c.subscription_id = s.id AND c.state <> 'dead'
            AND c.rank = (SELECT MIN(rank) FROM channel WHERE subscription_id = s.id AND state <> 'dead')
          WHERE true
          ON CONFLICT (subscription_id, channel_id, due_local_date, kind, seq) DO NOTHING`,
        values: [JSON.stringify(groups), nowMs],
      };
    },
    /**
     * Brings forward the briefs all of whose assessments have ended: of those who asked for this site, or of everybody. The
     * number of rows changed is how many are ready by that.
     */
    bringForward(siteId: string | null, nowMs: number): Statement {
      return {
        sql: `UPDATE outbox AS o SET next_attempt_at = o.due_at
          WHERE ${WAITING('o')} AND o.due_at <= ?1 AND o.next_attempt_at = o.ready_by AND o.ready_by > ?1
            ${siteId === null ? '' : `AND o.subscription_id IN (SELECT p.subscription_id FROM (SELECT 1 FROM outbox AS w INDEXED BY outbox_waiting WHERE ${WAITING('w')} LIMIT 1)
              CROSS JOIN subscription_site AS p ON p.site_id = ?2)`}
            AND NOT EXISTS (SELECT 1 FROM subscription_site AS p CROSS JOIN run AS r INDEXED BY run_wanted_of_site ON r.site_id = p.site_id AND r.step = 'assess'
                AND r.wing_key = p.wing_key AND r.sheet_id = p.sheet_id
              WHERE p.subscription_id = o.subscription_id AND r.state = 'wanted' AND r.due_at <= o.due_at)`,
        values: siteId === null ? [nowMs] : [nowMs, siteId],
      };
    },
    /** Leases rows that may be sent now, the longest waiting first; a row is leased to one at a time. */
    claim({ nowMs, leaseMs, by, limit }: Claim): Promise<OutboxRow[]> {
      return db.take<OutboxRow>(
        `UPDATE outbox SET lease_until = ?1 + ?2, lease_by = ?3, attempts = attempts + 1
          WHERE id IN (SELECT o.id FROM outbox AS o WHERE ${READY} ORDER BY o.next_attempt_at LIMIT ?4)
          RETURNING id, subscription_id AS subscriptionId, channel_id AS channelId, kind, due_local_date AS dueLocalDate, seq,
            due_at AS dueAtMs, valid_until AS validUntilMs, attempts, lease_until AS leaseUntilMs, content`,
        nowMs, leaseMs, by, limit,
      );
    },
    /** How many there are, as far as anyone needs to know. */
    async readyCount(nowMs: number): Promise<number> {
      const [row] = await db.read<{ n: number }>(`SELECT COUNT(*) AS n FROM (SELECT 1 FROM outbox AS o WHERE ${READY} LIMIT 200)`, nowMs);
      return row?.n ?? 0;
    },
    /** Fixes what the messages will say before the first of them leaves: a repeat says the same. */
    pin(contents: readonly { readonly id: string; readonly content: string }[]): Promise<number> {
      return db.write(
        `UPDATE outbox SET content = j.content FROM (SELECT value ->> 'id' AS id, value ->> 'content' AS content FROM json_each(?)) AS j
          WHERE outbox.id = j.id AND outbox.content IS NULL`,
        JSON.stringify(contents),
      );
    },
    /** Ends a row, once. What was sent is sent, whoever holds the lease by now. */
    settle(id: string, end: { readonly state: SettledState; readonly reason: string }, nowMs: number): Mark {
      return {
        sql: `UPDATE outbox SET state = j.value ->> 'state', reason = j.value ->> 'reason', settled_at = j.value ->> 'nowMs', lease_until = NULL, lease_by = NULL
          FROM json_each(?1) AS j WHERE outbox.id = j.value ->> 'id' AND outbox.state = 'pending'`,
        row: { id, ...end, nowMs },
      };
    },
    /** Gives a leased row back for another attempt. */
    retry(id: string, by: string, next: { readonly atMs: number; readonly reason: string }): Mark {
      return {
        sql: `UPDATE outbox SET next_attempt_at = j.value ->> 'atMs', reason = j.value ->> 'reason', lease_until = NULL, lease_by = NULL
          FROM json_each(?1) AS j WHERE outbox.id = j.value ->> 'id' AND outbox.lease_by = j.value ->> 'by' AND outbox.state = 'pending'`,
        row: { id, by, ...next },
      };
    },
    /** Gives a leased row back until then: nothing was tried. */
    hold(id: string, by: string, until: { readonly atMs: number; readonly reason: string }): Mark {
      return {
        sql: `UPDATE outbox SET next_attempt_at = j.value ->> 'atMs', reason = j.value ->> 'reason', lease_until = NULL, lease_by = NULL, attempts = attempts - 1
          FROM json_each(?1) AS j WHERE outbox.id = j.value ->> 'id' AND outbox.lease_by = j.value ->> 'by' AND outbox.state = 'pending'`,
        row: { id, by, ...until },
      };
    },
    /** Gives a leased row back as if it had not been taken. */
    putBack(ids: readonly string[], by: string): Statement {
      return {
        sql: `UPDATE outbox SET lease_until = NULL, lease_by = NULL, attempts = attempts - 1
          WHERE id IN (SELECT value FROM json_each(?1)) AND lease_by = ?2 AND state = 'pending'`,
        values: [JSON.stringify(ids), by],
      };
    },
    /** The same message for the channels of the next rank, when one is dead; not a test that somebody asked for, which is of that one. */
    fallBack(id: string, nowMs: number): Mark {
      return {
        sql: `INSERT INTO outbox (id, subscription_id, channel_id, due_local_date, kind, seq, format, due_at, ready_by, valid_until,
            state, next_attempt_at, content, created_at)
          SELECT 'msg_' || lower(hex(randomblob(16))), o.subscription_id, c.id, o.due_local_date, o.kind, o.seq, ${OUTBOX_FORMAT}, o.due_at,
            o.ready_by, o.valid_until, 'pending', j.value ->> 'nowMs', o.content, j.value ->> 'nowMs'
          FROM json_each(?1) AS j JOIN outbox AS o ON o.id = j.value ->> 'id' AND o.state = 'dead' AND COALESCE(o.content ->> 'asked', 0) = 0
          JOIN channel AS was ON was.id = o.channel_id
          JOIN channel AS c ON c.subscription_id = o.subscription_id AND c.state <> 'dead'
            AND c.rank = (SELECT MIN(rank) FROM channel WHERE subscription_id = o.subscription_id AND state <> 'dead' AND rank > was.rank)
          WHERE true
          ON CONFLICT (subscription_id, channel_id, due_local_date, kind, seq) DO NOTHING`,
        row: { id, nowMs },
      };
    },
  };
}

export type OutboxStore = ReturnType<typeof outboxStore>;
