import type { Place, Services } from '../service-set.ts';
import type { Pair } from '../store/published.ts';
import { assessKey, fetchKey, type WantedAssess, type WantedFetch } from '../store/run.ts';
import { judgedDate, REFETCH_AFTER_MS, RETRY_FAILED_FETCH_AFTER_MS, type Patience } from './times.ts';

/** The pair-days to judge for pairs that somebody is due to be told about, each once and as early as anyone is due. */
export function wantedAssessments(places: ReadonlyMap<string, Place>, pairs: readonly (Pair & { readonly dueAtMs: number })[], patience: Patience): WantedAssess[] {
  const wanted = new Map<string, WantedAssess>();
  for (const { siteId, wingKey, sheetId, dueAtMs } of pairs) {
    const place = places.get(siteId);
    if (place === undefined) continue;
    const pairDay = { siteId, wingKey, sheetId, localDate: judgedDate(place.site, dueAtMs) };
    const earliestMs = Math.min(wanted.get(assessKey(pairDay))?.dueAtMs ?? dueAtMs, dueAtMs);
    wanted.set(assessKey(pairDay), { ...pairDay, dueAtMs: earliestMs, startByMs: earliestMs + patience.assessWithinMs });
  }
  return [...wanted.values()];
}

/** The fetches that those need: of every source of a site that has not been asked lately. */
export async function wantedFetches(
  services: Services,
  { places, assessments, nowMs, refetchAfterMs = REFETCH_AFTER_MS }: {
    readonly places: ReadonlyMap<string, Place>;
    readonly assessments: readonly WantedAssess[];
    readonly nowMs: number;
    readonly refetchAfterMs?: number;
  },
): Promise<WantedFetch[]> {
  const siteDays = new Map(assessments.map((item) => [`${item.siteId}|${item.localDate}`, item]));
  const fresh = await services.stores.run.fresh([...siteDays.values()].map(({ siteId, localDate }) => ({ siteId, localDate })), {
    goodMs: nowMs - refetchAfterMs,
    failedMs: nowMs - RETRY_FAILED_FETCH_AFTER_MS,
  });
  const wanted: WantedFetch[] = [];
  for (const { siteId, localDate, dueAtMs } of siteDays.values()) {
    const place = places.get(siteId);
    if (place === undefined) continue;
    for (const [position, source] of services.sourcesFor(place).entries()) {
      const fetch = { siteId, localDate, source: source.id };
      if (!fresh.has(fetchKey(fetch))) wanted.push({ ...fetch, dueAtMs, position });
    }
  }
  return wanted;
}
