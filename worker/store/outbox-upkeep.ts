import type { Database, Statement } from './database.ts';
import type { SettledState } from './outbox.ts';

export type OutboxState = 'pending' | SettledState;

/** A fortnight: as long as a queue may keep a message that comes back, and long enough to answer for it. */
const KEPT_MS = 14 * 24 * 3_600_000;

/** Looking after the outbox as a whole: what is overdue, how much there is, what may be forgotten. */
export function outboxUpkeepStore(db: Database) {
  return {
    /** Rows whose time is over, and rows of subscribers or channels that are gone. A row that is being sent is left alone. */
    closeOverdue(nowMs: number): Statement {
      return {
        sql: `UPDATE outbox SET settled_at = ?1, lease_until = NULL, lease_by = NULL,
            state = CASE WHEN valid_until <= ?1 THEN 'expired' ELSE 'suppressed' END,
            reason = CASE WHEN valid_until <= ?1 THEN 'not delivered before it ceased to be valid' || COALESCE('; last: ' || reason, '') ELSE 'the subscription or its channel has ended' END
          WHERE state = 'pending' AND (lease_until IS NULL OR lease_until <= ?1) AND (valid_until <= ?1
            OR NOT EXISTS (SELECT 1 FROM subscription AS s JOIN channel AS c ON c.subscription_id = s.id
              WHERE s.id = outbox.subscription_id AND s.state = 'active' AND c.id = outbox.channel_id AND c.state <> 'dead'))`,
        values: [nowMs],
      };
    },
    /** For a machine of its own on which whoever held a lease is known to be gone. */
    dropLeases(): Statement[] {
      return ['outbox', 'run'].map((table) => ({ sql: `UPDATE ${table} SET lease_until = NULL, lease_by = NULL WHERE lease_until IS NOT NULL`, values: [] }));
    },
    /** How many rows there are in each state; their sum is how many were ever created and are still kept. */
    async counts(): Promise<Readonly<Record<OutboxState, number>>> {
      const rows = await db.read<{ state: OutboxState; n: number }>('SELECT state, COUNT(*) AS n FROM outbox GROUP BY state');
      return { pending: 0, sent: 0, expired: 0, dead: 0, suppressed: 0, ...Object.fromEntries(rows.map((row) => [row.state, row.n])) };
    },
    dropOld(nowMs: number): Statement {
      return { sql: `DELETE FROM outbox WHERE state <> 'pending' AND settled_at < ?`, values: [nowMs - KEPT_MS] };
    },
  };
}

export type OutboxUpkeepStore = ReturnType<typeof outboxUpkeepStore>;
