import { failure, success, type Result } from '../result.ts';

/**
 * The polar a wing is reduced to: S(V) = a (V - Vms)^2 + Smin, sink positive down, true airspeed at reference mass and
 * 1.225 kg/m3. Three figures fix it: trim speed, glide at trim, minimum sink. It has its best still-air glide exactly at
 * trim: the tangent from the origin touches at trim when Vms = 2 Smin glide - trim and a = Smin / (trim^2 - Vms^2).
 */
export interface Polar {
  readonly trimMps: number;
  readonly minSinkMps: number;
  readonly minSinkSpeedMps: number;
  readonly curvature: number;
  readonly stallMps: number;
  readonly topMps: number;
}

/** Common practice, no source: a wing stalls near 0.62 and tops out near 1.35 of its trim speed. */
export const STALL_OVER_TRIM = 0.62;
export const TOP_OVER_TRIM = 1.35;

export interface PolarFigures {
  readonly trimMps: number;
  readonly glideAtTrim: number;
  readonly minSinkMps: number;
  readonly stallMps: number;
  readonly topMps: number;
}

/** The polar of three figures, or in a sentence why no wing has them. */
export function polarFrom(figures: PolarFigures): Result<Polar, string> {
  const { trimMps, glideAtTrim, minSinkMps, stallMps, topMps } = figures;
  const minSinkSpeedMps = 2 * minSinkMps * glideAtTrim - trimMps;
  const speed = (mps: number): string => `${mps.toFixed(2)} m/s`;
  if (!Number.isFinite(minSinkSpeedMps)) return failure('the figures of a wing are numbers');
  if (minSinkSpeedMps >= trimMps) {
    return failure(`minimum sink would be reached at ${speed(minSinkSpeedMps)}, not slower than trim ${speed(trimMps)}: minSinkMps must be below trimMps / glideAtTrim = ${speed(trimMps / glideAtTrim)}`);
  }
  if (minSinkSpeedMps <= stallMps) {
    return failure(`minimum sink would be reached at ${speed(minSinkSpeedMps)}, at or below the stall ${speed(stallMps)}: minSinkMps must be above ${speed((trimMps + stallMps) / (2 * glideAtTrim))} for this trim and glide`);
  }
  if (topMps < trimMps) return failure(`top speed ${speed(topMps)} is below trim ${speed(trimMps)}`);
  const curvature = minSinkMps / (trimMps ** 2 - minSinkSpeedMps ** 2);
  return success({ trimMps, minSinkMps, minSinkSpeedMps, curvature, stallMps, topMps });
}

/** Sink at an airspeed, m/s down. */
export function sinkMps(polar: Polar, speedMps: number): number {
  return polar.curvature * (speedMps - polar.minSinkSpeedMps) ** 2 + polar.minSinkMps;
}

/** The same wing where every speed and sink is k times as large: V and S scale together, glide stays. */
export function scaledPolar(polar: Polar, k: number): Polar {
  return {
    trimMps: polar.trimMps * k, minSinkMps: polar.minSinkMps * k, minSinkSpeedMps: polar.minSinkSpeedMps * k,
    curvature: polar.curvature / k, stallMps: polar.stallMps * k, topMps: polar.topMps * k,
  };
}
