import { isCalm, FREE_AIR_GUST_FACTOR } from '../air/gust.ts';
import { windAt } from '../air/profile.ts';
import { groundReachM, speedUp } from '../air/terrain.ts';
import { components, componentsOfVector, fromDegOf, vectorOf } from '../air/wind.ts';
import type { LaunchSite } from '../site.ts';
import type { HourView } from './hour-view.ts';

/**
 * Estimates of the wind at launch. `ground` carries the forecast's 10 m wind up the hill; `freeAir` reads the profile at
 * launch height. All kept ones are judged and every margin takes the one least favourable to it.
 */
export interface Estimate {
  readonly name: 'ground' | 'freeAir' | 'strip';
  readonly uMps: number;
  readonly vMps: number;
  readonly meanMps: number;
  readonly gustMps: number;
  /** Below 0.3 m/s: no direction; its gust may come from anywhere. */
  readonly calm: boolean;
  /** Direction of the mean as judged, NaN when calm or unknown. */
  readonly fromDeg: number;
  /** The wind before terrain changed it: 10 m wind or free air. */
  readonly raw: { readonly speedMps: number; readonly fromDeg: number };
  /** Fractional speed-up that was applied to the part along the launch axis. */
  readonly speedUp: number;
}

/** Height above launch at which the free-air profile is read, m. */
const FREE_AIR_HEIGHT_M = 10;

export function launchWinds(view: HourView, site: LaunchSite): Estimate[] {
  const aboveGroundM = site.elevationM - view.hour.gridElevationM;
  const kept: Estimate[] = [];
  if (groundKept(site, aboveGroundM)) kept.push(groundEstimate(view, site, aboveGroundM));
  if (aboveGroundM > 0 && view.reaches(site.elevationM + FREE_AIR_HEIGHT_M)) kept.push(freeAirEstimate(view, site));
  return kept;
}

/** A launch far above the model's ground says nothing through the model's 10 m wind. */
function groundKept(site: LaunchSite, aboveGroundM: number): boolean {
  return aboveGroundM <= groundReachM(site.hill);
}

function groundEstimate(view: HourView, site: LaunchSite, aboveGroundM: number): Estimate {
  const { wind10m } = view.hour;
  const gustIncrementMps = view.gustIncrementMps;
  if (isCalm(wind10m.speedMps)) return calmEstimate('ground', wind10m.speedMps, wind10m.speedMps + gustIncrementMps);
  const { headMps, crossMps } = components({ speedMps: wind10m.speedMps, fromDeg: wind10m.fromDeg }, site.facingDeg);
  const gain = headMps > 0 ? speedUp(site.hill, aboveGroundM) : 0;
  // Back to a vector: the along-axis part grown, the cross part as it was.
  const head = vectorOf(headMps * (1 + gain), site.facingDeg);
  const cross = vectorOf(crossMps, site.facingDeg + 90);
  const uMps = head.uMps + cross.uMps;
  const vMps = head.vMps + cross.vMps;
  const meanMps = Math.hypot(uMps, vMps);
  return {
    name: 'ground', uMps, vMps, meanMps, gustMps: meanMps + gustIncrementMps, calm: false,
    fromDeg: fromDegOf(uMps, vMps) ?? NaN, raw: wind10m, speedUp: Number.isNaN(headMps) ? NaN : gain,
  };
}

function freeAirEstimate(view: HourView, site: LaunchSite): Estimate {
  const { uMps, vMps } = windAt(view.profile, site.elevationM + FREE_AIR_HEIGHT_M);
  const meanMps = Math.hypot(uMps, vMps);
  const gustMps = Math.max(view.hour.gustMps, FREE_AIR_GUST_FACTOR * meanMps);
  if (isCalm(meanMps)) return calmEstimate('freeAir', meanMps, gustMps);
  const fromDeg = fromDegOf(uMps, vMps) ?? NaN;
  return { name: 'freeAir', uMps, vMps, meanMps, gustMps, calm: false, fromDeg, raw: { speedMps: meanMps, fromDeg }, speedUp: 0 };
}

/** At a strip the 10 m wind is the wind. */
export function stripWind(view: HourView): Estimate {
  const { speedMps, fromDeg } = view.hour.wind10m;
  const gustMps = speedMps + view.gustIncrementMps;
  if (isCalm(speedMps)) return calmEstimate('strip', speedMps, gustMps);
  const { uMps, vMps } = vectorOf(speedMps, fromDeg);
  return { name: 'strip', uMps, vMps, meanMps: speedMps, gustMps, calm: false, fromDeg, raw: { speedMps, fromDeg }, speedUp: 0 };
}

function calmEstimate(name: Estimate['name'], meanMps: number, gustMps: number): Estimate {
  return { name, uMps: 0, vMps: 0, meanMps, gustMps, calm: true, fromDeg: NaN, raw: { speedMps: meanMps, fromDeg: NaN }, speedUp: 0 };
}

/** Parts of the mean on an axis; nil in a calm. */
export function meanOn(estimate: Estimate, axisDeg: number): { readonly headMps: number; readonly crossMps: number } {
  return componentsOfVector(estimate.uMps, estimate.vMps, axisDeg);
}

/** Parts of the gust on an axis, in the direction of the mean. In a calm the gust counts in full against the wing. */
export function gustOn(estimate: Estimate, axisDeg: number): { readonly headMps: number; readonly crossMps: number } {
  if (estimate.calm) return { headMps: estimate.gustMps, crossMps: 0 };
  const share = estimate.gustMps / estimate.meanMps;
  return componentsOfVector(estimate.uMps * share, estimate.vMps * share, axisDeg);
}

/** Absolute cross part of the gust; in a calm only its part above the light wind, from either side. */
export function gustCrossMps(estimate: Estimate, axisDeg: number, lightWindMps: number): number {
  return estimate.calm ? Math.max(0, estimate.gustMps - lightWindMps) : Math.abs(gustOn(estimate, axisDeg).crossMps);
}

/** Tail part of the gust, 0 when it blows against the wing; in a calm only its part above the light wind. */
export function gustTailMps(estimate: Estimate, axisDeg: number, lightWindMps: number): number {
  return estimate.calm ? Math.max(0, estimate.gustMps - lightWindMps) : Math.max(0, -gustOn(estimate, axisDeg).headMps);
}
