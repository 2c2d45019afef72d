/** The outbox as one subscriber sees it: what was sent where, what became of it, and tests that are asked for. */
import type { Database, Statement } from './database.ts';
import { OUTBOX_FORMAT, type MessageKind, type SettledState } from './outbox.ts';

export interface Delivery {
  readonly id: string;
  readonly channelId: string;
  readonly kind: MessageKind;
  readonly dueLocalDate: string;
  readonly state: SettledState | 'pending';
  readonly reason: string | null;
  readonly createdAtMs: number;
  readonly settledAtMs: number | null;
  /** Of a push: when the browser said that it showed it. */
  readonly shownAtMs: number | null;
  /** Nothing was tried yet. */
  readonly attempts: number;
}

/** Newest first. */
export function deliveriesOf(db: Database, subscriptionId: string, sinceMs: number): Promise<Delivery[]> {
  return db.read<Delivery>(
    `SELECT id, channel_id AS channelId, kind, due_local_date AS dueLocalDate, state, reason, created_at AS createdAtMs, settled_at AS settledAtMs,
      shown_at AS shownAtMs, attempts FROM outbox WHERE subscription_id = ? AND created_at >= ? ORDER BY created_at DESC, seq DESC LIMIT 200`,
    subscriptionId, sinceMs,
  );
}

/** When each channel last took something, and the last of it that a browser showed. */
export async function reachedOf(db: Database, subscriptionId: string): Promise<ReadonlyMap<string, { readonly reachedAtMs: number | null; readonly shownAtMs: number | null; readonly reason: string | null }>> {
  const rows = await db.read<{ id: string; reachedAtMs: number | null; shownAtMs: number | null; reason: string | null }>(
    `SELECT c.id, c.reached_at AS reachedAtMs, c.reason, (SELECT MAX(shown_at) FROM outbox AS o WHERE o.subscription_id = c.subscription_id AND o.channel_id = c.id) AS shownAtMs
      FROM channel AS c WHERE c.subscription_id = ?`,
    subscriptionId,
  );
  return new Map(rows.map(({ id, ...row }) => [id, row]));
}

/** A test of one channel, to be sent like any message. `messageId` makes a repeat of the statement one test. */
export function plannedTest(test: { readonly messageId: string; readonly subscriptionId: string; readonly channelId: string; readonly localDate: string; readonly nowMs: number; readonly validUntilMs: number }): Statement {
  return {
    sql: `INSERT INTO outbox (id, subscription_id, channel_id, due_local_date, kind, seq, format, due_at, ready_by, valid_until, state, next_attempt_at, content, created_at)
      SELECT ?1, c.subscription_id, c.id, ?4, 'test', 1 + COALESCE((SELECT MAX(seq) FROM outbox WHERE subscription_id = ?2 AND channel_id = ?3 AND due_local_date = ?4 AND kind = 'test'), 1),
        ${OUTBOX_FORMAT}, ?5, ?5, ?6, 'pending', ?5, json_object('issuedAtMs', ?5, 'briefs', json('[]'), 'reachedAtMs', c.reached_at, 'asked', json('true')), ?5
      FROM channel AS c WHERE c.id = ?3 AND c.subscription_id = ?2 ON CONFLICT DO NOTHING`,
    values: [test.messageId, test.subscriptionId, test.channelId, test.localDate, test.nowMs, test.validUntilMs],
  };
}

/** The id of a message is known to us and to the browser that decrypted it: whoever names it has shown it. */
export function shown(db: Database, messageId: string, nowMs: number): Promise<number> {
  return db.write(
    `UPDATE outbox SET shown_at = ?2 WHERE id = ?1 AND shown_at IS NULL AND state IN ('pending', 'sent') AND EXISTS (SELECT 1 FROM channel WHERE id = outbox.channel_id AND kind = 'push')`,
    messageId, nowMs,
  );
}

/** The channels of a subscription in this order: of each the next is told when it has ended. */
export function orderChannels(subscriptionId: string, ids: readonly string[]): Statement {
  return {
    sql: 'UPDATE channel SET rank = j.key FROM json_each(?2) AS j WHERE channel.subscription_id = ?1 AND channel.id = j.value',
    values: [subscriptionId, JSON.stringify(ids)],
  };
}

export function setQuiet(subscriptionId: string, channelId: string, quiet: { readonly from: number; readonly to: number } | null): Statement {
  return { sql: 'UPDATE channel SET quiet_from = ?3, quiet_to = ?4 WHERE subscription_id = ?1 AND id = ?2', values: [subscriptionId, channelId, quiet?.from ?? null, quiet?.to ?? null] };
}

/** A secret of the next version; the one before signs beside it, and no third. Asked twice from one page it is made once. */
export function renewSecret(subscriptionId: string, channelId: string, version: number): Statement {
  return {
    sql: `UPDATE channel SET secret_version = ?3 + 1, oldest_secret_version = ?3 WHERE subscription_id = ?1 AND id = ?2 AND kind = 'webhook' AND secret_version = ?3`,
    values: [subscriptionId, channelId, version],
  };
}

export function dropOldSecret(subscriptionId: string, channelId: string): Statement {
  return { sql: 'UPDATE channel SET oldest_secret_version = secret_version WHERE subscription_id = ?1 AND id = ?2', values: [subscriptionId, channelId] };
}

/** One of several: the last way to reach somebody is only taken away with the subscription. */
export function removeChannel(subscriptionId: string, channelId: string): Statement {
  return {
    sql: `DELETE FROM channel WHERE subscription_id = ?1 AND id = ?2 AND EXISTS (SELECT 1 FROM channel WHERE subscription_id = ?1 AND id <> ?2 AND state <> 'dead')`,
    values: [subscriptionId, channelId],
  };
}
