/** A day of invented weather at a place that was just set up: judged like any morning, kept nowhere, told to nobody. */
import { normalDeg } from '../../../lib/angles.ts';
import type { DayInput } from '../../../lib/brief/day-input.ts';
import type { JudgedDay } from '../../../lib/brief/day.ts';
import { inventedForecast } from '../../../lib/forecast/invented/forecast.ts';
import type { InventedSite, Scenario } from '../../../lib/forecast/invented/scenario.ts';
import type { LimitSheet } from '../../../lib/margin/sheet.ts';
import type { Site } from '../../../lib/site.ts';
import { isoUtc, localDay } from '../../../lib/time.ts';
import type { Wing, WingClass } from '../../../lib/wing/wing.ts';
import { instantsAround, judgedDate } from '../../morning/times.ts';

/** The places of the demo's valley face about this way, and its weather is made for them. */
const VALLEY_AXIS_DEG = 205;

function axisOf(site: Site): number {
  return site.kind === 'launch' ? site.facingDeg : site.headingDeg;
}

/** The invented air needs a ground of the model below the place: the landing's, or that of the strip. */
function inventedSite(site: Site, region: string): InventedSite {
  const groundM = site.kind === 'launch' ? site.landing.elevationM : site.elevationM;
  return {
    site: site.id, withheld: false, region, fineGroundM: groundM, coarseGroundM: groundM, breeze: { speedMps: 2.4, fromDeg: axisOf(site) }, drainageMps: 0.5, roughnessM: 0.1, fogHours: 0,
  };
}

/** The demo's weather, turned so that it comes onto this place as it comes onto its own: else most places would have wind from behind all day. */
function turnedScenario(scenario: Scenario, site: Site): Scenario {
  const turned = <Wind extends { readonly fromDeg: number }>(wind: Wind): Wind => ({ ...wind, fromDeg: normalDeg(wind.fromDeg + axisOf(site) - VALLEY_AXIS_DEG) });
  const regions = scenario.regions.slice(0, 1).map((region) => ({ ...region, freeWind: turned(region.freeWind), front: region.front === null ? null : { ...region.front, wind: turned(region.front.wind) } }));
  return { ...scenario, regions, sites: [inventedSite(site, regions[0]?.id ?? '')] };
}

export interface Rehearsal {
  readonly input: DayInput;
  readonly day: JudgedDay;
}

export function rehearse(site: Site, chosen: { readonly wing: Wing; readonly wingKey: WingClass; readonly sheet: LimitSheet; readonly scenario: Scenario; readonly thresholds: DayInput['thresholds']; readonly judge: (input: DayInput) => JudgedDay; readonly nowMs: number }): Rehearsal {
  const { wing, wingKey, sheet, scenario, thresholds, judge, nowMs } = chosen;
  const localDate = judgedDate(site, nowMs);
  const { fromMs, toMs } = instantsAround(site, localDate);
  const place = turnedScenario(scenario, site);
  const request = { site, fromUtc: isoUtc(fromMs), toUtc: isoUtc(toMs), now: isoUtc(nowMs) };
  const input: DayInput = {
    site, wing, wingKey, wingName: wingKey, sheet, localDate, issuedAt: isoUtc(nowMs), validUntil: isoUtc(localDay(localDate, site.timeZone).toMs),
    answers: scenario.sources.map((source) => ({ source: source.id, kind: source.kind, outcome: inventedForecast(place, source, request) })),
    demo: true, thresholds, storedGroundM: {},
  };
  return { input, day: judge(input) };
}
