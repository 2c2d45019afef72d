import { MINUTE_MS } from '../../lib/time.ts';
import type { Services } from '../service-set.ts';
import type { Books } from '../store/absence.ts';

const EVERY_MS = 5 * MINUTE_MS;
const TIMEOUT_MS = 5000;

/** Why the books do not balance; nothing when they do. */
export function imbalances(books: Books, faults: { readonly judge: string; readonly clock: string }): string[] {
  const said = (count: number, what: string): string[] => (count === 0 ? [] : [`${count} ${what}`]);
  return [
    ...said(books.unplanned, 'mornings were not planned'),
    ...said(books.stuck, 'messages wait and nobody sends them'),
    ...said(books.overdue, 'messages are open after their time'),
    ...said(books.unaccounted, 'messages ended without a reason'),
    ...said(books.refusals, 'push services refuse this sender: are the VAPID keys right?'),
    ...(faults.judge === '' ? [] : [`the judge failed its self-test: ${faults.judge}`]),
    ...(faults.clock === '' ? [] : [`the rules of time differ for ${faults.clock}: every time is said in UTC`]),
  ];
}

/**
 * Tells a watchdog outside that all is well, and only then: every morning planned, nothing stuck, nothing lost, judge and
 * clock trusted. Whoever watches hears by silence that it is not.
 */
export async function beat(services: Services, nowMs: number, meta: ReadonlyMap<string, string>): Promise<void> {
  if (nowMs - Number(meta.get('last-balance') ?? 0) < EVERY_MS) return;
  const { stores } = services;
  const fresh = await stores.meta.all();
  const wrong = imbalances(await stores.absence.books(nowMs), { judge: fresh.get('judge-fault') ?? '', clock: fresh.get('clock-fault') ?? '' });
  if (wrong.length > 0) {
    await stores.log.write([{ level: 'error', step: 'heartbeat', event: 'books-do-not-balance', detail: { first: wrong[0] ?? '' } }], nowMs);
    return;
  }
  await stores.meta.set('last-balance', String(nowMs));
  if (await services.heartbeat()) await stores.meta.set('last-heartbeat', String(nowMs));
}

/** False when nobody is to be told, or could be. The address is a secret: it is in no log. */
export function heart(url: string | null, fetch: (url: string, init: RequestInit) => Promise<Response>): () => Promise<boolean> {
  return async () => {
    if (url === null) return false;
    try {
      const response = await fetch(url, { method: 'GET', redirect: 'manual', signal: AbortSignal.timeout(TIMEOUT_MS) });
      await response.body?.cancel().catch(() => undefined);
      return response.ok;
    } catch {
      return false;
    }
  };
}
