/** What a school hands in for a day: its groups, its sites, its people. Names as in JSON; hours are hours of the local clock. */
import type { JudgedDay } from '../brief/day.ts';
import type { WingClass } from '../wing/wing.ts';

export interface PlanSite {
  readonly id: string;
  /** Groups at once. */
  readonly capacity: number;
  readonly openFromHour: number;
  readonly openToHour: number;
}

export interface PlanGroup {
  readonly name: string;
  /** Id of a limit sheet. */
  readonly sheet: string;
  readonly wing: WingClass;
  /** Least hours at a stretch at one site: less is not worth unpacking. */
  readonly minHours: number;
  /** Most hours over the day. */
  readonly wishHours: number;
  readonly earliestHour: number;
  readonly latestHour: number;
  /** Ids of the sites it may be at, the preferred first. */
  readonly sites: readonly string[];
  /** Whether hours that are close to a limit may be used. */
  readonly close: boolean;
  readonly instructors: number;
}

export interface PlanRequest {
  /** yyyy-mm-dd at the sites, which share a time zone. */
  readonly date: string;
  /** Instructors there are. */
  readonly instructors: number;
  /** Between two sites that `moves` does not name. */
  readonly movingMin: number;
  /** Both ways. */
  readonly moves: readonly { readonly from: string; readonly to: string; readonly minutes: number }[];
  readonly sites: readonly PlanSite[];
  readonly groups: readonly PlanGroup[];
  /** Hours that somebody has taken away: the hour that begins then, for every group. */
  readonly lost: readonly { readonly site: string; readonly hour: number }[];
}

/** The judged days a plan is made of. */
export type JudgedDays = ReadonlyMap<string, JudgedDay>;

export function dayKey(pair: { readonly site: string; readonly wing: string; readonly sheet: string }): string {
  return `${pair.site}|${pair.wing}|${pair.sheet}`;
}

/** Every site-day that a request needs judged, each once. */
export function pairsOf(request: PlanRequest): { readonly site: string; readonly wing: WingClass; readonly sheet: string }[] {
  const pairs = new Map(request.groups.flatMap(({ sites, wing, sheet }) => sites.map((site) => [dayKey({ site, wing, sheet }), { site, wing, sheet }] as const)));
  return [...pairs.values()];
}
