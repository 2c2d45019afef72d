import { localDate } from '../../lib/time.ts';
import type { Place, Services } from '../service-set.ts';
import type { PlannedGroup } from '../store/outbox.ts';
import type { Pair } from '../store/published.ts';
import { fetchKey, type WantedAssess, type WantedFetch } from '../store/run.ts';
import type { DueGroup } from '../store/subscription.ts';
import { placesOf } from './places.ts';
import { DELIVER_WITHIN_MS, followingDueMs, judgedDate, REFETCH_AFTER_MS, RETRY_FAILED_FETCH_AFTER_MS, USUAL_PATIENCE, type Patience } from './times.ts';

/**
 * First step of a morning: everyone whose minute has come gets a row in the outbox, what their briefs need becomes rows
 * of work, and their next morning is set, all in one transaction. Run twice, or hours late, it plans nothing twice.
 */
export interface Planned {
  readonly groups: number;
  readonly fetches: number;
  readonly assessments: number;
}

export async function planDue(services: Services, nowMs: number, patience: Patience = USUAL_PATIENCE): Promise<Planned> {
  const { stores } = services;
  const groups = await stores.subscription.dueGroups(nowMs);
  if (groups.length === 0) return { groups: 0, fetches: 0, assessments: 0 };
  const pairs = await stores.subscription.duePairs(nowMs);
  const places = await placesOf(services, [...new Set(pairs.map((pair) => pair.siteId))]);
  const published = (await stores.published.all()).filter((pair) => places.has(pair.siteId));
  const assessments = wantedAssessments({ places, pairs, published, patience });
  const fetches = await wantedFetches(services, { places, assessments, nowMs });
  const following = groups.map((group) => ({ ...group, followingAtMs: followingDueMs(group, nowMs) }));
  await stores.db.together([
    stores.run.wantFetches(fetches),
    stores.run.wantAssessments(assessments),
    stores.outbox.plan(groups.map((group) => plannedGroup(group, nowMs, patience)), nowMs),
    stores.subscription.advance(following),
  ]);
  return { groups: groups.length, fetches: fetches.length, assessments: assessments.length };
}

/** A morning that is found too late to be of use is owned up to instead. */
function plannedGroup(group: DueGroup, nowMs: number, patience: Patience): PlannedGroup {
  const isMissed = nowMs >= group.nextDueAtMs + DELIVER_WITHIN_MS;
  const dueAtMs = group.nextDueAtMs;
  return {
    ...group,
    kind: isMissed ? 'missed' : 'brief',
    dueLocalDate: localDate(dueAtMs, group.timeZone),
    dueAtMs,
    readyByMs: Math.max(dueAtMs, nowMs) + patience.readyWithinMs,
    validUntilMs: (isMissed ? nowMs : dueAtMs) + DELIVER_WITHIN_MS,
  };
}

/** What subscribers want, and with it what the board shows of the same sites on the same dates. */
function wantedAssessments({ places, pairs, published, patience }: {
  readonly places: ReadonlyMap<string, Place>;
  readonly pairs: readonly (Pair & { readonly dueAtMs: number })[];
  readonly published: readonly Pair[];
  readonly patience: Patience;
}): WantedAssess[] {
  const wanted = new Map<string, WantedAssess>();
  const want = (pair: Pair, localDate: string, dueAtMs: number): void => {
    const key = JSON.stringify([pair.siteId, localDate, pair.wingKey, pair.sheetId]);
    const earlier = wanted.get(key);
    const earliestMs = Math.min(earlier?.dueAtMs ?? dueAtMs, dueAtMs);
    wanted.set(key, { siteId: pair.siteId, wingKey: pair.wingKey, sheetId: pair.sheetId, localDate, dueAtMs: earliestMs, startByMs: earliestMs + patience.assessWithinMs });
  };
  for (const pair of pairs) {
    const place = places.get(pair.siteId);
    if (place === undefined) continue;
    const date = judgedDate(place.site, pair.dueAtMs);
    want(pair, date, pair.dueAtMs);
    for (const other of published) if (other.siteId === pair.siteId) want(other, date, pair.dueAtMs);
  }
  return [...wanted.values()];
}

async function wantedFetches(
  services: Services,
  { places, assessments, nowMs }: { places: ReadonlyMap<string, Place>; assessments: readonly WantedAssess[]; nowMs: number },
): Promise<WantedFetch[]> {
  const siteDays = new Map(assessments.map((item) => [`${item.siteId}|${item.localDate}`, item]));
  const fresh = await services.stores.run.fresh([...siteDays.values()].map(({ siteId, localDate }) => ({ siteId, localDate })), {
    goodMs: nowMs - REFETCH_AFTER_MS,
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
