import { HOUR_MS, localDate, localDateTime } from '../../lib/time.ts';
import type { Services } from '../service-set.ts';

/** Wednesday, from noon on: nobody is asleep, and nobody waits for a brief. */
const WEEKDAY = 3;
const FROM_HOUR = 12;
const TO_HOUR = 18;

/** Once an hour; the key of the message makes it one a week. */
const EVERY_MS = HOUR_MS;

/** The whole way once a week: to every channel of every subscriber, fallbacks too, a message that is a test and says so. */
export async function planWeeklyTest(services: Services, nowMs: number, lastMs: number): Promise<void> {
  // Wednesday is somewhere from Tuesday noon to Thursday noon.
  if (nowMs - lastMs < EVERY_MS || Math.abs(new Date(nowMs).getUTCDay() - WEEKDAY) > 1) return;
  const { stores } = services;
  const groups = (await stores.absence.zones()).flatMap((timeZone) => {
    const dueLocalDate = localDate(nowMs, timeZone);
    const { hour } = localDateTime(nowMs, timeZone);
    const isTime = new Date(`${dueLocalDate}T00:00:00Z`).getUTCDay() === WEEKDAY && hour >= FROM_HOUR && hour < TO_HOUR;
    return isTime ? [{ timeZone, dueLocalDate }] : [];
  });
  await stores.db.together([
    ...(groups.length > 0 ? [stores.absence.planTests(groups, { nowMs, validUntilMs: nowMs + 3 * HOUR_MS })] : []),
    stores.meta.setting('last-weekly-test', String(nowMs)),
  ]);
}
