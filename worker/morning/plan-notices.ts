import type { JudgedDay } from '../../lib/brief/day.ts';
import { planChanges } from '../../lib/plan/changes.ts';
import type { DayPlan } from '../../lib/plan/day-plan.ts';
import { dayKey, type PlanRequest } from '../../lib/plan/request.ts';
import { isNews, type TurnedPlan } from '../../lib/plan/turned.ts';
import { epochOf, HOUR_MS, localDate } from '../../lib/time.ts';
import type { Services } from '../service-set.ts';
import type { PairDay } from '../store/brief.ts';
import type { PlannedChange } from '../store/window-state.ts';
import { pairDayKey, type Content } from './message.ts';

/** A notice that did not get through within the hour is made anew; it is not lost. */
const WITHIN_MS = HOUR_MS;

/** What a notice to the holder of plans is made of; its briefs are those of the blocks. */
export interface PlanContent extends Content {
  readonly plans: readonly TurnedPlan[];
}

/** A plan that somebody is told about. */
export interface HeldPlan {
  readonly id: string;
  readonly revision: number;
  readonly subscriptionId: string;
  readonly localDate: string;
  readonly request: PlanRequest;
  readonly plan: DayPlan;
}

/** Those with a block still to come; one that cannot be read is none. */
export async function heldPlans({ stores }: Services, nowMs: number): Promise<HeldPlan[]> {
  // Wherever on the earth a plan is for: the date is another there.
  const dates = [-24, 0, 24].map((hours) => localDate(nowMs + hours * HOUR_MS, 'UTC'));
  return (await stores.plan.held(dates)).flatMap(({ request, body, ...row }) => {
    try {
      const held = { ...row, request: JSON.parse(request) as PlanRequest, plan: JSON.parse(body) as DayPlan };
      return held.plan.groups.some(({ blocks }) => blocks.some(({ to }) => epochOf(to) > nowMs)) ? [held] : [];
    } catch {
      return [];
    }
  });
}

/** The site-days that the blocks of these plans stand on, each once. */
export function pairDaysOf(plans: readonly Pick<HeldPlan, 'localDate' | 'plan'>[]): PairDay[] {
  const pairDays = plans.flatMap(({ localDate: date, plan }) => plan.groups.flatMap(({ wing, sheet, blocks }) => blocks.map(({ site }) => ({ siteId: site, localDate: date, wingKey: wing, sheetId: sheet }))));
  return [...new Map(pairDays.map((pairDay) => [pairDayKey(pairDay), pairDay])).values()];
}

interface Judged {
  readonly day: JudgedDay;
  readonly revision: number;
}

/**
 * After every assessment: holds each plan that somebody is told about against its days as they are judged now. One notice
 * a subscriber and day, of all that has turned; it takes the place of the one before.
 */
export async function noticePlans(services: Services, nowMs: number): Promise<void> {
  const { stores } = services;
  const held = await heldPlans(services, nowMs);
  if (held.length === 0) return;
  const judged = new Map((await stores.brief.bodies(pairDaysOf(held))).map(({ body, revision, ...pairDay }): [string, Judged] => [pairDayKey(pairDay), { day: JSON.parse(body) as JudgedDay, revision }]));
  const told = Map.groupBy(await stores.plan.tellings([...new Set(held.map(({ subscriptionId }) => subscriptionId))], [...new Set(held.map((each) => each.localDate))], nowMs), ownerKey);
  const planned: PlannedChange[] = [];
  const superseded: string[] = [];
  for (const [owner, plans] of Map.groupBy(held, ownerKey)) {
    const [first] = plans;
    const before = told.get(owner) ?? [];
    const content = contentOf(plans, judged, nowMs);
    const said = before.filter(({ state }) => state === 'sent' || state === 'pending').flatMap((row) => (JSON.parse(row.content) as PlanContent).plans);
    if (first === undefined || !isNews(content.plans, said)) continue;
    superseded.push(...before.filter(({ state, isLeased }) => state === 'pending' && isLeased === 0).map(({ id }) => id));
    const { subscriptionId, localDate: dueLocalDate } = first;
    planned.push({ subscriptionId, dueLocalDate, seq: 1 + Math.max(0, ...before.map(({ seq }) => seq)), validUntilMs: nowMs + WITHIN_MS, content: JSON.stringify(content) });
  }
  if (planned.length === 0) return;
  await stores.db.together([
    ...(superseded.length > 0 ? [stores.windowState.supersede(superseded, nowMs)] : []),
    stores.windowState.planChanges(planned, nowMs, 'plan'),
  ]);
}

function ownerKey({ subscriptionId, localDate: date }: { readonly subscriptionId: string; readonly localDate: string }): string {
  return `${date} ${subscriptionId}`;
}

function contentOf(plans: readonly HeldPlan[], judged: ReadonlyMap<string, Judged>, nowMs: number): PlanContent {
  const briefs = new Map<string, PlanContent['briefs'][number]>();
  const turned = plans.flatMap((held): TurnedPlan[] => {
    const { id, revision, request, plan } = held;
    const own = pairDaysOf([held]).flatMap((pairDay) => { const found = judged.get(pairDayKey(pairDay)); return found === undefined ? [] : [{ pairDay, ...found }]; });
    const days = new Map(own.map(({ pairDay: { siteId, wingKey, sheetId }, day }) => [dayKey({ site: siteId, wing: wingKey, sheet: sheetId }), day]));
    // A site-day that was judged for the plan alone, and not since, has not turned.
    const notices = planChanges(request, plan, days, nowMs - HOUR_MS).filter(({ asOf, block }) => asOf !== null && epochOf(block.to) > nowMs);
    for (const { group, block } of notices) {
      const { wing, sheet } = plan.groups.find(({ name }) => name === group) ?? { wing: '', sheet: '' };
      const found = own.find(({ pairDay }) => pairDay.siteId === block.site && pairDay.wingKey === wing && pairDay.sheetId === sheet);
      if (found !== undefined) briefs.set(pairDayKey(found.pairDay), { ...found.pairDay, sheetVersion: found.day.sheetVersion, revision: found.revision });
    }
    return notices.length === 0 ? [] : [{ id, revision, timeZone: plan.timeZone, demo: plan.demo || own.some(({ day }) => day.demo), notices }];
  });
  return { issuedAtMs: nowMs, briefs: [...briefs.values()], plans: turned };
}
