import { heightsBetween, windAt, type WindVector } from '../air/profile.ts';
import { logLawFactor } from '../air/surface-layer.ts';
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

/** Heights above the strip of the given ones and of every node between them. */
export function stripHeightsBetween(view: HourView, site: StripSite, givenM: readonly number[]): number[] {
  const offsetM = readAtM(view, site, 0);
  return heightsBetween(view.profile, givenM.map((heightM) => heightM + offsetM)).map((altitudeM) => altitudeM - offsetM);
}
