import { degrees, normalDeg, radians } from '../angles.ts';

/** Wind vectors. Directions are where the wind comes from, degrees clockwise from true north; u is toward east, v toward north. */

/** Below this a wind is calm and has no direction: Beaufort 0, WMO-No. 306, lower bound of force 1. */
export const CALM_BELOW_MPS = 0.3;

export interface Components {
  /** Along the axis, positive against someone looking along it. */
  readonly headMps: number;
  /** Across it, positive from the right of someone looking along it. */
  readonly crossMps: number;
}

/** Head V cos(D - F) and cross V sin(D - F) on the axis F. */
export function components(wind: { readonly speedMps: number; readonly fromDeg: number }, axisDeg: number): Components {
  const angle = radians(wind.fromDeg - axisDeg);
  return { headMps: wind.speedMps * Math.cos(angle), crossMps: wind.speedMps * Math.sin(angle) };
}

/** u = -V sin D, v = -V cos D. */
export function vectorOf(speedMps: number, fromDeg: number): { readonly uMps: number; readonly vMps: number } {
  const angle = radians(fromDeg);
  return { uMps: -speedMps * Math.sin(angle), vMps: -speedMps * Math.cos(angle) };
}

/** D = atan2(-u, -v) in [0, 360); null for no wind at all. */
export function fromDegOf(uMps: number, vMps: number): number | null {
  return uMps === 0 && vMps === 0 ? null : normalDeg(degrees(Math.atan2(-uMps, -vMps)));
}

/** Head and cross parts of a wind vector on an axis. */
export function componentsOfVector(uMps: number, vMps: number, axisDeg: number): Components {
  const angle = radians(axisDeg);
  const sine = Math.sin(angle);
  const cosine = Math.cos(angle);
  return { headMps: -uMps * sine - vMps * cosine, crossMps: -uMps * cosine + vMps * sine };
}
