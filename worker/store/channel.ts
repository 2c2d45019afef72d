import type { Database, Statement } from './database.ts';

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
}

const COLUMNS = `id, subscription_id AS subscriptionId, rank, kind, target, state, secret_version AS secretVersion,
  oldest_secret_version AS oldestSecretVersion`;

export function channelStore(db: Database) {
  return {
    some(ids: readonly string[]): Promise<StoredChannel[]> {
      return db.read<StoredChannel>(`SELECT ${COLUMNS} FROM channel WHERE id IN (SELECT value FROM json_each(?))`, JSON.stringify(ids));
    },
    /** New ones are added as given; one that exists keeps its state and secrets and takes the rest. */
    put(channels: readonly Pick<StoredChannel, 'id' | 'subscriptionId' | 'rank' | 'kind' | 'target' | 'state'>[], nowMs: number): Statement {
      return {
        sql: `INSERT INTO channel (id, subscription_id, rank, kind, target, state, stored_at)
          SELECT value ->> 'id', value ->> 'subscriptionId', value ->> 'rank', value ->> 'kind', value ->> 'target', value ->> 'state', ?2
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
      return { sql: `UPDATE channel SET state = 'active' WHERE id = ? AND state = 'unverified'`, values: [id] };
    },
    /** Nothing is sent there again; its subscription stays. */
    end(id: string, reason: string): Statement {
      return { sql: `UPDATE channel SET state = 'dead', reason = ? WHERE id = ?`, values: [reason, id] };
    },
  };
}

export type ChannelStore = ReturnType<typeof channelStore>;
