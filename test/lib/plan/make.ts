// Requests and judged days for tests of the plan: a letter an hour, as in test/support/days.ts, spares as asked.
import type { JudgedDay, JudgedHour } from '../../../lib/brief/day.ts';
import { dayKey, pairsOf, type JudgedDays, type PlanGroup, type PlanRequest, type PlanSite } from '../../../lib/plan/request.ts';
import { dayOf, marginOf } from '../../support/days.ts';

export function siteOf(id: string, given: Partial<PlanSite> = {}): PlanSite {
  return { id, capacity: 1, openFromHour: 0, openToHour: 24, ...given };
}

export function groupOf(name: string, given: Partial<PlanGroup> = {}): PlanGroup {
  return { name, sheet: 'descent-new', wing: 'EN B', minHours: 1, wishHours: 4, earliestHour: 0, latestHour: 24, sites: ['hill'], close: false, instructors: 1, ...given };
}

export function requestOf(given: Partial<PlanRequest> = {}): PlanRequest {
  return { date: '2027-05-14', instructors: 9, movingMin: 30, moves: [], sites: [siteOf('hill')], groups: [groupOf('A')], lost: [], ...given };
}

/** The hour at Vienna, as ISO UTC: summer time on that day. */
export function at(localHour: number): string {
  return `2027-05-14T${String(localHour - 2).padStart(2, '0')}:00:00Z`;
}

/** A judged day from six o'clock on, local; `spares` are those of its forward margin, in m/s. */
export function judged(site: string, letters: string, given: Partial<JudgedDay> & { readonly spares?: readonly number[] } = {}): JudgedDay {
  const { spares, ...rest } = given;
  const day = dayOf(letters, { siteId: site, siteName: `Site ${site}`, ...rest });
  if (spares === undefined) return day;
  const hours = day.hours.map((hour, index): JudgedHour => {
    const spare = spares[index] ?? 1;
    return { ...hour, margins: hour.margins.map((margin) => (margin.id === 'forwardLaunch' && margin.spare !== null ? marginOf('forwardLaunch', { spare, demand: 2.5 + spare, status: margin.status }) : margin)) };
  });
  return { ...day, hours };
}

/** The same day of a site for every wing and sheet that the request asks for. */
export function daysFor(request: PlanRequest, bySite: Readonly<Record<string, JudgedDay>>): JudgedDays {
  return new Map(pairsOf(request).flatMap((pair) => {
    const day = bySite[pair.site];
    return day === undefined ? [] : [[dayKey(pair), { ...day, wingKey: pair.wing, sheetId: pair.sheet }] as const];
  }));
}
