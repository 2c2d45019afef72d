// flight-model.md section 6, "Tow climb": quasi-steady, straight weightless line, in steps of 0.01 s, midpoint rule.
import { UNKNOWN, degToRad, known } from './numbers.ts';

export type TowInputs = {
  trimMps: number;
  glide: number;
  tensionRatio: number;
  lineLengthM: number;
  releaseAngleDeg: number;
  // Head part of the wind along the heading at a height above the strip.
  headwindMps: (heightM: number) => number;
};
export type TowResult = { releaseM: number; climbS: number };

const STEP_S = 0.01;

export function towClimb(inputs: TowInputs): TowResult {
  const { trimMps, glide, tensionRatio: t, lineLengthM, releaseAngleDeg, headwindMps } = inputs;
  const unknown = { releaseM: UNKNOWN, climbS: UNKNOWN };
  if (!known(trimMps)) return unknown;
  const releaseAngle = degToRad(releaseAngleDeg);

  function rates(heightM: number, distanceM: number): { climb: number; closing: number } {
    const b = Math.atan2(heightM, distanceM);
    const gamma = Math.atan((t * Math.cos(b)) / (1 + t * Math.sin(b))) - Math.atan(1 / glide);
    const V = trimMps * (t * t + 2 * t * Math.sin(b) + 1) ** 0.25;
    return { climb: V * Math.sin(gamma), closing: V * Math.cos(gamma) - headwindMps(heightM) };
  }

  let heightM = 0;
  let distanceM = lineLengthM;
  let elapsedS = 0;
  while (elapsedS < 7200) {
    const start = rates(heightM, distanceM);
    const middle = rates(
      Math.max(0, heightM + (start.climb * STEP_S) / 2),
      distanceM - (start.closing * STEP_S) / 2,
    );
    if (!known(middle.climb) || !known(middle.closing)) return unknown;
    const nextHeightM = Math.max(0, heightM + middle.climb * STEP_S);
    const nextDistanceM = distanceM - middle.closing * STEP_S;
    // "the distance to the winch never exceeds the line: where it would, release there"
    if (Math.hypot(nextHeightM, nextDistanceM) > lineLengthM) return { releaseM: heightM, climbS: elapsedS };
    const angle = Math.atan2(heightM, distanceM);
    const nextAngle = Math.atan2(nextHeightM, nextDistanceM);
    if (nextAngle >= releaseAngle) {
      const part = (releaseAngle - angle) / (nextAngle - angle);
      return { releaseM: heightM + part * (nextHeightM - heightM), climbS: elapsedS + part * STEP_S };
    }
    if (nextDistanceM <= 0) return { releaseM: heightM, climbS: elapsedS };
    heightM = nextHeightM;
    distanceM = nextDistanceM;
    elapsedS += STEP_S;
  }
  return unknown;
}
