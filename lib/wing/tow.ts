import { radians } from '../angles.ts';

/**
 * A static-winch tow, quasi-steady, on a straight weightless line: tension t as a share of all-up weight, line angle b
 * below the horizon at the wing. Balance of forces along and across the path gives
 *   gamma = atan(t cos b / (1 + t sin b)) - atan(1/glide),   V = trim (t^2 + 2 t sin b + 1)^(1/4),
 * then dz = V sin gamma dt and the distance to the winch shrinks by V cos gamma - headwind(z). Release at the release
 * angle, or where the line would have to grow longer than it is; a tension that lifts nothing releases on the ground.
 */
export interface Tow {
  readonly trimMps: number;
  readonly glideAtTrim: number;
  readonly tensionRatio: number;
  readonly lineLengthM: number;
  readonly releaseAngleDeg: number;
  /** Headwind toward the winch at a height above the strip, m/s; NaN where unknown. */
  headwindMps(heightM: number): number;
}

export interface TowPoint {
  readonly timeS: number;
  /** Still to go to the winch, over the ground. */
  readonly toWinchM: number;
  readonly heightM: number;
  readonly lineAngleDeg: number;
}

export interface TowEnd {
  /** Height above the strip at release, NaN when a wind on the way is unknown. */
  readonly releaseM: number;
  readonly durationS: number;
  readonly why: 'release angle' | 'line length' | 'no climb';
}

/** Flight-path angle and airspeed at a line angle. */
export function towBalance(tow: Pick<Tow, 'trimMps' | 'glideAtTrim' | 'tensionRatio'>, lineAngleDeg: number): { readonly gammaRad: number; readonly airspeedMps: number } {
  const sine = Math.sin(radians(lineAngleDeg));
  const cosine = Math.cos(radians(lineAngleDeg));
  return balance(tow, sine, cosine);
}

function balance(tow: Pick<Tow, 'trimMps' | 'glideAtTrim' | 'tensionRatio'>, sine: number, cosine: number): { gammaRad: number; airspeedMps: number } {
  const t = tow.tensionRatio;
  return {
    gammaRad: Math.atan((t * cosine) / (1 + t * sine)) - Math.atan(1 / tow.glideAtTrim),
    airspeedMps: tow.trimMps * (t * t + 2 * t * sine + 1) ** 0.25,
  };
}

/** Steps across a still-air climb; fourth-order steps of this size leave the height good to better than 0.1 %. */
const STEPS = 160;
const MAX_STEPS = 4000;

interface Rate {
  readonly up: number;
  readonly closing: number;
}

function rate(tow: Tow, toWinchM: number, heightM: number): Rate {
  const distance = Math.hypot(toWinchM, heightM);
  const { gammaRad, airspeedMps } = balance(tow, heightM / distance, toWinchM / distance);
  return { up: airspeedMps * Math.sin(gammaRad), closing: airspeedMps * Math.cos(gammaRad) - tow.headwindMps(Math.max(0, heightM)) };
}

function step(tow: Tow, x: number, z: number, dt: number): { readonly x: number; readonly z: number } {
  const k1 = rate(tow, x, z);
  const k2 = rate(tow, x - (k1.closing * dt) / 2, z + (k1.up * dt) / 2);
  const k3 = rate(tow, x - (k2.closing * dt) / 2, z + (k2.up * dt) / 2);
  const k4 = rate(tow, x - k3.closing * dt, z + k3.up * dt);
  return {
    x: x - (dt * (k1.closing + 2 * k2.closing + 2 * k3.closing + k4.closing)) / 6,
    z: z + (dt * (k1.up + 2 * k2.up + 2 * k3.up + k4.up)) / 6,
  };
}

/** Flies the tow from the strip. `visit` is told of each step, for a picture; leave it out and nothing is kept. */
export function flyTow(tow: Tow, visit?: (point: TowPoint) => void): TowEnd {
  const dt = tow.lineLengthM / tow.trimMps / STEPS;
  const releaseTangent = Math.tan(radians(tow.releaseAngleDeg));
  let x = tow.lineLengthM;
  let z = 0;
  let timeS = 0;
  visit?.({ timeS, toWinchM: x, heightM: z, lineAngleDeg: 0 });
  for (let n = 0; n < MAX_STEPS; n += 1) {
    const next = step(tow, x, z, dt);
    if (Number.isNaN(next.x) || Number.isNaN(next.z)) return { releaseM: NaN, durationS: NaN, why: 'release angle' };
    if (next.z <= 0) return { releaseM: 0, durationS: timeS, why: 'no climb' };
    const angleShare = shareToAngle(x, z, next, releaseTangent);
    const lineShare = shareToLine(x, z, next, tow.lineLengthM);
    if (angleShare < 1 || lineShare < 1) {
      const share = Math.min(angleShare, lineShare);
      const end = step(tow, x, z, dt * share);
      visit?.({ timeS: timeS + dt * share, toWinchM: end.x, heightM: end.z, lineAngleDeg: (Math.atan2(end.z, end.x) * 180) / Math.PI });
      return { releaseM: end.z, durationS: timeS + dt * share, why: angleShare <= lineShare ? 'release angle' : 'line length' };
    }
    x = next.x;
    z = next.z;
    timeS += dt;
    visit?.({ timeS, toWinchM: x, heightM: z, lineAngleDeg: (Math.atan2(z, x) * 180) / Math.PI });
  }
  return { releaseM: NaN, durationS: NaN, why: 'release angle' };
}

/** Share of a step at which z = x tan(release), 1 or more when it lies beyond the step. */
function shareToAngle(x: number, z: number, next: { readonly x: number; readonly z: number }, tangent: number): number {
  const before = z - x * tangent;
  const after = next.z - next.x * tangent;
  return after < 0 ? Infinity : before / (before - after);
}

/** Share of a step at which the wing is a full line away from the winch again; the start itself does not count. */
function shareToLine(x: number, z: number, next: { readonly x: number; readonly z: number }, lineM: number): number {
  const before = Math.hypot(x, z) - lineM;
  const after = Math.hypot(next.x, next.z) - lineM;
  if (after <= 1e-9) return Infinity;
  return after === before ? 0 : Math.max(0, -before / (after - before));
}
