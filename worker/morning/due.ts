import { localDate } from '../../lib/time.ts';
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

/**
 * First step of a morning: everyone whose minute has come gets a row in the outbox, what their briefs need and what the
 * board shows of the same sites becomes rows of work, and their next morning is set, all in one transaction. Run twice, or
 * hours late, it plans nothing twice.
 */
export async function planDue(services: Services, nowMs: number, patience: Patience = USUAL_PATIENCE): Promise<Planned> {
  const { stores } = services;
  const groups = await stores.subscription.dueGroups(nowMs);
  if (groups.length === 0) return { groups: 0, fetches: 0, assessments: 0 };
  const pairs = await stores.subscription.duePairs(nowMs);
  const places = await placesOf(services, [...new Set(pairs.map((pair) => pair.siteId))]);
  const published = await stores.published.all();
  const shown = pairs.flatMap((pair) => published.filter(({ siteId }) => siteId === pair.siteId).map((other) => ({ ...other, dueAtMs: pair.dueAtMs })));
  const assessments = wantedAssessments(places, [...pairs, ...shown], patience);
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
