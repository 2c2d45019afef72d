import type { SendOutcome } from '../channels/channel.ts';
import type { Services } from '../service-set.ts';
import type { Statement } from '../store/database.ts';
import type { Mark } from '../store/mark.ts';
import type { SettledState } from '../store/outbox.ts';
import { nextAttempt } from './backoff.ts';
import type { Composed } from './compose.ts';
import { quietUntilMs } from './quiet.ts';
import { SEND_TIMEOUT_MS } from './times.ts';

/** What became of one message, and what says so in the tables. */
export interface Delivered {
  readonly state: SettledState | 'retry';
  readonly marks: readonly (Mark | Statement)[];
  /** It said that these are too many. */
  readonly isBusy?: boolean;
}

export async function deliverOne(services: Services, item: Composed, by: string): Promise<Delivered> {
  const { stores, clock } = services;
  const { row } = item;
  if (clock.nowMs() >= lastMomentOf(item)) {
    return { state: 'expired', marks: [stores.outbox.settle(row.id, { state: 'expired', reason: 'no longer valid when its turn came' }, clock.nowMs())] };
  }
  const quietMs = quietUntilMs(item.channel, clock.nowMs());
  if (quietMs !== null) return { state: 'retry', marks: [stores.outbox.hold(row.id, by, { atMs: quietMs, reason: 'quiet hours' })] };
  const outcome = await sendOne(services, item);
  const nowMs = clock.nowMs();
  switch (outcome.state) {
    case 'sent': {
      const verified = outcome.verified === true ? [stores.channel.verify(item.channel.id)] : [];
      const under = outcome.pushKey === undefined ? [] : [stores.channel.underKey(item.channel.id, outcome.pushKey)];
      return { state: 'sent', marks: [stores.outbox.settle(row.id, { state: 'sent', reason: 'taken by the receiver' }, nowMs), ...verified, ...under] };
    }
    case 'gone':
      return { state: 'dead', marks: [stores.channel.end(item.channel.id, outcome.reason), ...dead(services, item, outcome.reason)] };
    case 'refused':
      return { state: 'dead', marks: dead(services, item, outcome.reason) };
    case 'retry': {
      const next = nextAttempt({ nowMs, attempts: row.attempts, validUntilMs: lastMomentOf(item), afterMs: outcome.afterMs, random: services.random() });
      if ('atMs' in next) return { state: 'retry', isBusy: outcome.busy === true, marks: [stores.outbox.retry(row.id, by, { atMs: next.atMs, reason: outcome.reason })] };
      if (next.never === 'given up') return { state: 'dead', marks: dead(services, item, `given up after ${row.attempts} attempts; last: ${outcome.reason}`) };
      return { state: 'expired', marks: [stores.outbox.settle(row.id, { state: 'expired', reason: `no attempt left before it ceases to be valid; last: ${outcome.reason}` }, nowMs)] };
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
function dead(services: Services, { row }: Composed, reason: string): Mark[] {
  const nowMs = services.clock.nowMs();
  return [services.stores.outbox.settle(row.id, { state: 'dead', reason }, nowMs), services.stores.outbox.fallBack(row.id, nowMs)];
}
