import type { Database, Statement } from './database.ts';
import { OUTBOX_FORMAT } from './outbox.ts';

/** What silence is made of: briefs that nobody made, rows that nobody sent, mornings that nobody planned. */
export interface Books {
  /** Subscribers whose morning has come and was not planned. */
  readonly unplanned: number;
  /** Messages that should have been tried by now and were not. */
  readonly stuck: number;
  /** Messages still open after their time. */
  readonly overdue: number;
  /** Rows that are neither open nor ended with a reason. */
  readonly unaccounted: number;
  /** Push services that take nothing from this sender, whoever it is for. */
  readonly refusals: number;
}

/** How long after its last moment to be made a brief is given up, and after which nothing may be waiting. */
const DEADLINE_MS = 20 * 60_000;

/** A message ends within six hours of its time: whether it ended well needs no look at older ones. */
const LOOKED_AT_MS = 8 * 3_600_000;

export function absenceStore(db: Database) {
  const IDLE = `o.state = 'pending' AND (o.lease_until IS NULL OR o.lease_until <= ?1)`;
  return {
    /** Briefs that were never put into words: of a judge that is not trusted from just before they would leave, else at the deadline. */
    endUnmade(nowMs: number, reason: 'self-check' | 'not-made'): Statement[] {
      const unmade = `${IDLE} AND o.kind = 'brief' AND o.content IS NULL AND o.ready_by <= ?1 + ${reason === 'self-check' ? 60_000 : -DEADLINE_MS}`;
      return [
        {
          sql: `INSERT INTO outbox (id, subscription_id, channel_id, due_local_date, kind, seq, format, due_at, ready_by, valid_until, state,
              next_attempt_at, content, created_at)
            SELECT 'msg_' || lower(hex(randomblob(16))), o.subscription_id, o.channel_id, o.due_local_date, 'missed', o.seq, ${OUTBOX_FORMAT}, o.due_at,
              ?1, MAX(o.valid_until, ?1 + 3600000), 'pending', ?1, json_object('issuedAtMs', ?1, 'briefs', json('[]'), 'reason', ?2), ?1
            FROM outbox AS o WHERE ${unmade}
            ON CONFLICT (subscription_id, channel_id, due_local_date, kind, seq) DO NOTHING`,
          values: [nowMs, reason],
        },
        {
          sql: `UPDATE outbox AS o SET state = 'suppressed', reason = 'no brief was made: ' || ?2, settled_at = ?1, lease_until = NULL, lease_by = NULL WHERE ${unmade}`,
          values: [nowMs, reason],
        },
      ];
    },
    async books(nowMs: number): Promise<Books> {
      const [row] = await db.read<Books>(
        `SELECT (SELECT COUNT(*) FROM subscription WHERE state = 'active' AND next_due_at < ?1 - ${DEADLINE_MS / 2}) AS unplanned,
          (SELECT COUNT(*) FROM outbox AS o WHERE ${IDLE} AND o.next_attempt_at <= ?1 - ${DEADLINE_MS} AND o.ready_by <= ?1 - ${DEADLINE_MS} AND o.valid_until > ?1) AS stuck,
          (SELECT COUNT(*) FROM outbox AS o WHERE ${IDLE} AND o.valid_until <= ?1 - 300000) AS overdue,
          (SELECT COUNT(*) FROM outbox AS o INDEXED BY outbox_by_due WHERE o.due_at > ?1 - ${LOOKED_AT_MS}
            AND ((o.state <> 'pending') <> (o.settled_at IS NOT NULL) OR (o.state <> 'pending' AND o.reason IS NULL))) AS unaccounted,
          (SELECT COUNT(*) FROM breaker WHERE source LIKE 'push %' AND CAST(body AS INTEGER) > ?1) AS refusals`,
        nowMs,
      );
      return row ?? { unplanned: 0, stuck: 0, overdue: 0, unaccounted: 0, refusals: 0 };
    },
    /** One test a week to every channel that is up, of active subscribers whose clocks now show its hour. */
    planTests(groups: readonly { readonly timeZone: string; readonly dueLocalDate: string }[], times: { readonly nowMs: number; readonly validUntilMs: number }): Statement {
      return {
        sql: `INSERT INTO outbox (id, subscription_id, channel_id, due_local_date, kind, seq, format, due_at, ready_by, valid_until, state,
            next_attempt_at, content, created_at)
          SELECT 'msg_' || lower(hex(randomblob(16))), s.id, c.id, j.value ->> 'dueLocalDate', 'test', 1, ${OUTBOX_FORMAT}, ?2, ?2, ?3, 'pending', ?2,
            json_object('issuedAtMs', ?2, 'briefs', json('[]'), 'reachedAtMs', c.reached_at), ?2
          FROM json_each(?1) AS j JOIN subscription AS s ON s.state = 'active' AND s.time_zone = j.value ->> 'timeZone'
          JOIN channel AS c ON c.subscription_id = s.id AND c.state = 'active' AND c.kind <> 'terminal'
          WHERE true ON CONFLICT (subscription_id, channel_id, due_local_date, kind, seq) DO NOTHING`,
        values: [JSON.stringify(groups), times.nowMs, times.validUntilMs],
      };
    },
    async zones(): Promise<string[]> {
      return (await db.read<{ zone: string }>(`SELECT DISTINCT time_zone AS zone FROM subscription WHERE state = 'active' ORDER BY 1`)).map(({ zone }) => zone);
    },
  };
}

export type AbsenceStore = ReturnType<typeof absenceStore>;
