import { HOUR_MS, localDate } from '../../lib/time.ts';
import type { Services } from '../service-set.ts';
import type { PlannedGroup } from '../store/outbox.ts';
import type { DueGroup } from '../store/subscription.ts';
import { placesOf } from './places.ts';
import { DELIVER_WITHIN_MS, followingDueMs, USUAL_PATIENCE, type Patience } from './times.ts';
import { wantedAssessments, wantedFetches } from './wants.ts';

export interface Planned {
  readonly groups: number;
  readonly fetches: number;
  readonly assessments: number;
}

/** Mornings that nobody came for are owned up to one by one for so long; of a longer silence the first is, too. */
const OWNED_UP_MS = 7 * 24 * HOUR_MS;

/**
 * First step of a morning: everyone whose minute has come gets a row in the outbox, what their briefs need and what the
 * board shows of the same sites becomes rows of work, and their next morning is set, all in one transaction. Run twice, or
 * hours late, it plans nothing twice; run days late, it leaves no morning out.
 */
export async function planDue(services: Services, nowMs: number, patience: Patience = USUAL_PATIENCE): Promise<Planned> {
  const { stores } = services;
  const groups = await stores.subscription.dueGroups(nowMs);
  if (groups.length === 0) return { groups: 0, fetches: 0, assessments: 0 };
  const mornings = groups.map((group) => ({ group, ...morningsOf(group, nowMs) }));
  const newestMs = new Map(mornings.map((morning) => [groupKey(morning.group), morning.newestMs]));
  const pairs = (await stores.subscription.duePairs(nowMs)).flatMap(({ siteId, wingKey, sheetId, ...group }) => {
    const dueAtMs = newestMs.get(groupKey(group));
    return dueAtMs === undefined ? [] : [{ siteId, wingKey, sheetId, dueAtMs }];
  });
  const places = await placesOf(services, [...new Set(pairs.map((pair) => pair.siteId))]);
  const published = Map.groupBy(await stores.published.all(), ({ siteId }) => siteId);
  const shown = pairs.flatMap((pair) => (published.get(pair.siteId) ?? []).map((other) => ({ ...other, dueAtMs: pair.dueAtMs })));
  const assessments = wantedAssessments(places, [...pairs, ...shown], patience);
  const fetches = await wantedFetches(services, { places, assessments, nowMs });
  await stores.db.together([
    stores.run.wantFetches(fetches),
    stores.run.wantAssessments(assessments),
    stores.outbox.plan(mornings.flatMap(({ group, comeMs }) => comeMs.map((dueAtMs) => plannedMorning({ group, dueAtMs, nowMs, patience }))), nowMs),
    stores.subscription.advance(mornings.map(({ group, followingAtMs }) => ({ ...group, followingAtMs }))),
  ]);
  return { groups: groups.length, fetches: fetches.length, assessments: assessments.length };
}

function groupKey({ timeZone, deliverMinute, nextDueAtMs, days }: DueGroup): string {
  return `${timeZone} ${deliverMinute} ${nextDueAtMs} ${days}`;
}

/** The mornings of a group that have come, and the first that has not. */
function morningsOf(group: DueGroup, nowMs: number): { readonly comeMs: readonly number[]; readonly newestMs: number; readonly followingAtMs: number } {
  const comeMs = [group.nextDueAtMs];
  let newestMs = group.nextDueAtMs;
  for (let atMs = Math.max(newestMs, nowMs - OWNED_UP_MS); ; atMs = newestMs) {
    const followingAtMs = followingDueMs(group, atMs);
    if (followingAtMs > nowMs) return { comeMs, newestMs, followingAtMs };
    newestMs = followingAtMs;
    comeMs.push(newestMs);
  }
}

/** A morning that is found too late to be of use is owned up to instead. */
function plannedMorning({ group, dueAtMs, nowMs, patience }: { readonly group: DueGroup; readonly dueAtMs: number; readonly nowMs: number; readonly patience: Patience }): PlannedGroup {
  const isMissed = nowMs >= dueAtMs + DELIVER_WITHIN_MS;
  return {
    ...group,
    kind: isMissed ? 'missed' : 'brief',
    dueLocalDate: localDate(dueAtMs, group.timeZone),
    dueAtMs,
    readyByMs: Math.max(dueAtMs, nowMs) + patience.readyWithinMs,
    validUntilMs: (isMissed ? nowMs : dueAtMs) + DELIVER_WITHIN_MS,
  };
}
