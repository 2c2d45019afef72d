/** The status of the operator's desk: the same numbers as /healthz, with breakers and canaries besides. */
import { isoUtc } from '../../lib/time.ts';
import { operatorStatusPage, type BreakerView, type FullStatus } from '../web/operator/status-page.ts';
import { health } from './health.ts';
import type { Visit } from './operator-sites.ts';
import { shown } from './page-answers.ts';

/** Of a host of forecasts a state, of a push service that refuses us the instant until which it is left alone. */
function breakerOf(body: string, nowMs: number): Pick<BreakerView, 'failures' | 'openUntil'> {
  let found: { readonly failuresMs?: unknown; readonly openUntilMs?: unknown } | number | null;
  try {
    found = JSON.parse(body) as typeof found;
  } catch {
    found = null;
  }
  const untilMs = typeof found === 'number' ? found : found?.openUntilMs;
  const failures = typeof found === 'object' && Array.isArray(found?.failuresMs) ? found.failuresMs.length : 0;
  return { failures, openUntil: typeof untilMs === 'number' && untilMs > nowMs ? isoUtc(untilMs) : null };
}

export async function status({ services, stamp }: Visit): Promise<Response> {
  const answer = await health(services);
  if (!answer.ok) return answer;
  const full = await answer.json<FullStatus>();
  const { db, meta } = services.stores;
  const [rows, noted] = await Promise.all([db.read<{ source: string; body: string; at: number }>('SELECT source, body, stored_at AS at FROM breaker ORDER BY source'), meta.all()]);
  const breakers = rows.map(({ source, body, at }) => ({ name: source, ...breakerOf(body, services.clock.nowMs()), storedAt: isoUtc(at) }));
  const last = (step: string): string | null => full.steps[step]?.lastAt ?? null;
  const fault = (key: 'judge-fault' | 'clock-fault'): string => (noted.get(key) ?? '') || 'nothing was wrong';
  const canaries = [
    { name: 'The judge, against what is known', last: last('self-test'), says: fault('judge-fault') },
    { name: 'The clock', last: last('self-test'), says: fault('clock-fault') },
    { name: 'The books of messages', last: last('balance'), says: full.warnings.length === 0 ? 'nothing is missing' : 'look at what needs a look' },
    { name: 'The weekly test to every channel', last: last('weekly-test'), says: 'the whole way, once a week' },
    { name: 'The watchdog outside', last: last('heartbeat'), says: services.settings.heartbeatUrl === null ? 'none is set' : 'is told every five minutes' },
  ];
  // One that never sang says nothing yet.
  const heard = canaries.map((canary) => (canary.last === null && canary.says !== 'none is set' ? { ...canary, says: 'cannot say: it has not been asked yet' } : canary));
  return shown(operatorStatusPage({ title: `Status: ${full.status}`, stamp, status: full, breakers, canaries: heard }));
}
