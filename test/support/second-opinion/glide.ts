// flight-model.md section 5: the glide to the landing, stepped down in height. The ground speed depends on height alone, so
// dz/dx = -(S + s)/groundSpeed(z) is walked as dx = groundSpeed(z) dz/(S + s) in slices of 0.1 m, midpoint rule.
import { UNKNOWN, known } from './numbers.ts';
import type { Profile } from './wind.ts';
import { crossOn, headOn } from './wind.ts';
import { groundSpeed, sinkAt } from './wing.ts';
import type { Polar } from './wing.ts';

export type GlideInputs = {
  wingAtLanding: Polar;
  profile: Profile;
  launchM: number;
  landingM: number;
  trackDeg: number;
  distanceM: number;
  sinkingMps: number;
};

const SLICE_M = 0.1;

// Metres above the landing, negative allowed; null: does not arrive; NaN: unknown.
export function arrivalHeightM(inputs: GlideInputs): number | null {
  const { wingAtLanding, profile, launchM, landingM, trackDeg, distanceM, sinkingMps } = inputs;
  const V = wingAtLanding.trim;
  const totalSink = sinkAt(wingAtLanding, V) + sinkingMps;
  if (!known(totalSink)) return UNKNOWN;
  if (launchM > profile.highestM) return UNKNOWN; // "A launch above the highest node: unknown."

  function speedAt(altitudeM: number): number | null {
    const wind = profile.atOrLowest(altitudeM);
    let head = headOn(wind, trackDeg);
    // "Below the lowest node that node's wind is used; its along-track part counts as nil where it would help, its cross part stays."
    if (altitudeM < profile.lowestM && head < 0) head = 0;
    return groundSpeed(V, crossOn(wind, trackDeg), head);
  }

  let z = launchM;
  let x = 0;
  while (x < distanceM) {
    if (z <= profile.lowestM) {
      // From here down the wind no longer changes: the rest is one straight line.
      const speed = speedAt(z - 1);
      if (speed === null || speed <= 0) return null;
      if (!known(speed)) return UNKNOWN;
      return z - ((distanceM - x) * totalSink) / speed - landingM;
    }
    const dz = Math.min(SLICE_M, z - profile.lowestM);
    const speed = speedAt(z - dz / 2);
    if (speed === null || speed <= 0) return null; // "Not advancing anywhere"
    if (!known(speed)) return UNKNOWN;
    const dx = (speed * dz) / totalSink;
    if (x + dx >= distanceM) return z - (dz * (distanceM - x)) / dx - landingM;
    x += dx;
    z -= dz;
    if (z - profile.lowestM < 1e-9) z = profile.lowestM;
  }
  return z - landingM;
}
