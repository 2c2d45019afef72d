import { HOUR_MS, MINUTE_MS } from '../../lib/time.ts';
import type { Services } from '../service-set.ts';
import { takesMs } from '../sources/order.ts';
import type { WantedFetch } from '../store/run.ts';
import { placesOf } from './places.ts';
import { FETCH_CHUNK } from './sizes.ts';
import { USUAL_PATIENCE } from './times.ts';
import { wantedAssessments, wantedFetches } from './wants.ts';

/** Further ahead nobody fetches: a forecast of three hours ago would be fetched again. */
const LOOK_AHEAD_MS = 2 * HOUR_MS;
const EVERY_MIN = 5;
/** So many sites are asked about while a brief waits for its forecasts anyway. */
const FEW_SITES = 25;
const RESERVE_MS = 10 * MINUTE_MS;

/**
 * A morning that asks more than the services' quota holds in a few minutes begins before it is due: as late as it can, since
 * every hour brings newer runs, and as early as it must, by the same arithmetic that npm run quota prints.
 */
export async function planAhead(services: Services, nowMs: number): Promise<void> {
  if (Math.floor(nowMs / MINUTE_MS) % EVERY_MIN !== 0) return;
  const { stores } = services;
  const pairs = (await stores.subscription.duePairs(nowMs + LOOK_AHEAD_MS)).map((pair) => ({ ...pair, dueAtMs: pair.nextDueAtMs }));
  const siteIds = [...new Set(pairs.map(({ siteId }) => siteId))];
  if (siteIds.length <= FEW_SITES) return;
  const places = await placesOf(services, siteIds);
  const fetches = await wantedFetches(services, { places, assessments: wantedAssessments(places, pairs, USUAL_PATIENCE), nowMs });
  const weightOf = new Map([...places.values()].flatMap((place) => services.sourcesFor(place)).map(({ id, weightPerSite = 0 }) => [id, weightPerSite]));
  // Not begun now, it would begin when this is next looked at; full hours make that a difference of up to an hour.
  const nextMs = nowMs + EVERY_MIN * MINUTE_MS;
  const wouldEndMs = nextMs + takesMs(questionsOf(fetches, weightOf), nextMs);
  if (wouldEndMs + RESERVE_MS <= Math.min(...fetches.map(({ dueAtMs }) => dueAtMs))) return;
  await stores.db.together([stores.run.wantFetches(fetches)]);
  await services.wake('fetch', 1);
}

/** The weights of the questions that fetches make, so many sites of one source to a question. */
function questionsOf(fetches: readonly WantedFetch[], weightOf: ReadonlyMap<string, number>): number[] {
  const sites = new Map<string, number>();
  for (const { source } of fetches) sites.set(source, (sites.get(source) ?? 0) + 1);
  return [...sites].flatMap(([source, count]) =>
    Array.from({ length: Math.ceil(count / FETCH_CHUNK) }, (_, i) => Math.min(FETCH_CHUNK, count - i * FETCH_CHUNK) * (weightOf.get(source) ?? 0)));
}
