import { degrees, radians } from '../angles.ts';

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

/** Longest step as a share of the time the line takes at trim speed; fourth order, height good to 0.1 %. */
const LONGEST_STEP = 1 / 30;
/** Steps begin this much shorter and grow with time: near the ground the log law bends the wind most. */
const FIRST_STEP = 1 / 60;
const STEP_GROWTH = 0.2;
const MAX_STEPS = 4000;

const UNKNOWN_END: TowEnd = { releaseM: NaN, durationS: NaN, why: 'release angle' };

interface Rate {
  readonly up: number;
  readonly closing: number;
}

/** The same balance without a single arc: with q = t^2 + 2 t sin b + 1, sin and cos of the first angle are t cos b / sqrt q and (1 + t sin b) / sqrt q. */
function rate(tow: Tow, toWinchM: number, heightM: number): Rate {
  const distanceM = Math.sqrt(toWinchM * toWinchM + heightM * heightM);
  const sine = heightM / distanceM;
  const cosine = toWinchM / distanceM;
  const t = tow.tensionRatio;
  const rootQ = Math.sqrt(t * t + 2 * t * sine + 1);
  const pull = (t * cosine) / rootQ;
  const rest = (1 + t * sine) / rootQ;
  const drag = 1 / tow.glideAtTrim;
  const perLength = (tow.trimMps * Math.sqrt(rootQ)) / Math.sqrt(1 + drag * drag);
  return { up: perLength * (pull - rest * drag), closing: perLength * (rest + pull * drag) - tow.headwindMps(heightM > 0 ? heightM : 0) };
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
  const longestS = (tow.lineLengthM / tow.trimMps) * LONGEST_STEP;
  const tangent = Math.tan(radians(tow.releaseAngleDeg));
  const endOf = (at: { readonly x: number; readonly z: number }): TowEnd['why'] | 'unknown' | null => {
    if (Number.isNaN(at.x) || Number.isNaN(at.z)) return 'unknown';
    if (at.z <= 0) return 'no climb';
    if (Math.hypot(at.x, at.z) > tow.lineLengthM + 1e-9) return 'line length';
    return at.z >= at.x * tangent ? 'release angle' : null;
  };
  let x = tow.lineLengthM;
  let z = 0;
  let timeS = 0;
  visit?.({ timeS, toWinchM: x, heightM: z, lineAngleDeg: 0 });
  for (let n = 0; n < MAX_STEPS; n += 1) {
    const dt = Math.min(longestS, Math.max(longestS * FIRST_STEP, STEP_GROWTH * timeS));
    const next = step(tow, x, z, dt);
    const why = endOf(next);
    if (why === 'no climb') return { releaseM: 0, durationS: timeS, why };
    if (why !== null) {
      // A step may look higher than it gets: winds that end above the release do not make it unknown.
      const { lastS, afterS } = aroundEnd(dt, (partS) => endOf(step(tow, x, z, partS)) !== null);
      const ended = endOf(step(tow, x, z, afterS));
      if (ended === 'unknown' || ended === null) return UNKNOWN_END;
      const end = step(tow, x, z, lastS);
      visit?.(pointAt(timeS + lastS, end.x, end.z));
      return { releaseM: Math.max(0, end.z), durationS: timeS + lastS, why: ended };
    }
    x = next.x;
    z = next.z;
    timeS += dt;
    visit?.(pointAt(timeS, x, z));
  }
  return UNKNOWN_END;
}

function pointAt(timeS: number, toWinchM: number, heightM: number): TowPoint {
  return { timeS, toWinchM, heightM, lineAngleDeg: degrees(Math.atan2(heightM, toWinchM)) };
}

/** The longest part of a step after which the tow has not ended, and a part a hair longer after which it has, by bisection. */
function aroundEnd(dt: number, ended: (partS: number) => boolean): { readonly lastS: number; readonly afterS: number } {
  let lastS = 0;
  let afterS = dt;
  for (let i = 0; i < 30; i += 1) {
    const middle = (lastS + afterS) / 2;
    if (ended(middle)) afterS = middle;
    else lastS = middle;
  }
  return { lastS, afterS };
}
