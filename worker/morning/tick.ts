import { MINUTE_MS } from '../../lib/time.ts';
import type { Services } from '../service-set.ts';
import { schemaProblem, type MetaKey } from '../store/meta.ts';
import { planAbsent } from './absent.ts';
import { planAhead } from './ahead.ts';
import { BOARD_MINUTE, planBoard } from './board.ts';
import { tryCanary } from './canary.ts';
import { setBack } from './clock-back.ts';
import { planDue } from './due.ts';
import { beat } from './heartbeat.ts';
import { noticeChanges } from './notices.ts';
import { noticePlans } from './plan-notices.ts';
import { isRecheckDue, planRecheck } from './recheck.ts';
import { checkClock, isJudgeTrusted } from './self-test.ts';
import { sideStep } from './side-step.ts';
import { sweep, tidy } from './sweep.ts';
import { USUAL_PATIENCE, type Patience } from './times.ts';
import { planWeeklyTest } from './weekly-test.ts';

/** Ticks further apart than this mean that the platform did not call us. */
const GAP_MS = 5 * MINUTE_MS;

/**
 * Once a minute. The run's key comes from the scheduled time, so that a tick that is called twice works once; a tick that
 * never came is made up for by the next, because what is due is found by its time and not by the tick. A clock that was
 * ahead is set back before anything else.
 */
export async function tick(services: Services, scheduledAtMs: number, patience: Patience = USUAL_PATIENCE): Promise<void> {
  const { stores, clock } = services;
  const meta = await stores.meta.all();
  const problem = schemaProblem(meta.get('schema'));
  if (problem !== null) throw new Error(problem);
  const nowMs = clock.nowMs();
  if (await setBack(services, nowMs, Number(meta.get('last-tick') ?? 0))) return tick(services, scheduledAtMs, patience);
  if (!(await stores.run.beginTick(scheduledAtMs, nowMs))) return;
  const lastTickMs = Number(meta.get('last-tick') ?? nowMs);
  if (nowMs - lastTickMs > GAP_MS) {
    await stores.log.write([{ level: 'warning', step: 'tick', event: 'ticks-absent', detail: { minutes: Math.round((nowMs - lastTickMs) / MINUTE_MS) } }], nowMs);
  }
  await planDue(services, nowMs, patience);
  await sideStep(services, 'ahead', () => planAhead(services, nowMs));
  const isBoardMinute = new Date(scheduledAtMs).getUTCMinutes() === BOARD_MINUTE;
  if (isBoardMinute) await planBoard(services, nowMs);
  const lastMs = (key: MetaKey): number => Number(meta.get(key) ?? 0);
  await sideStep(services, 'self-test', async () => {
    await checkClock(services, meta.get('clock-fault') ?? '');
    if (nowMs - lastMs('last-self-test') > 10 * MINUTE_MS) await isJudgeTrusted(services);
  });
  if (isRecheckDue(nowMs, lastMs('last-recheck'))) await sideStep(services, 'recheck', () => planRecheck(services, nowMs, patience));
  const isJudgedAnew = lastMs('last-assess') >= lastMs('last-notice') - MINUTE_MS;
  if (isJudgedAnew || isBoardMinute) await sideStep(services, 'plan-notice', () => noticePlans(services, nowMs));
  if (isJudgedAnew) await sideStep(services, 'notice', () => noticeChanges(services, nowMs, lastMs('last-notice')));
  await sideStep(services, 'absent', () => planAbsent(services, nowMs, (meta.get('judge-fault') ?? '') !== ''));
  await sideStep(services, 'weekly-test', () => planWeeklyTest(services, nowMs, lastMs('last-weekly-test')));
  await sweep(services, nowMs);
  await tidy(services, nowMs, Number(meta.get('last-tidy') ?? 0));
  await sideStep(services, 'canary', () => tryCanary(services, nowMs, meta.get('canary')));
  await sideStep(services, 'heartbeat', () => beat(services, nowMs, meta));
  const done = stores.meta.setting('last-tick', String(nowMs));
  await stores.db.write(done.sql, ...done.values);
}
