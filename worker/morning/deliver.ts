import type { SendOutcome } from '../channels/channel.ts';
import type { Services } from '../service-set.ts';
import type { Statement } from '../store/database.ts';
import type { SettledState } from '../store/outbox.ts';
import { nextAttempt } from './backoff.ts';
import { compose, type Composed } from './compose.ts';
import { inLanes } from './lanes.ts';
import { quietUntilMs } from './quiet.ts';
import { SEND_CHUNK, SENDS_SIDE_BY_SIDE } from './sizes.ts';
import { LEASE_MS, SEND_TIMEOUT_MS } from './times.ts';

/** What is left of a lease must outlast a send and its mark, or somebody else would send the same again. */
const MARK_MS = 5000;

if (LEASE_MS < SEND_TIMEOUT_MS + MARK_MS) throw new Error(`a lease of ${LEASE_MS} ms does not outlast a send of up to ${SEND_TIMEOUT_MS} ms`);

/**
 * Last step: leases what is ready, puts it into words, sends, and marks each row right after its send. A crash between
 * the two repeats one message under the same id. True when there was something to do.
 */
export async function deliverStep(services: Services): Promise<boolean> {
  const { stores, clock } = services;
  const by = services.ids.next();
  const rows = await stores.outbox.claim({ nowMs: clock.nowMs(), leaseMs: LEASE_MS, by, limit: SEND_CHUNK });
  if (rows.length === 0) return false;
  // There may be more: whoever answers goes on with it while these are being sent, and waits for no slow receiver of them.
  if (rows.length === SEND_CHUNK) await services.wake('deliver', 1);
  const { composed, orphans } = await compose(services, rows);
  const reached: string[] = [];
  const putBack: string[] = [];
  const laneOf = ({ channel }: Composed): string => services.channels[channel.kind]?.lane(channel) ?? channel.id;
  await inLanes(composed, laneOf, SENDS_SIDE_BY_SIDE, async (item) => {
    if (clock.nowMs() + SEND_TIMEOUT_MS + MARK_MS > item.row.leaseUntilMs) putBack.push(item.row.id);
    else if ((await deliverOne(services, item, by)) === 'sent') reached.push(item.channel.id);
  });
  const nowMs = clock.nowMs();
  await stores.db.together([
    ...orphans.map((row) => stores.outbox.settle(row.id, { state: 'suppressed', reason: 'the channel or every site of it is gone' }, nowMs)),
    ...(putBack.length > 0 ? [stores.outbox.putBack(putBack, by)] : []),
    stores.channel.reached(reached, nowMs),
    stores.meta.setting('last-deliver', String(nowMs)),
  ]);
  if (putBack.length > 0) await services.wake('deliver', 1);
  return true;
}

async function deliverOne(services: Services, item: Composed, by: string): Promise<SettledState | 'retry'> {
  const { stores, clock } = services;
  const { row } = item;
  if (clock.nowMs() >= lastMomentOf(item)) {
    return mark(services, [stores.outbox.settle(row.id, { state: 'expired', reason: 'no longer valid when its turn came' }, clock.nowMs())], 'expired');
  }
  const quietMs = quietUntilMs(item.channel, clock.nowMs());
  if (quietMs !== null) return mark(services, [stores.outbox.hold(row.id, by, quietMs)], 'retry');
  const outcome = await sendOne(services, item);
  const nowMs = clock.nowMs();
  switch (outcome.state) {
    case 'sent': {
      const verified = outcome.verified === true ? [stores.channel.verify(item.channel.id)] : [];
      return mark(services, [stores.outbox.settle(row.id, { state: 'sent', reason: 'taken by the receiver' }, nowMs), ...verified], 'sent');
    }
    case 'gone':
      return mark(services, [stores.channel.end(item.channel.id, outcome.reason), ...dead(services, item, outcome.reason)], 'dead');
    case 'refused':
      return mark(services, dead(services, item, outcome.reason), 'dead');
    case 'retry': {
      const next = nextAttempt({ nowMs, attempts: row.attempts, validUntilMs: lastMomentOf(item), afterMs: outcome.afterMs, random: services.random() });
      if ('atMs' in next) return mark(services, [stores.outbox.retry(row.id, by, { atMs: next.atMs, reason: outcome.reason })], 'retry');
      if (next.never === 'given up') return mark(services, dead(services, item, `given up after ${row.attempts} attempts; last: ${outcome.reason}`), 'dead');
      return mark(services, [stores.outbox.settle(row.id, { state: 'expired', reason: `no attempt left before it ceases to be valid; last: ${outcome.reason}` }, nowMs)], 'expired');
    }
  }
}

/** Neither later than a message is of use, nor later than what it says holds. */
function lastMomentOf({ row, message }: Pick<Composed, 'row' | 'message'>): number {
  return Math.min(row.validUntilMs, message.validUntilMs);
}

/** A channel that throws has a fault of ours: the message is tried again like after any other failure. */
async function sendOne(services: Services, { row, channel, message }: Composed): Promise<SendOutcome> {
  const carrier = services.channels[channel.kind];
  if (carrier === undefined) return { state: 'retry', reason: `this service has no channel "${channel.kind}"`, afterMs: null };
  try {
    return await carrier.send(message, channel, { number: row.attempts, nowMs: services.clock.nowMs(), timeoutMs: SEND_TIMEOUT_MS, untilMs: lastMomentOf({ row, message }) });
  } catch (error) {
    const fault = error instanceof Error ? error.name : 'unknown';
    await services.stores.log.write([{ level: 'error', step: 'deliver', event: 'channel-threw', detail: { kind: channel.kind, message: row.id, fault } }], services.clock.nowMs());
    return { state: 'retry', reason: `a fault of this service: ${fault}`, afterMs: null };
  }
}

/** The end of a message on one channel, and its new beginning on the next in rank. */
function dead(services: Services, { row }: Composed, reason: string): Statement[] {
  const nowMs = services.clock.nowMs();
  return [services.stores.outbox.settle(row.id, { state: 'dead', reason }, nowMs), services.stores.outbox.fallBack(row.id, nowMs)];
}

async function mark<T>(services: Services, statements: readonly Statement[], state: T): Promise<T> {
  await services.stores.db.together(statements);
  return state;
}
