// The glide and the tow flown in steps so small that no method is needed: what the integrals of lib/wing are held against.
import { windAt } from '../../../lib/air/profile.ts';
import { componentsOfVector } from '../../../lib/air/wind.ts';
import type { Glide } from '../../../lib/wing/glide.ts';
import type { Tow } from '../../../lib/wing/tow.ts';

const GLIDE_STEP_S = 0.25;

/** Flown by time, half a step ahead each time; `stood` when the wing did not advance. */
export function bruteGlide(glide: Glide): { readonly altitudeM: number; readonly stood: boolean } {
  const { profile, airspeedMps, totalSinkMps, trackDeg, distanceM, launchM } = glide;
  const lowestM = profile.altitudeM[0]!;
  const groundSpeed = (altitudeM: number): number => {
    const { uMps, vMps } = windAt(profile, altitudeM, true);
    const { headMps, crossMps } = componentsOfVector(uMps, vMps, trackDeg);
    if (Math.abs(crossMps) >= airspeedMps) return -1;
    return Math.sqrt(airspeedMps ** 2 - crossMps ** 2) - (altitudeM < lowestM ? Math.max(0, headMps) : headMps);
  };
  let alongM = 0;
  let altitudeM = launchM;
  while (true) {
    if (groundSpeed(altitudeM) <= 0) return { altitudeM, stood: true };
    const stepM = GLIDE_STEP_S * groundSpeed(altitudeM - (GLIDE_STEP_S / 2) * totalSinkMps);
    if (stepM <= 0) return { altitudeM, stood: true };
    if (alongM + stepM >= distanceM) {
      return { altitudeM: altitudeM - GLIDE_STEP_S * ((distanceM - alongM) / stepM) * totalSinkMps, stood: false };
    }
    alongM += stepM;
    altitudeM -= GLIDE_STEP_S * totalSinkMps;
  }
}

/** The balance of the page, written again, in midpoint steps of a thousandth of the line's time; the release height. */
export function bruteTow(tow: Tow): number {
  const { trimMps, glideAtTrim, tensionRatio: t, lineLengthM, releaseAngleDeg } = tow;
  const dt = lineLengthM / trimMps / 3000;
  const rates = (x: number, z: number): readonly [number, number] => {
    const b = Math.atan2(z, x);
    const gamma = Math.atan((t * Math.cos(b)) / (1 + t * Math.sin(b))) - Math.atan(1 / glideAtTrim);
    const speed = trimMps * (t * t + 2 * t * Math.sin(b) + 1) ** 0.25;
    return [-(speed * Math.cos(gamma) - tow.headwindMps(Math.max(0, z))), speed * Math.sin(gamma)];
  };
  let [x, z] = [lineLengthM, 0];
  while (true) {
    const [dx, dz] = rates(x, z);
    const [mx, mz] = rates(x + (dx * dt) / 2, z + (dz * dt) / 2);
    const [nextX, nextZ] = [x + mx * dt, z + mz * dt];
    if (nextZ <= 0) return 0;
    if (Math.hypot(nextX, nextZ) > lineLengthM) return z;
    if (nextZ >= nextX * Math.tan((releaseAngleDeg * Math.PI) / 180)) return nextZ;
    [x, z] = [nextX, nextZ];
  }
}
