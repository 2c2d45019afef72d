import type { Database, Statement } from './database.ts';
import type { DisplayUnits } from '../../lib/brief/units-out.ts';
import type { Pair } from './published.ts';

/** Subscribers whose morning falls on the same instant: one zone, one minute of the day. */
export interface DueGroup {
  readonly timeZone: string;
  readonly deliverMinute: number;
  readonly nextDueAtMs: number;
  /** The days of the week on which a brief is wanted, bit 0 for Monday. */
  readonly days: number;
}

export interface NewSubscription {
  readonly id: string;
  readonly timeZone: string;
  /** Minutes after local midnight. */
  readonly deliverMinute: number;
  readonly nextDueAtMs: number;
  readonly pairs: readonly Pair[];
  readonly days?: number;
  readonly units?: DisplayUnits;
  /** The address under a keyed hash, where there is one. */
  readonly owner?: string | null;
}

export interface StoredSubscription {
  readonly id: string;
  readonly state: 'active' | 'paused' | 'ended';
  readonly linkVersion: number;
}

/** All that its own subscriber may see and change. */
export interface SubscriptionDetail extends StoredSubscription, Omit<DueGroup, 'nextDueAtMs'> {
  readonly owner: string | null;
  readonly nextDueAtMs: number;
  readonly resumeAtMs: number | null;
  readonly speedUnit: DisplayUnits['speed'];
  readonly heightUnit: DisplayUnits['height'];
}

/** A pause that ends is over half a day before the first morning after it, so that this morning is planned like any. */
const RESUME_AHEAD_MS = 12 * 3_600_000;

export function subscriptionStore(db: Database) {
  return {
    dueGroups(nowMs: number): Promise<DueGroup[]> {
      return db.read<DueGroup>(
        `SELECT DISTINCT time_zone AS timeZone, deliver_minute AS deliverMinute, next_due_at AS nextDueAtMs, days
          FROM subscription WHERE state = 'active' AND next_due_at <= ? ORDER BY next_due_at, time_zone LIMIT 500`,
        nowMs,
      );
    },
    /** What the subscribers who are due by then want a brief for, and to which group they belong. */
    duePairs(nowMs: number): Promise<(Pair & DueGroup)[]> {
      return db.read(
        `SELECT DISTINCT p.site_id AS siteId, p.wing_key AS wingKey, p.sheet_id AS sheetId, s.time_zone AS timeZone, s.deliver_minute AS deliverMinute,
            s.next_due_at AS nextDueAtMs, s.days
          FROM subscription AS s JOIN subscription_site AS p ON p.subscription_id = s.id
          WHERE s.state = 'active' AND s.next_due_at <= ? ORDER BY 1, 2, 3, 6, 4, 5, 7`,
        nowMs,
      );
    },
    async one(id: string): Promise<StoredSubscription | null> {
      const [row] = await db.read<StoredSubscription>('SELECT id, state, link_version AS linkVersion FROM subscription WHERE id = ?', id);
      return row ?? null;
    },
    async detail(id: string): Promise<SubscriptionDetail | null> {
      const [row] = await db.read<SubscriptionDetail>(
        `SELECT id, state, link_version AS linkVersion, time_zone AS timeZone, deliver_minute AS deliverMinute, days, owner, next_due_at AS nextDueAtMs,
          resume_at AS resumeAtMs, speed_unit AS speedUnit, height_unit AS heightUnit FROM subscription WHERE id = ? AND state <> 'ended'`,
        id,
      );
      return row ?? null;
    },
    /** In which units each of them reads. */
    async unitsOf(ids: readonly string[]): Promise<ReadonlyMap<string, DisplayUnits>> {
      const rows = await db.read<{ id: string; speed: DisplayUnits['speed']; height: DisplayUnits['height'] }>(
        'SELECT id, speed_unit AS speed, height_unit AS height FROM subscription WHERE id IN (SELECT value FROM json_each(?))', JSON.stringify(ids),
      );
      return new Map(rows.map(({ id, speed, height }) => [id, { speed, height }]));
    },
    /** Nothing more is sent, for now or until the morning that is given. */
    pause(id: string, until: { readonly resumeAtMs: number; readonly nextDueAtMs: number } | null): Statement[] {
      return [{
        sql: `UPDATE subscription SET state = 'paused', resume_at = ?2, next_due_at = COALESCE(?3, next_due_at) WHERE id = ?1 AND state <> 'ended'`,
        values: [id, until?.resumeAtMs ?? null, until?.nextDueAtMs ?? null],
      }];
    },
    resume(id: string, nextDueAtMs: number): Statement {
      return { sql: `UPDATE subscription SET state = 'active', resume_at = NULL, next_due_at = ?2 WHERE id = ?1 AND state = 'paused'`, values: [id, nextDueAtMs] };
    },
    /** Pauses whose time is over. */
    resumeDue(nowMs: number): Statement {
      return { sql: `UPDATE subscription SET state = 'active', resume_at = NULL WHERE state = 'paused' AND resume_at <= ?1 + ${RESUME_AHEAD_MS}`, values: [nowMs] };
    },
    /** Ends every link that was printed so far. Run twice it raises the version once. */
    renewLinks(id: string, version: number): Statement {
      return { sql: 'UPDATE subscription SET link_version = ?2 + 1 WHERE id = ?1 AND link_version = ?2', values: [id, version] };
    },
    /** Everything that was kept of somebody, at once. Briefs stay, but for those of a wing with figures of their own: the others are of a site and name nobody. */
    erase(id: string): Statement[] {
      return [
        { sql: 'DELETE FROM token WHERE subject = ?1 OR subject IN (SELECT id FROM channel WHERE subscription_id = ?1)', values: [id] },
        ...['channel', 'subscription_site', 'outbox'].map((table) => ({ sql: `DELETE FROM ${table} WHERE subscription_id = ?`, values: [id] })),
        { sql: 'UPDATE plan SET subscription_id = NULL WHERE subscription_id = ?', values: [id] },
        { sql: 'DELETE FROM signup WHERE id = ?1 OR owner = (SELECT owner FROM subscription WHERE id = ?1)', values: [id] },
        { sql: `DELETE FROM rate WHERE key = 'test ' || ?`, values: [id] },
        { sql: 'DELETE FROM subscription WHERE id = ?', values: [id] },
        ...[['wing', 'key'], ['brief', 'wing_key'], ['run', 'wing_key']].map(([table, key]) => (
          { sql: `DELETE FROM ${table} WHERE ${key} >= 'own-' AND ${key} < 'own.' AND ${key} NOT IN (SELECT wing_key FROM subscription_site) AND ${key} NOT IN (SELECT wing_key FROM published)`, values: [] }
        )),
      ];
    },
    async idOfOwner(owner: string): Promise<string | null> {
      const [row] = await db.read<{ id: string }>('SELECT id FROM subscription WHERE owner = ?', owner);
      return row?.id ?? null;
    },
    /** Those none of whose channels ever showed that it wants to be told. Who was told once is not forgotten for having moved. */
    async neverVerified(beforeMs: number): Promise<string[]> {
      const rows = await db.read<{ id: string }>(
        `SELECT DISTINCT c.subscription_id AS id FROM channel AS c JOIN subscription AS s ON s.id = c.subscription_id
          WHERE c.state = 'unverified' AND s.stored_at < ? AND NOT EXISTS (SELECT 1 FROM channel AS o
            WHERE o.subscription_id = s.id AND (o.state <> 'unverified' OR o.reached_at IS NOT NULL)) LIMIT 20`,
        beforeMs,
      );
      return rows.map(({ id }) => id);
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
        sql: `WITH g AS MATERIALIZED (SELECT value ->> 'timeZone' AS zone, value ->> 'deliverMinute' AS minute, value ->> 'nextDueAtMs' AS due,
            value ->> 'days' AS days, value ->> 'followingAtMs' AS following FROM json_each(?))
          UPDATE subscription SET next_due_at = COALESCE((SELECT following FROM g
            WHERE g.due = next_due_at AND g.zone = time_zone AND g.minute = deliver_minute AND g.days = subscription.days), next_due_at)
          WHERE state = 'active' AND next_due_at IN (SELECT due FROM g)`,
        values: [JSON.stringify(groups)],
      };
    },
    /** Everyone active is due now: the local start command's "this morning". */
    makeAllDue(nowMs: number): Statement {
      return { sql: `UPDATE subscription SET next_due_at = ? WHERE state = 'active'`, values: [nowMs] };
    },
    /** New ones are added; one that exists keeps its state and links and takes the rest. */
    put(subscriptions: readonly NewSubscription[], nowMs: number): Statement[] {
      const list = JSON.stringify(subscriptions.map(({ units, ...item }) => ({ ...item, speedUnit: units?.speed, heightUnit: units?.height })));
      return [
        {
          sql: `INSERT INTO subscription (id, state, time_zone, deliver_minute, next_due_at, days, speed_unit, height_unit, owner, stored_at)
            SELECT value ->> 'id', 'active', value ->> 'timeZone', value ->> 'deliverMinute', value ->> 'nextDueAtMs', COALESCE(value ->> 'days', 127),
              COALESCE(value ->> 'speedUnit', 'm/s'), COALESCE(value ->> 'heightUnit', 'm'), value ->> 'owner', ?2
            FROM json_each(?1) WHERE true
            ON CONFLICT (id) DO UPDATE SET time_zone = excluded.time_zone, deliver_minute = excluded.deliver_minute,
              next_due_at = excluded.next_due_at, days = excluded.days, speed_unit = excluded.speed_unit, height_unit = excluded.height_unit`,
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
