import type { Database, Statement } from './database.ts';
import type { Pair } from './published.ts';

/** Subscribers whose morning falls on the same instant: one zone, one minute of the day. */
export interface DueGroup {
  readonly timeZone: string;
  readonly deliverMinute: number;
  readonly nextDueAtMs: number;
}

export interface NewSubscription {
  readonly id: string;
  readonly timeZone: string;
  /** Minutes after local midnight. */
  readonly deliverMinute: number;
  readonly nextDueAtMs: number;
  readonly pairs: readonly Pair[];
}

export function subscriptionStore(db: Database) {
  return {
    dueGroups(nowMs: number): Promise<DueGroup[]> {
      return db.read<DueGroup>(
        `SELECT DISTINCT time_zone AS timeZone, deliver_minute AS deliverMinute, next_due_at AS nextDueAtMs
          FROM subscription WHERE state = 'active' AND next_due_at <= ? ORDER BY next_due_at, time_zone LIMIT 500`,
        nowMs,
      );
    },
    /** What the subscribers who are due by then want a brief for, and when they are due. */
    duePairs(nowMs: number): Promise<(Pair & { readonly dueAtMs: number })[]> {
      return db.read(
        `SELECT DISTINCT p.site_id AS siteId, p.wing_key AS wingKey, p.sheet_id AS sheetId, s.next_due_at AS dueAtMs
          FROM subscription AS s JOIN subscription_site AS p ON p.subscription_id = s.id
          WHERE s.state = 'active' AND s.next_due_at <= ? ORDER BY 1, 2, 3, 4`,
        nowMs,
      );
    },
    async one(id: string): Promise<{ readonly id: string; readonly state: 'active' | 'paused' | 'ended'; readonly linkVersion: number } | null> {
      const [row] = await db.read<{ id: string; state: 'active' | 'paused' | 'ended'; linkVersion: number }>('SELECT id, state, link_version AS linkVersion FROM subscription WHERE id = ?', id);
      return row ?? null;
    },
    pairsOf(subscriptionIds: readonly string[]): Promise<(Pair & { readonly subscriptionId: string })[]> {
      return db.read(
        `SELECT subscription_id AS subscriptionId, site_id AS siteId, wing_key AS wingKey, sheet_id AS sheetId FROM subscription_site
          WHERE subscription_id IN (SELECT value FROM json_each(?)) ORDER BY subscription_id, site_id, wing_key, sheet_id`,
        JSON.stringify(subscriptionIds),
      );
    },
    /** Sets the next morning of everyone in a group. */
    advance(groups: readonly (DueGroup & { readonly followingAtMs: number })[]): Statement {
      return {
        sql: `UPDATE subscription SET next_due_at = g.following FROM (
            SELECT value ->> 'timeZone' AS zone, value ->> 'deliverMinute' AS minute, value ->> 'nextDueAtMs' AS due,
              value ->> 'followingAtMs' AS following FROM json_each(?)) AS g
          WHERE state = 'active' AND time_zone = g.zone AND deliver_minute = g.minute AND next_due_at = g.due`,
        values: [JSON.stringify(groups)],
      };
    },
    /** Everyone active is due now: the local start command's "this morning". */
    makeAllDue(nowMs: number): Statement {
      return { sql: `UPDATE subscription SET next_due_at = ? WHERE state = 'active'`, values: [nowMs] };
    },
    /** New ones are added; one that exists keeps its state and links and takes the rest. */
    put(subscriptions: readonly NewSubscription[], nowMs: number): Statement[] {
      const list = JSON.stringify(subscriptions);
      return [
        {
          sql: `INSERT INTO subscription (id, state, time_zone, deliver_minute, next_due_at, stored_at)
            SELECT value ->> 'id', 'active', value ->> 'timeZone', value ->> 'deliverMinute', value ->> 'nextDueAtMs', ?2
            FROM json_each(?1) WHERE true
            ON CONFLICT (id) DO UPDATE SET time_zone = excluded.time_zone, deliver_minute = excluded.deliver_minute,
              next_due_at = excluded.next_due_at`,
          values: [list, nowMs],
        },
        { sql: `DELETE FROM subscription_site WHERE subscription_id IN (SELECT value ->> 'id' FROM json_each(?))`, values: [list] },
        {
          sql: `INSERT OR IGNORE INTO subscription_site (subscription_id, site_id, wing_key, sheet_id)
            SELECT s.value ->> 'id', p.value ->> 'siteId', p.value ->> 'wingKey', p.value ->> 'sheetId'
            FROM json_each(?) AS s, json_each(s.value -> 'pairs') AS p`,
          values: [list],
        },
      ];
    },
  };
}

export type SubscriptionStore = ReturnType<typeof subscriptionStore>;
