import { heightsBetween, speedAt, windAt } from '../air/profile.ts';
import { componentsOfVector } from '../air/wind.ts';
import type { LaunchSite } from '../site.ts';
import { groundSpeedMps } from '../wing/ground-speed.ts';
import type { HourView } from './hour-view.ts';
import type { Estimate } from './launch-wind.ts';
import { gustOn, meanOn } from './launch-wind.ts';
import type { Demand } from './margin.ts';
import { airNeeds, estimateOrigin, fixed, fromSheet, gustNeeds, limitTerm, profileNeeds, term, type Rule } from './rule.ts';

/** Margins on forward speed at hands-up trim and on the wind above the launch. Launches only. */

function launchOf(view: HourView): LaunchSite {
  const { site } = view.setup;
  if (site.kind !== 'launch') throw new Error('a launch margin was asked of a strip');
  return site;
}

export interface ForwardAtLaunch {
  readonly estimate: Estimate | null;
  readonly trimMps: number;
  /** Least ground speed into the launch axis in a gust; 'no solution' when the cross part is as large as trim. */
  readonly forward: Demand;
}

/** The kept estimate that leaves the least ground speed into the launch axis, with its gust. */
export function forwardAtLaunch(view: HourView): ForwardAtLaunch {
  const site = launchOf(view);
  const trimMps = view.trimAt(site.elevationM);
  let least: ForwardAtLaunch = { estimate: null, trimMps, forward: NaN };
  for (const estimate of view.winds) {
    const wind = gustOn(estimate, site.facingDeg);
    if (Number.isNaN(trimMps) || Number.isNaN(wind.headMps) || Number.isNaN(wind.crossMps)) return { estimate, trimMps, forward: NaN };
    const speed = groundSpeedMps(trimMps, wind);
    if (speed === null) least = { estimate, trimMps, forward: 'no solution' };
    else if (least.estimate === null || (least.forward !== 'no solution' && speed < least.forward)) least = { estimate, trimMps, forward: speed };
  }
  return least;
}

const forwardLaunch: Rule = {
  id: 'forwardLaunch', unit: 'm/s', sense: 'atLeast', limit: fromSheet('minForwardMps'),
  needs: (view) => [...gustNeeds(view), ...airNeeds(view, launchOf(view).elevationM)],
  demand: (view) => forwardAtLaunch(view).forward,
  terms(view, limit) {
    const site = launchOf(view);
    const { estimate, trimMps } = forwardAtLaunch(view);
    if (estimate === null) return [];
    const gust = gustOn(estimate, site.facingDeg);
    const mean = estimate.calm ? { headMps: 0, crossMps: 0 } : meanOn(estimate, site.facingDeg);
    const crabMps = trimMps - Math.sqrt(Math.max(0, trimMps ** 2 - gust.crossMps ** 2));
    return [
      trimTerm(view, site.elevationM, 'launch'),
      term('headwind', -mean.headMps, 'm/s', estimateOrigin(estimate)),
      term('headwind of the gust', -(gust.headMps - mean.headMps), 'm/s', `gust ${fixed(estimate.gustMps)} m/s`),
      term('lost to the crab angle', -crabMps, 'm/s', `cross part of the gust ${fixed(Math.abs(gust.crossMps))} m/s`),
      limitTerm(view, 'minForwardMps', -limit, 'm/s'),
    ];
  },
};

export function trimTerm(view: HourView, altitudeM: number, where: string): ReturnType<typeof term> {
  return term('trim airspeed', view.trimAt(altitudeM), 'm/s', `${fixed(view.setup.polar.trimMps, 2)} m/s × ${fixed(view.factorAt(altitudeM), 3)} for mass and density at the ${where}`);
}

function bandHeights(view: HourView): number[] {
  const { elevationM } = launchOf(view);
  return heightsBetween(view.profile, [elevationM, elevationM + view.setup.sheet.parameters.bandM]);
}

/** Least of trim less wind over the band above the launch, and where. */
function leastAloft(view: HourView): { readonly forwardMps: number; readonly altitudeM: number } {
  let least = { forwardMps: Infinity, altitudeM: NaN };
  for (const altitudeM of bandHeights(view)) {
    const forwardMps = view.trimAt(altitudeM) - speedAt(view.profile, altitudeM, true);
    if (Number.isNaN(forwardMps)) return { forwardMps, altitudeM };
    if (forwardMps < least.forwardMps) least = { forwardMps, altitudeM };
  }
  return least;
}

const forwardAloft: Rule = {
  id: 'forwardAloft', unit: 'm/s', sense: 'atLeast', limit: fromSheet('minForwardAloftMps'),
  needs(view) {
    const { elevationM } = launchOf(view);
    const topM = elevationM + view.setup.sheet.parameters.bandM;
    return [...profileNeeds(view, topM), ...airNeeds(view, elevationM), ...airNeeds(view, topM)];
  },
  demand: (view) => leastAloft(view).forwardMps,
  terms(view, limit) {
    const { altitudeM } = leastAloft(view);
    return [
      trimTerm(view, altitudeM, `height of ${fixed(altitudeM, 0)} m`),
      term('wind there', -speedAt(view.profile, altitudeM, true), 'm/s', `profile at ${fixed(altitudeM, 0)} m`),
      limitTerm(view, 'minForwardAloftMps', -limit, 'm/s'),
    ];
  },
};

/** Heights over the launch between which the upper wind is looked at, m. */
const UPPER_FROM_M = 10;
const UPPER_TO_M = 1500;
const BACK_TO_M = 300;

function strongest(view: HourView, heightsM: readonly number[], measure: (altitudeM: number) => number): { readonly value: number; readonly altitudeM: number } {
  let largest = { value: -Infinity, altitudeM: NaN };
  for (const altitudeM of heightsBetween(view.profile, heightsM)) {
    const value = measure(altitudeM);
    if (Number.isNaN(value)) return { value, altitudeM };
    if (value > largest.value) largest = { value, altitudeM };
  }
  return largest;
}

function strongestUpper(view: HourView): { readonly value: number; readonly altitudeM: number } {
  const { elevationM } = launchOf(view);
  return strongest(view, [elevationM + UPPER_FROM_M, elevationM + UPPER_TO_M], (altitudeM) => speedAt(view.profile, altitudeM, true));
}

const upperWind: Rule = {
  id: 'upperWind', unit: 'm/s', sense: 'atMost', limit: fromSheet('maxUpperMps'),
  needs: (view) => profileNeeds(view, launchOf(view).elevationM + UPPER_TO_M),
  demand: (view) => strongestUpper(view).value,
  terms(view, limit) {
    const { value, altitudeM } = strongestUpper(view);
    return [limitTerm(view, 'maxUpperMps', limit, 'm/s'), term('strongest wind above', -value, 'm/s', `profile at ${fixed(altitudeM, 0)} m`)];
  },
};

function backHeights(view: HourView): number[] {
  const { elevationM, summitElevationM } = launchOf(view);
  const heights = [elevationM + UPPER_FROM_M, elevationM + BACK_TO_M];
  return summitElevationM === null ? heights : [...heights, summitElevationM + BACK_TO_M];
}

function strongestBack(view: HourView): { readonly value: number; readonly altitudeM: number } {
  const { facingDeg } = launchOf(view);
  return strongest(view, backHeights(view), (altitudeM) => {
    const { uMps, vMps } = windAt(view.profile, altitudeM, true);
    return Math.max(0, -componentsOfVector(uMps, vMps, facingDeg).headMps);
  });
}

const overTheBack: Rule = {
  id: 'overTheBack', unit: 'm/s', sense: 'atMost', limit: fromSheet('maxBackMps'),
  needs: (view) => profileNeeds(view, Math.max(...backHeights(view))),
  demand: (view) => strongestBack(view).value,
  terms(view, limit) {
    const { value, altitudeM } = strongestBack(view);
    return [limitTerm(view, 'maxBackMps', limit, 'm/s'), term('tail part above', -value, 'm/s', `profile at ${fixed(altitudeM, 0)} m, launch faces ${fixed(launchOf(view).facingDeg, 0)}°`)];
  },
};

export const forwardRules: readonly Rule[] = [forwardLaunch, forwardAloft, upperWind, overTheBack];
export { launchOf };
