import type { Services } from '../service-set.ts';
import { compose, type Composed } from './compose.ts';
import { deliverOne } from './deliver-one.ts';
import { inLanes } from './lanes.ts';
import { marker } from './marks.ts';
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
  const mark = marker(stores.db);
  await inLanes(composed, laneOf, SENDS_SIDE_BY_SIDE, async (item) => {
    if (clock.nowMs() + SEND_TIMEOUT_MS + MARK_MS > item.row.leaseUntilMs) {
      putBack.push(item.row.id);
      return;
    }
    const { state, marks } = await deliverOne(services, item, by);
    await mark(marks);
    if (state === 'sent') reached.push(item.channel.id);
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
