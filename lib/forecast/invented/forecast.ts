/**
 * Invented forecasts of the demo, as a Source would answer: the same for the same site, date and hour on every run. Only
 * the run time follows the clock, six-hourly and four hours behind it, as real ones do. `demo` is set and stays set.
 */
import { failure, success, type Result } from '../../result.ts';
import type { Site } from '../../site.ts';
import { epochOf, HOUR_MS, hourlyInstants, isoUtc, localDate } from '../../time.ts';
import type { Conditions, Forecast } from '../conditions.ts';
import type { SourceFailure } from '../failure.ts';
import { declaredBy, fullHour, windOnlyHour, type HourParts } from './hour.ts';
import type { InventedRegion, InventedSite, InventedSource, Scenario } from './scenario.ts';
import { sunDay } from './sun-day.ts';
import { heating, type Heating, type Twist } from './weather.ts';

export interface InventedRequest {
  readonly site: Site;
  /** First and last instant wanted, on the hour, ISO 8601 UTC. */
  readonly fromUtc: string;
  readonly toUtc: string;
  /** The clock's now, ISO 8601 UTC. */
  readonly now: string;
}

const RUN_EVERY_MS = 6 * HOUR_MS;
const RUN_TAKES_MS = 4 * HOUR_MS;

export function inventedForecast(scenario: Scenario, source: InventedSource, request: InventedRequest): Result<Forecast, SourceFailure> {
  const own = scenario.sites.find(({ site }) => site === request.site.id);
  const region = scenario.regions.find(({ id }) => id === own?.region);
  if (own === undefined || region === undefined) return failure({ kind: 'not-covered' });
  if (own.withheld) return failure({ kind: 'withheld' });
  const instants = hourlyInstants(epochOf(request.fromUtc), epochOf(request.toUtc));
  const heatingAt = heatings(region, own, request.site);
  const members = twists(source, own).map(({ twist, frontShiftHours }) => {
    return instants.map((atMs): Conditions => {
      const parts: HourParts = { region, site: own, heat: heatingAt(atMs, frontShiftHours), twist, latDeg: request.site.latDeg };
      return source.kind === 'ensemble' ? windOnlyHour(parts, atMs) : fullHour(parts, source, atMs);
    });
  });
  return success({
    source: source.id,
    kind: source.kind,
    runAt: isoUtc(Math.floor((epochOf(request.now) - RUN_TAKES_MS) / RUN_EVERY_MS) * RUN_EVERY_MS),
    fetchedAt: isoUtc(epochOf(request.now)),
    declares: declaredBy(source),
    members,
    gridDistanceM: source.grid === 'fine' ? 400 : 5200,
    demo: true,
    trustedWithoutRunTime: false,
  });
}

/** The heating of the local date of an instant, made once for each date and front; the zone is asked once an instant. */
function heatings(region: InventedRegion, own: InventedSite, site: Site): (atMs: number, frontShiftHours: number) => Heating {
  const made = new Map<string, Heating>();
  const dates = new Map<number, string>();
  return (atMs, frontShiftHours) => {
    const date = dates.get(atMs) ?? localDate(atMs, site.timeZone);
    dates.set(atMs, date);
    const key = `${date} ${frontShiftHours}`;
    let found = made.get(key);
    if (found === undefined) made.set(key, (found = heating(region, own, sunDay(site, date), frontShiftHours)));
    return found;
  };
}

/** One twist for a deterministic source; for an ensemble as many as it has members, spread evenly over a normal distribution. */
function twists(source: InventedSource, own: InventedSite): { readonly twist: Twist; readonly frontShiftHours: number }[] {
  const groundM = source.grid === 'fine' ? own.fineGroundM : own.coarseGroundM;
  return Array.from({ length: source.members }, (_, member) => {
    const speed = source.members === 1 ? 0 : normalQuantile((member + 0.5) / source.members);
    // Seven has no factor in common with the usual counts of members: directions are spread independently of speeds.
    const turn = source.members === 1 ? 0 : normalQuantile((((member * 7) % source.members) + 0.5) / source.members);
    const factor = 1 + source.speedSpread * speed;
    const early = member % 2 === 0 && member < 2 * source.shiftedMembers;
    const late = member % 2 === 1 && member < 2 * source.shiftedMembers;
    return {
      twist: { groundM, breezeFactor: source.breezeFactor * factor, windFactor: source.windFactor * factor, turnDeg: source.turnSpreadDeg * turn },
      frontShiftHours: source.frontShiftHours + (early ? -1 : late ? 1 : 0),
    };
  });
}

/** Quantile of the standard normal distribution by Tukey's lambda (lambda 0.1349), within 0.01 between 0.02 and 0.98. */
function normalQuantile(share: number): number {
  return (share ** 0.1349 - (1 - share) ** 0.1349) / 0.1975;
}
