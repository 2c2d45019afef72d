import { localDate, MINUTE_MS } from '../../lib/time.ts';
import type { Services } from '../service-set.ts';
import { groupsAhead, rewound, type ComingMorning } from '../store/rewind.ts';
import { DELIVER_WITHIN_MS, followingDueMs } from './times.ts';

/** Clocks of two machines may differ by so much. */
const USUAL_MS = 5 * MINUTE_MS;

/** Of a clock that was ahead for longer than a week only the mornings of the next one come again. */
const MOST_MORNINGS = 8;

/**
 * Before a tick does anything: when the last one was in the future, the clock has been ahead. What it has stamped is taken
 * back, mornings that it skipped come again, and none whose brief was sent is sent a second time.
 */
export async function setBack(services: Services, nowMs: number, lastTickMs: number): Promise<boolean> {
  if (lastTickMs <= nowMs + USUAL_MS) return false;
  const { stores } = services;
  const groups = await groupsAhead(stores.db, nowMs);
  const mornings = groups.flatMap((group): ComingMorning[] => {
    const coming: ComingMorning[] = [];
    for (let dueAtMs = followingDueMs(group, nowMs); dueAtMs < group.nextDueAtMs && coming.length < MOST_MORNINGS; dueAtMs = followingDueMs(group, dueAtMs)) {
      const { timeZone, deliverMinute, days } = group;
      coming.push({ timeZone, deliverMinute, days, dueAtMs, dueLocalDate: localDate(dueAtMs, timeZone) });
    }
    return coming;
  });
  await stores.db.together(rewound(nowMs, DELIVER_WITHIN_MS, mornings));
  await stores.log.write([{ level: 'error', step: 'tick', event: 'clock-went-back', detail: { minutes: Math.round((lastTickMs - nowMs) / MINUTE_MS) } }], nowMs);
  return true;
}
