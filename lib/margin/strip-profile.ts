import { heightsBetween, windAt, type WindVector } from '../air/profile.ts';
import { logLawFactor } from '../air/surface-layer.ts';
import { componentsOfVector } from '../air/wind.ts';
import type { StripSite } from '../site.ts';
import type { HourView } from './hour-view.ts';

/** While a place lies within this of the model's ground, heights above the one are read as heights above the other. */
export const SAME_GROUND_M = 150;

/** Height above mean sea level at which the forecast is read for a height above the strip. */
export function readAtM(view: HourView, site: StripSite, heightM: number): number {
  const groundM = view.hour.gridElevationM;
  return Math.abs(site.elevationM - groundM) <= SAME_GROUND_M ? groundM + heightM : site.elevationM + heightM;
}

/** Wind at a height above the strip; below the lowest node by the log law over the strip's roughness, above the highest unknown. */
export function windOverStrip(view: HourView, site: StripSite, heightM: number): WindVector {
  const altitudeM = readAtM(view, site, heightM);
  const lowestM = view.profile.altitudeM[0];
  if (lowestM === undefined) return { uMps: NaN, vMps: NaN };
  if (altitudeM >= lowestM) return windAt(view.profile, altitudeM);
  const { uMps, vMps } = windAt(view.profile, lowestM);
  const factor = logLawFactor({ fromM: heightM + (lowestM - altitudeM), toM: heightM, roughnessM: site.roughnessM });
  return { uMps: uMps * factor, vMps: vMps * factor };
}

/**
 * The head part of the wind over the strip on a heading, as a function of height: the same as windOverStrip, made once for
 * the thousands of times a climb asks.
 */
export function headwindOver(view: HourView, site: StripSite, headingDeg: number): (heightM: number) => number {
  const offsetM = readAtM(view, site, 0);
  const heights = view.profile.altitudeM.map((altitudeM) => altitudeM - offsetM);
  const heads = view.profile.altitudeM.map((_, i) => componentsOfVector(view.profile.uMps[i]!, view.profile.vMps[i]!, headingDeg).headMps);
  const lowestM = heights[0] ?? NaN;
  const last = heights.length - 1;
  return (heightM) => {
    if (last < 0) return NaN;
    if (heightM < lowestM) return heads[0]! * logLawFactor({ fromM: lowestM, toM: heightM, roughnessM: site.roughnessM });
    let above = 0;
    while (above <= last && heights[above]! < heightM) above += 1;
    if (above > last) return NaN;
    if (heights[above] === heightM) return heads[above]!;
    const share = (heightM - heights[above - 1]!) / (heights[above]! - heights[above - 1]!);
    return heads[above - 1]! + share * (heads[above]! - heads[above - 1]!);
  };
}

/** Heights above the strip of the given ones and of every node between them. */
export function stripHeightsBetween(view: HourView, site: StripSite, givenM: readonly number[]): number[] {
  const offsetM = readAtM(view, site, 0);
  return heightsBetween(view.profile, givenM.map((heightM) => heightM + offsetM)).map((altitudeM) => altitudeM - offsetM);
}
