import { HOUR_MS } from '../../lib/time.ts';
import type { Services } from '../service-set.ts';
import { UNCONFIRMED_MS } from '../store/signup.ts';
import { ASSESS_CHUNK, SEND_CHUNK } from './sizes.ts';

/** Wake-up calls for one step in one minute: more work than that is finished by those who are awake. */
const MOST_CALLS = 10;

const TIDY_EVERY_MS = 24 * HOUR_MS;

/**
 * Every minute: closes what is overdue, gives up what never came back, and wakes whoever has work to do. The queues may
 * lose every message: this alone finishes a morning, a few minutes later.
 */
export async function sweep(services: Services, nowMs: number): Promise<void> {
  const { stores } = services;
  const silent = await stores.subscription.neverVerified(nowMs - UNCONFIRMED_MS);
  await stores.db.together([
    ...silent.flatMap((id) => stores.subscription.erase(id)),
    stores.outboxUpkeep.closeOverdue(nowMs),
    stores.runWork.giveUp(nowMs),
    stores.outbox.bringForward(null, nowMs),
    stores.subscription.resumeDue(nowMs),
    stores.signup.dropExpired(nowMs),
    stores.token.dropExpired(nowMs),
    stores.meta.setting('last-sweep', String(nowMs)),
  ]);
  const work = await stores.run.ready(nowMs, ASSESS_CHUNK, null);
  const messages = await stores.outbox.readyCount(nowMs);
  if (work.fetch > 0) await services.wake('fetch', 1);
  await services.wake('assess', Math.min(MOST_CALLS, work.assessJobs));
  if (messages === 0 && ((services.mailer !== null && (await stores.signup.waiting(nowMs))) || (await stores.channel.asksWaiting(nowMs)))) await services.wake('deliver', 1);
  await services.wake('deliver', Math.min(MOST_CALLS, Math.ceil(messages / SEND_CHUNK)));
}

/** Once a day: forgets what has been kept long enough. */
export async function tidy(services: Services, nowMs: number, lastTidyMs: number): Promise<void> {
  if (nowMs - lastTidyMs < TIDY_EVERY_MS) return;
  const { stores } = services;
  await stores.db.together([
    stores.forecast.dropOld(nowMs),
    stores.brief.dropOld(nowMs),
    stores.outboxUpkeep.dropOld(nowMs),
    ...stores.run.dropOld(nowMs),
    stores.sourceCache.dropExpired(nowMs),
    stores.rate.dropOld(nowMs),
    stores.log.dropOld(nowMs),
    stores.meta.setting('last-tidy', String(nowMs)),
  ]);
}
