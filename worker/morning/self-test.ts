import { clockFaults } from '../../lib/brief/self-test/clock.ts';
import { canaryFaults, selfTestFaults, type Judge } from '../../lib/brief/self-test/self-test.ts';
import type { CautionThresholds } from '../../lib/brief/thresholds.ts';
import type { Services } from '../service-set.ts';
import type { Statement } from '../store/database.ts';

/** Judges that have passed everything, for the life of an isolate: its code does not change. */
const proven = new WeakSet<Judge>();

/**
 * What the judge gets wrong: everything there is until it has passed once, after that the canaries and the quiet day
 * each time.
 */
export function selfTester(judge: Judge, thresholds: () => CautionThresholds): () => readonly string[] {
  return () => {
    const faults = proven.has(judge) ? canaryFaults(judge, thresholds()) : selfTestFaults(judge, thresholds());
    if (faults.length === 0) proven.add(judge);
    else proven.delete(judge);
    return faults;
  };
}

/** As many as tell what is wrong; a broken judge fails everywhere. */
const FAULTS_SAID = 3;

/**
 * Asked before every fan-out. A judge that fails judges nothing: the fault is written down, shown by /healthz, keeps the
 * heartbeat away, and subscribers are told that there is no brief.
 */
export async function isJudgeTrusted(services: Services): Promise<boolean> {
  const { stores, clock } = services;
  const faults = services.selfTest();
  const nowMs = clock.nowMs();
  const found = faults.slice(0, FAULTS_SAID).join('; ');
  const marks: Statement[] = [stores.meta.setting('judge-fault', found)];
  if (faults.length === 0) marks.push(stores.meta.setting('last-self-test', String(nowMs)));
  else if ((await stores.meta.all()).get('judge-fault') !== found) {
    await stores.log.write([{ level: 'error', step: 'self-test', event: 'judge-fault', detail: { faults: faults.length, first: found } }], nowMs);
  }
  await stores.db.together(marks);
  return faults.length === 0;
}

let clockChecked: string | null = null;

/** Once in the life of an isolate: whether its rules of time are ours. */
export async function checkClock(services: Services, known: string): Promise<void> {
  clockChecked ??= clockFaults().join(', ');
  if (clockChecked === known) return;
  const { stores, clock } = services;
  if (clockChecked !== '') await stores.log.write([{ level: 'error', step: 'self-test', event: 'clock-fault', detail: { zones: clockChecked } }], clock.nowMs());
  await stores.meta.set('clock-fault', clockChecked);
}
