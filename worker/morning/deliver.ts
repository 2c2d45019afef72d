import type { Services } from '../service-set.ts';
import { compose, type Composed } from './compose.ts';
import { deliverOne, type Delivered } from './deliver-one.ts';
import { inLanes } from './lanes.ts';
import { marker } from './marks.ts';
import { pacer } from './pace.ts';
import { sendChunk, SENDS_SIDE_BY_SIDE } from './sizes.ts';
import { LEASE_MS, SEND_TIMEOUT_MS } from './times.ts';
import { traceOf } from '../say.ts';
import { statementsOf, type Mark } from '../store/mark.ts';
import { MINUTE_MS } from '../../lib/time.ts';

/** What is left of a lease must outlast a send and its mark, or somebody else would send the same again. */
const MARK_MS = 5000;

/** So long a mark waits for those of other sends that end with it. */
const GATHER_MS = 4;

/** The five statements that end the step, two wake-up calls, and one to spare for a fault that is logged. */
const CALLS_AT_THE_END = 8;

if (LEASE_MS < SEND_TIMEOUT_MS + MARK_MS) throw new Error(`a lease of ${LEASE_MS} ms does not outlast a send of up to ${SEND_TIMEOUT_MS} ms`);

/**
 * Last step: leases what is ready, puts it into words, sends, and marks each row right after its send. A crash between
 * the two repeats one message under the same id. True when there was something to do.
 */
export async function deliverStep(services: Services): Promise<boolean> {
  const { stores, clock } = services;
  const by = services.ids.next();
  const { mostCalls } = services.settings;
  const chunk = sendChunk(mostCalls);
  const rows = await stores.outbox.claim({ nowMs: clock.nowMs(), leaseMs: LEASE_MS, by, limit: chunk });
  if (rows.length === 0) return false;
  // There may be more: whoever answers goes on with it while these are being sent, and waits for no slow receiver of them.
  const woken = rows.length === chunk ? services.wake('deliver', 1) : undefined;
  const { composed, orphans } = await compose(services, rows);
  const reached: string[] = [];
  const putBack: string[] = [];
  const held: Mark[] = [];
  const pace = pacer(services.sleep, clock.nowMs);
  const ended: Ended[] = [];
  const laneOf = ({ channel }: Composed): string => services.channels[channel.kind]?.lane(channel) ?? channel.id;
  const mark = marker(stores.db, () => services.sleep(GATHER_MS));
  let sends = 0;
  let unmarked = 0;
  const isEnough = (needed: number): boolean => stores.db.asked() + sends + needed + unmarked + CALLS_AT_THE_END <= mostCalls;
  await inLanes(composed, laneOf, SENDS_SIDE_BY_SIDE, async (item, outside) => {
    const host = services.channels[item.channel.kind]?.host?.(item.channel);
    const turn = host === undefined ? null : pace.turn(host);
    if (turn !== null && !(await outside(turn))) {
      held.push(stores.outbox.hold(item.row.id, by, { atMs: clock.nowMs() + Math.round((0.25 + services.random()) * MINUTE_MS), reason: 'too many for the push service at once' }));
      return;
    }
    // One that has yet to show that it wants to be told is asked first, and has that marked too.
    const calls = item.channel.state === 'active' ? 1 : 2;
    if (!isEnough(2 * calls) || clock.nowMs() + SEND_TIMEOUT_MS + MARK_MS > item.row.leaseUntilMs) {
      putBack.push(item.row.id);
      return;
    }
    sends += calls;
    unmarked += calls;
    const { state, marks, isBusy } = await deliverOne(services, item, by);
    if (host !== undefined && (state === 'sent' || isBusy === true)) pace.answered(host, state === 'sent' ? 'taken' : 'busy');
    await mark(marks);
    unmarked -= calls;
    ended.push({ item, state });
    if (state === 'sent') reached.push(item.channel.id);
  });
  const nowMs = clock.nowMs();
  await stores.db.together([
    ...statementsOf([...held, ...orphans.map((row) => stores.outbox.settle(row.id, { state: 'suppressed', reason: 'the channel or every site of it is gone' }, nowMs))]),
    ...(putBack.length > 0 ? [stores.outbox.putBack(putBack, by)] : []),
    stores.channel.reached(reached, nowMs),
    stores.meta.setting('last-deliver', String(nowMs)),
  ]);
  sayEnded(services, ended);
  await woken;
  if (putBack.length > 0) await services.wake('deliver', 1);
  return true;
}

interface Ended {
  readonly item: Composed;
  readonly state: Delivered['state'];
}

/** A line a way to end and channel: a line a message costs as much as the sending of it. */
function sayEnded({ say }: Services, ended: readonly Ended[]): void {
  for (const some of Map.groupBy(ended, ({ item, state }) => `${state} ${item.channel.kind}`).values()) {
    const [first] = some;
    if (first === undefined) continue;
    const trace = [...new Set(some.flatMap(({ item }) => item.message.days.map(traceOf)))];
    say({ step: 'deliver', event: first.state, trace, detail: { channel: first.item.channel.kind, messages: some.map(({ item }) => item.row.id) } });
  }
}
