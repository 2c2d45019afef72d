import type { Database, Statement } from './database.ts';

export interface StoredPlan {
  readonly id: string;
  /** Of its link: raising it revokes what was handed out before. */
  readonly linkVersion: number;
  /** 1 when it was first made, one more each time it is made anew. */
  readonly revision: number;
  /** yyyy-mm-dd at its sites. */
  readonly localDate: string;
  /** What was asked for, as JSON. */
  readonly request: string;
  /** What was planned, as JSON. */
  readonly body: string;
  /** Who is told when a block turns; null for nobody. */
  readonly subscriptionId: string | null;
}

/** What somebody was told of their plans of a day, or is about to be. */
export interface PlanTelling {
  readonly id: string;
  readonly subscriptionId: string;
  readonly localDate: string;
  readonly seq: number;
  readonly state: string;
  readonly isLeased: number;
  readonly content: string;
}

const COLUMNS = 'id, link_version AS linkVersion, revision, local_date AS localDate, request, body, subscription_id AS subscriptionId';

/** A plan is kept for a month after its last change, so that a day can be looked back on. */
const KEPT_MS = 31 * 24 * 3_600_000;

/** Rows that one call tidies away: a plan made is never slow because many have run out. */
const TIDIED = 50;

export function planStore(db: Database) {
  return {
    /** Running it twice leaves the same row: the revision is given, not counted. Old plans leave with it. */
    put(plan: Omit<StoredPlan, 'linkVersion' | 'subscriptionId'>, nowMs: number): Statement[] {
      return [
        { sql: `DELETE FROM plan WHERE id IN (SELECT id FROM plan WHERE expires_at < ? LIMIT ${TIDIED})`, values: [nowMs] },
        {
          sql: `INSERT INTO plan (id, revision, local_date, request, body, stored_at, expires_at) VALUES (?1, ?2, ?3, ?4, ?5, ?6, ?7)
            ON CONFLICT (id) DO UPDATE SET revision = excluded.revision, local_date = excluded.local_date, request = excluded.request,
              body = excluded.body, stored_at = excluded.stored_at, expires_at = excluded.expires_at WHERE plan.revision <= excluded.revision`,
          values: [plan.id, plan.revision, plan.localDate, plan.request, plan.body, nowMs, nowMs + KEPT_MS],
        },
      ];
    },
    async one(id: string): Promise<StoredPlan | null> {
      const [row] = await db.read<StoredPlan>(`SELECT ${COLUMNS} FROM plan WHERE id = ?`, id);
      return row ?? null;
    },
    /** Who is told from now on; nobody for null. */
    tell(id: string, subscriptionId: string | null): Statement {
      return { sql: 'UPDATE plan SET subscription_id = ?2 WHERE id = ?1', values: [id, subscriptionId] };
    },
    /** Those from this day on that a subscription is told about, the next day first. */
    ofSubscription(id: string, fromDate: string): Promise<Pick<StoredPlan, 'id' | 'linkVersion' | 'localDate'>[]> {
      return db.read('SELECT id, link_version AS linkVersion, local_date AS localDate FROM plan WHERE subscription_id = ? AND local_date >= ? ORDER BY local_date, id LIMIT 50', id, fromDate);
    },
    tellNoMore(id: string, subscriptionId: string): Statement {
      return { sql: 'UPDATE plan SET subscription_id = NULL WHERE id = ? AND subscription_id = ?', values: [id, subscriptionId] };
    },
    /** The plans of these days that somebody is to be told about. */
    held(localDates: readonly string[]): Promise<(StoredPlan & { readonly subscriptionId: string })[]> {
      const sql = `SELECT ${COLUMNS} FROM plan WHERE local_date IN (SELECT value FROM json_each(?))
        AND EXISTS (SELECT 1 FROM subscription AS s WHERE s.id = plan.subscription_id AND s.state = 'active') ORDER BY id`;
      return db.read(sql, JSON.stringify(localDates));
    },
    /** What those subscribers were told of plans of these days, whatever became of it, the oldest first. */
    tellings(subscriptionIds: readonly string[], localDates: readonly string[], nowMs: number): Promise<PlanTelling[]> {
      const sql = `SELECT id, subscription_id AS subscriptionId, due_local_date AS localDate, seq, state, (lease_until IS NOT NULL AND lease_until > ?3) AS isLeased, content
        FROM outbox WHERE subscription_id IN (SELECT value FROM json_each(?1)) AND due_local_date IN (SELECT value FROM json_each(?2)) AND kind = 'plan'
        ORDER BY seq, id`;
      return db.read<PlanTelling>(sql, JSON.stringify(subscriptionIds), JSON.stringify(localDates), nowMs);
    },
  };
}

export type PlanStore = ReturnType<typeof planStore>;
