import { componentsOfVector } from '../air/wind.ts';
import type { Profile } from '../air/profile.ts';

/**
 * The glide from launch to landing at one airspeed through the layered wind: dx = groundSpeed(z)/(sink + s) dz, so that
 * the distance covered while descending is an integral over height, taken exactly layer by layer (wind linear between
 * nodes; four-point Gauss-Legendre on slices of at most 150 m). Below the lowest node that node's wind holds, its
 * along-track part counted as nil where it would help.
 */
export interface Glide {
  readonly profile: Profile;
  readonly airspeedMps: number;
  /** Sink through the air plus sink of the air. */
  readonly totalSinkMps: number;
  readonly trackDeg: number;
  readonly distanceM: number;
  readonly launchM: number;
}

export type GlideEnd =
  | { readonly kind: 'arrives'; readonly altitudeM: number; readonly durationS: number }
  | { readonly kind: 'does not arrive'; readonly altitudeM: number }
  | { readonly kind: 'unknown' };

export interface GlidePoint {
  readonly alongM: number;
  readonly altitudeM: number;
}

const SLICE_M = 150;
const NODES = [-0.8611363115940526, -0.3399810435848563, 0.3399810435848563, 0.8611363115940526];
const WEIGHTS = [0.34785484513745385, 0.6521451548625461, 0.6521451548625461, 0.34785484513745385];

interface Slice {
  readonly topM: number;
  readonly bottomM: number;
  readonly topHeadMps: number;
  readonly topCrossMps: number;
  readonly bottomHeadMps: number;
  readonly bottomCrossMps: number;
}

/** Ground speed at a share (0 top, 1 bottom) of a slice; not positive or NaN when the wing does not advance there. */
function speedIn(slice: Slice, share: number, airspeedMps: number): number {
  const head = slice.topHeadMps + share * (slice.bottomHeadMps - slice.topHeadMps);
  const cross = slice.topCrossMps + share * (slice.bottomCrossMps - slice.topCrossMps);
  const square = airspeedMps * airspeedMps - cross * cross;
  return square <= 0 ? -1 : Math.sqrt(square) - head;
}

function meanSpeed(slice: Slice, share: number, airspeedMps: number): number {
  let sum = 0;
  for (let i = 0; i < 4; i += 1) sum += WEIGHTS[i]! * speedIn(slice, (share * (1 + NODES[i]!)) / 2, airspeedMps);
  return sum / 2;
}

/** Slices from the launch down to the lowest node, highest first; NaN winds where the profile has a hole. */
function slices(glide: Glide): Slice[] {
  const { altitudeM: z, uMps: u, vMps: v } = glide.profile;
  const result: Slice[] = [];
  const at = (below: number, altitudeM: number): { headMps: number; crossMps: number } => {
    const share = (altitudeM - z[below]!) / (z[below + 1]! - z[below]!);
    return componentsOfVector(u[below]! + share * (u[below + 1]! - u[below]!), v[below]! + share * (v[below + 1]! - v[below]!), glide.trackDeg);
  };
  for (let below = z.length - 2; below >= 0; below -= 1) {
    if (z[below]! >= glide.launchM) continue;
    const layerTop = Math.min(z[below + 1]!, glide.launchM);
    const pieces = Math.max(1, Math.ceil((layerTop - z[below]!) / SLICE_M));
    for (let piece = 0; piece < pieces; piece += 1) {
      const topM = layerTop + (piece / pieces) * (z[below]! - layerTop);
      const bottomM = layerTop + ((piece + 1) / pieces) * (z[below]! - layerTop);
      const top = at(below, topM);
      const bottom = at(below, bottomM);
      result.push({
        topM, bottomM, topHeadMps: top.headMps, topCrossMps: top.crossMps, bottomHeadMps: bottom.headMps, bottomCrossMps: bottom.crossMps,
      });
    }
  }
  return result;
}

/** Share of a slice at which the needed distance is reached, by bisection on the monotone distance. */
function shareFor(slice: Slice, neededM: number, glide: Glide, maxShare: number): number {
  const thickness = slice.topM - slice.bottomM;
  let low = 0;
  let high = maxShare;
  for (let i = 0; i < 40; i += 1) {
    const middle = (low + high) / 2;
    const covered = (meanSpeed(slice, middle, glide.airspeedMps) * thickness * middle) / glide.totalSinkMps;
    if (covered < neededM) low = middle;
    else high = middle;
  }
  return (low + high) / 2;
}

/** Share of a slice down to which the wing still advances (ground speed is concave in a slice, so there is one root). */
function advancingShare(slice: Slice, airspeedMps: number): number {
  let low = 0;
  let high = 1;
  for (let i = 0; i < 50; i += 1) {
    const middle = (low + high) / 2;
    if (speedIn(slice, middle, airspeedMps) > 0) low = middle;
    else high = middle;
  }
  return low;
}

/** Flies the glide. `visit` is told of each point passed, for a picture; leave it out and nothing is kept. */
export function flyGlide(glide: Glide, visit?: (point: GlidePoint) => void): GlideEnd {
  const { profile, airspeedMps, totalSinkMps, distanceM, launchM } = glide;
  const top = profile.altitudeM.length - 1;
  if (top < 0 || !(launchM <= profile.altitudeM[top]!) || !(totalSinkMps > 0) || !Number.isFinite(airspeedMps)) return { kind: 'unknown' };
  let alongM = 0;
  visit?.({ alongM, altitudeM: launchM });
  for (const slice of slices(glide)) {
    const first = speedIn(slice, 0, airspeedMps);
    const end = speedIn(slice, 1, airspeedMps);
    if (Number.isNaN(first) || Number.isNaN(end)) return { kind: 'unknown' };
    if (first <= 0) return { kind: 'does not arrive', altitudeM: slice.topM };
    const maxShare = end > 0 ? 1 : advancingShare(slice, airspeedMps);
    const thickness = slice.topM - slice.bottomM;
    const coveredM = (meanSpeed(slice, maxShare, airspeedMps) * thickness * maxShare) / totalSinkMps;
    if (alongM + coveredM >= distanceM) {
      const altitudeM = slice.topM - thickness * shareFor(slice, distanceM - alongM, glide, maxShare);
      visit?.({ alongM: distanceM, altitudeM });
      return { kind: 'arrives', altitudeM, durationS: (launchM - altitudeM) / totalSinkMps };
    }
    alongM += coveredM;
    if (maxShare < 1) return { kind: 'does not arrive', altitudeM: slice.topM - thickness * maxShare };
    visit?.({ alongM, altitudeM: slice.bottomM });
  }
  const lowest = componentsOfVector(profile.uMps[0]!, profile.vMps[0]!, glide.trackDeg);
  const square = airspeedMps * airspeedMps - lowest.crossMps * lowest.crossMps;
  const speed = square <= 0 ? -1 : Math.sqrt(square) - Math.max(0, lowest.headMps);
  if (Number.isNaN(speed)) return { kind: 'unknown' };
  const fromM = Math.min(launchM, profile.altitudeM[0]!);
  if (speed <= 0) return { kind: 'does not arrive', altitudeM: fromM };
  const altitudeM = fromM - ((distanceM - alongM) * totalSinkMps) / speed;
  visit?.({ alongM: distanceM, altitudeM });
  return { kind: 'arrives', altitudeM, durationS: (launchM - altitudeM) / totalSinkMps };
}
