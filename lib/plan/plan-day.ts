/**
 * The training day: which group where and when. Of all plans that keep the rules, the one that places the most groups,
 * then leaves the most of its tightest margin, then uses the most hours, then moves the fewest times.
 *
 * Rules: only hours that are within limits, or close to one where the group takes that; a block of a group's least hours
 * at least; no more hours than it wished; its own hours and the site's; as many groups at a site as it holds; as many
 * instructors as there are, hour by hour, with each group and on its way to another site. Who stands in for whom between
 * two groups is not looked at: an instructor who changes group may have to change site.
 */
import { epochOf } from '../time.ts';
import { ifLostOf, nextBestOf, shownObjective } from './alternatives.ts';
import { bestStays } from './best-stays.ts';
import { blockOf } from './blocks.ts';
import type { DayPlan, GroupPlan, SiteDay } from './day-plan.ts';
import { leftOutOf } from './left-out.ts';
import { pose } from './pose.ts';
import { dayKey, type JudgedDays, type PlanRequest } from './request.ts';

export function planDay(request: PlanRequest, days: JudgedDays): DayPlan {
  const judged = [...days.values()];
  const timeZone = judged[0]?.timeZone ?? 'UTC';
  const posed = pose(request, days, timeZone);
  const best = bestStays(posed.puzzle);
  const { placed } = best.objective;
  const groups = request.groups.map(({ name, wing, sheet }, group): GroupPlan => {
    const stays = best.stays[group] ?? [];
    return {
      name, wing, sheet,
      blocks: stays.map((_, nth) => blockOf(posed, group, { nth, best })),
      leftOut: stays.length > 0 ? null : leftOutOf(posed, group, placed),
    };
  });
  return {
    date: request.date,
    timeZone,
    demo: judged.some(({ demo }) => demo),
    asOf: earliest(judged.map(({ issuedAt }) => issuedAt)),
    validUntil: earliest(judged.map(({ validUntil }) => validUntil)),
    objective: shownObjective(best.objective),
    proven: best.proven,
    groups,
    nextBest: nextBestOf(posed, best),
    ifLost: ifLostOf(posed, best),
    siteDays: siteDaysOf(groups, days),
  };
}

/** The earliest of some instants; null of none. */
function earliest(instants: readonly string[]): string | null {
  return instants.reduce<string | null>((first, at) => (first === null || epochOf(at) < epochOf(first) ? at : first), null);
}

/** Of every site that a group is at, or that came nearest for one without a place. */
function siteDaysOf(groups: readonly GroupPlan[], days: JudgedDays): SiteDay[] {
  const keys = groups.flatMap(({ wing, sheet, blocks, leftOut }) => [...blocks.map(({ site }) => site), ...(leftOut?.kind === 'no hours' ? [leftOut.site] : [])].map((site) => dayKey({ site, wing, sheet })));
  return [...new Set(keys)].flatMap((key) => {
    const day = days.get(key);
    if (day === undefined) return [];
    const { siteId, siteName, timeZone, localDate, wingKey, wingName, sheetId, sheetName, issuedAt, validUntil, demo, sources, cautions, localRules } = day;
    return [{ siteId, siteName, timeZone, localDate, wingKey, wingName, sheetId, sheetName, issuedAt, validUntil, demo, sources, cautions, localRules }];
  });
}
