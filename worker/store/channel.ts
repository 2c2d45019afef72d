import type { Database, Statement } from './database.ts';
import type { Mark } from './mark.ts';

/** Where a subscriber is reached: of the lowest rank first, the next rank when that one is dead. */
export interface StoredChannel {
  readonly id: string;
  readonly subscriptionId: string;
  readonly rank: number;
  /** Which channel of worker/channels: `webhook`, `terminal`. */
  readonly kind: string;
  /** What that channel needs to know, as JSON that only it reads. */
  readonly target: string;
  readonly state: 'unverified' | 'active' | 'dead';
  /** Link and signing secrets are derived from this number; the one before may still be valid. */
  readonly secretVersion: number;
  readonly oldestSecretVersion: number;
  /** Of its subscription: the links in a message are derived from it. */
  readonly linkVersion: number;
  readonly timeZone: string;
  /** Minutes of the subscriber's day between which nothing is sent there; both or neither. */
  readonly quietFrom: number | null;
  readonly quietTo: number | null;
  /** Of a browser: the id of our key that it signed up under; null when it is not known. */
  readonly pushKey: string | null;
}

const COLUMNS = `c.id, c.subscription_id AS subscriptionId, c.rank, c.kind, c.target, c.state, c.secret_version AS secretVersion,
  c.oldest_secret_version AS oldestSecretVersion, COALESCE(s.link_version, 1) AS linkVersion, COALESCE(s.time_zone, 'UTC') AS timeZone,
  c.quiet_from AS quietFrom, c.quiet_to AS quietTo, c.push_key AS pushKey FROM channel AS c LEFT JOIN subscription AS s ON s.id = c.subscription_id`;

/** A browser that is to be sent a nonce: leased to one sender. */
export interface ChannelToAsk extends Pick<StoredChannel, 'id' | 'target' | 'secretVersion' | 'oldestSecretVersion' | 'pushKey'> {}

/** A browser that did not answer is asked no more by itself. */
const ASKED_FOR_MS = 48 * 3_600_000;

export interface NewChannel extends Pick<StoredChannel, 'id' | 'subscriptionId' | 'rank' | 'kind' | 'target' | 'state'> {
  readonly quiet?: { readonly from: number; readonly to: number } | null;
  readonly pushKey?: string | null;
}

export function channelStore(db: Database) {
  return {
    some(ids: readonly string[]): Promise<StoredChannel[]> {
      return db.read<StoredChannel>(`SELECT ${COLUMNS} WHERE c.id IN (SELECT value FROM json_each(?))`, JSON.stringify(ids));
    },
    ofSubscription(id: string): Promise<StoredChannel[]> {
      return db.read<StoredChannel>(`SELECT ${COLUMNS} WHERE c.subscription_id = ? ORDER BY c.rank`, id);
    },
    /** How many that have not shown yet that they want to be told point at this host: a limit on using us against somebody. */
    async unverifiedAt(host: string): Promise<number> {
      const [row] = await db.read<{ n: number }>(`SELECT COUNT(*) AS n FROM channel WHERE state = 'unverified' AND target ->> 'host' = ?`, host);
      return row?.n ?? 0;
    },
    /** New ones are added as given; one that exists keeps its state and secrets and takes the rest. */
    put(channels: readonly NewChannel[], nowMs: number): Statement {
      return {
        sql: `INSERT INTO channel (id, subscription_id, rank, kind, target, state, quiet_from, quiet_to, push_key, stored_at, ask_at)
          SELECT value ->> 'id', value ->> 'subscriptionId', value ->> 'rank', value ->> 'kind', value ->> 'target', value ->> 'state',
            value ->> '$.quiet.from', value ->> '$.quiet.to', value ->> 'pushKey', ?2, CASE WHEN value ->> 'kind' = 'push' AND value ->> 'state' = 'unverified' THEN ?2 END
          FROM json_each(?1) WHERE true
          ON CONFLICT (id) DO UPDATE SET rank = excluded.rank, kind = excluded.kind, target = excluded.target`,
        values: [JSON.stringify(channels), nowMs],
      };
    },
    reached(ids: readonly string[], nowMs: number): Statement {
      return { sql: 'UPDATE channel SET reached_at = ? WHERE id IN (SELECT value FROM json_each(?))', values: [nowMs, JSON.stringify(ids)] };
    },
    /** It has shown that it wants to be told. */
    verify(id: string): Statement {
      return { sql: `UPDATE channel SET state = 'active', ask_at = NULL WHERE id = ? AND state = 'unverified'`, values: [id] };
    },
    /** Leases browsers that are to be sent a nonce; one that could not be sent is tried again ten minutes later. */
    claimAsks(nowMs: number, limit: number): Promise<ChannelToAsk[]> {
      return db.take<ChannelToAsk>(
        `UPDATE channel SET ask_at = CASE WHEN ?1 < stored_at + ${ASKED_FOR_MS} THEN ?1 + 600000 END
          WHERE id IN (SELECT id FROM channel WHERE ask_at <= ?1 ORDER BY ask_at LIMIT ?2) AND state = 'unverified'
          RETURNING id, target, secret_version AS secretVersion, oldest_secret_version AS oldestSecretVersion, push_key AS pushKey`,
        nowMs, limit,
      );
    },
    /** Somebody asked for it: it is to be sent a nonce, or (null) none any more. */
    askAt(id: string, atMs: number | null): Statement {
      return { sql: `UPDATE channel SET ask_at = ?2 WHERE id = ?1 AND state = 'unverified'`, values: [id, atMs] };
    },
    async asksWaiting(nowMs: number): Promise<boolean> {
      return (await db.read('SELECT 1 FROM channel WHERE ask_at <= ? LIMIT 1', nowMs)).length > 0;
    },
    ofBrowser(endpoint: string): Promise<StoredChannel[]> {
      return db.read<StoredChannel>(`SELECT ${COLUMNS} WHERE c.kind = 'push' AND c.target ->> 'endpoint' = ? ORDER BY c.id LIMIT 20`, endpoint);
    },
    /** A browser has another address: it has to show again that it asked. */
    moveTo(id: string, { target, pushKey }: { readonly target: string; readonly pushKey: string | null }, nowMs: number): Statement {
      return { sql: `UPDATE channel SET target = ?2, push_key = ?4, state = 'unverified', reason = NULL, ask_at = ?3, stored_at = ?3 WHERE id = ?1 AND kind = 'push'`, values: [id, target, nowMs, pushKey] };
    },
    /** A push service took a message for it under this key of ours. */
    underKey(id: string, pushKey: string): Mark {
      return { sql: `UPDATE channel SET push_key = j.value ->> 'pushKey' FROM json_each(?1) AS j WHERE channel.id = j.value ->> 'id'`, row: { id, pushKey } };
    },
    /** The keys that a browser has just shown are its keys, wherever else it is told. */
    rekey(target: string): Statement {
      return { sql: `UPDATE channel SET target = ?1 WHERE kind = 'push' AND target ->> 'endpoint' = ?1 ->> 'endpoint' AND target <> ?1`, values: [target] };
    },
    /** To which channel a message went. */
    async ofMessage(messageId: string): Promise<{ readonly id: string; readonly target: string } | null> {
      const [row] = await db.read<{ id: string; target: string }>('SELECT c.id, c.target FROM outbox AS o JOIN channel AS c ON c.id = o.channel_id WHERE o.id = ?', messageId);
      return row ?? null;
    },
    /** What came back goes to the channel of the next rank; who has none is paused, where it can be seen, and not dropped in silence. */
    afterBounce(messageId: string, nowMs: number): Statement[] {
      return [
        {
          sql: `INSERT INTO outbox (id, subscription_id, channel_id, due_local_date, kind, seq, format, due_at, ready_by, valid_until,
              state, next_attempt_at, content, created_at)
            SELECT 'msg_' || lower(hex(randomblob(16))), o.subscription_id, c.id, o.due_local_date, o.kind, o.seq, o.format, o.due_at,
              o.ready_by, o.valid_until, 'pending', ?2, o.content, ?2
            FROM outbox AS o JOIN channel AS c ON c.subscription_id = o.subscription_id AND c.state <> 'dead'
              AND c.rank = (SELECT MIN(rank) FROM channel WHERE subscription_id = o.subscription_id AND state <> 'dead')
            WHERE o.id = ?1 AND o.valid_until > ?2
            ON CONFLICT (subscription_id, channel_id, due_local_date, kind, seq) DO NOTHING`,
          values: [messageId, nowMs],
        },
        {
          sql: `UPDATE subscription SET state = 'paused' WHERE state = 'active' AND id = (SELECT subscription_id FROM outbox WHERE id = ?1)
            AND NOT EXISTS (SELECT 1 FROM channel WHERE subscription_id = subscription.id AND state <> 'dead')`,
          values: [messageId],
        },
      ];
    },
    /** Nothing is sent there again; its subscription stays. */
    end(id: string, reason: string): Statement {
      return { sql: `UPDATE channel SET state = 'dead', reason = ? WHERE id = ?`, values: [reason, id] };
    },
  };
}

export type ChannelStore = ReturnType<typeof channelStore>;
