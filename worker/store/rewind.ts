import type { Database, Statement } from './database.ts';
import type { DueGroup } from './subscription.ts';

/** A morning that is still to come, of subscribers whose next one was set by a clock that was ahead. */
export interface ComingMorning {
  readonly timeZone: string;
  readonly deliverMinute: number;
  readonly days: number;
  readonly dueAtMs: number;
  readonly dueLocalDate: string;
}

/** Groups whose next morning lies ahead. */
export function groupsAhead(db: Pick<Database, 'read'>, nowMs: number): Promise<DueGroup[]> {
  return db.read<DueGroup>(
    `SELECT DISTINCT time_zone AS timeZone, deliver_minute AS deliverMinute, next_due_at AS nextDueAtMs, days FROM subscription WHERE state = 'active' AND next_due_at > ?`,
    nowMs,
  );
}

/** Moments so little ahead of now are of a day that has begun; others are of another one. */
const SAME_DAY_MS = 12 * 3_600_000;

/**
 * Undoes what a clock that was ahead has stamped: an instant of the future would otherwise pass for news, for freshness, or
 * for a lease, until the clock gets there again. What has been sent stays sent. A brief that was given up unsent, and is
 * of use again, is the one row that goes back to pending.
 */
export function rewound(nowMs: number, usefulMs: number, mornings: readonly ComingMorning[]): Statement[] {
  const step = (sql: string): Statement => ({ sql, values: [nowMs] });
  return [
    step(`DELETE FROM meta WHERE key LIKE 'last-%' AND CAST(value AS INTEGER) > ?1`),
    step('DELETE FROM run WHERE due_at > ?1 - 60000 OR finished_at > ?1 OR lease_until > ?1 + 120000'),
    step('DELETE FROM source_cache WHERE stored_at > ?1'),
    step('DELETE FROM breaker WHERE stored_at > ?1'),
    step('UPDATE forecast SET fetched_at = ?1 WHERE fetched_at > ?1'),
    // Older than whatever is judged now, and judged anew even if nothing else has changed: ages are counted from the clock.
    step(`UPDATE brief SET issued_at = ?1 - 1, input_hash = 'ahead ' || input_hash WHERE issued_at >= ?1`),
    // Nothing that was planned by that clock, and not sent, holds.
    step(`UPDATE outbox SET state = 'suppressed', reason = 'planned by a clock that was ahead', settled_at = ?1, lease_until = NULL, lease_by = NULL
      WHERE state = 'pending' AND created_at > ?1 AND kind <> 'brief'`),
    {
      sql: `UPDATE outbox SET state = 'pending', reason = NULL, settled_at = NULL, content = NULL, attempts = 0,
          valid_until = due_at + ?2
        WHERE kind = 'brief' AND settled_at > ?1 AND due_at + ?2 > ?1 AND (state = 'expired' OR (state = 'suppressed' AND reason LIKE 'no brief was made%'))`,
      values: [nowMs, usefulMs],
    },
    // A send that is under way keeps its lease for as long as a send can take.
    step(`UPDATE outbox SET lease_until = MIN(lease_until, ?1 + 60000), next_attempt_at = MAX(due_at, ?1), content = CASE WHEN due_at > ?1 THEN NULL ELSE content END
      WHERE state = 'pending' AND (next_attempt_at > ?1 OR lease_until > ?1 + 60000)`),
    // What has yet to be made is waited for once more.
    step(`UPDATE outbox SET ready_by = MAX(due_at, ?1) + 600000, next_attempt_at = MAX(due_at, ?1) + 600000 WHERE state = 'pending' AND kind = 'brief' AND content IS NULL`),
    step(`UPDATE outbox SET due_at = ?1 WHERE state = 'sent' AND due_at > ?1 AND due_at <= ?1 + ${SAME_DAY_MS}`),
    step('UPDATE outbox SET created_at = MIN(created_at, ?1), settled_at = MIN(settled_at, ?1) WHERE created_at > ?1 OR settled_at > ?1'),
    // The first morning ahead whose brief has not been sent: those of one whose time has come again are planned at once.
    {
      sql: `UPDATE subscription SET next_due_at = MIN(next_due_at, COALESCE(
          (SELECT MIN(o.due_at) FROM outbox AS o WHERE o.subscription_id = subscription.id AND o.kind = 'brief' AND o.state = 'pending' AND o.content IS NULL),
          next_due_at), COALESCE(
          (SELECT MIN(j.value ->> 'dueAtMs') FROM json_each(?1) AS j
            WHERE j.value ->> 'timeZone' = subscription.time_zone AND j.value ->> 'deliverMinute' = subscription.deliver_minute AND j.value ->> 'days' = subscription.days
              AND NOT EXISTS (SELECT 1 FROM outbox AS o WHERE o.subscription_id = subscription.id AND o.due_local_date = j.value ->> 'dueLocalDate'
                AND o.kind = 'brief' AND o.state <> 'pending')),
          next_due_at))
        WHERE state = 'active'`,
      values: [JSON.stringify(mornings)],
    },
  ];
}
