/** What each limit and parameter of a sheet may be. Wide enough for any rule someone could hold people to, narrow enough for a slip of the unit. */
import type { LimitName, ParameterName } from '../margin/sheet.ts';
import type { Range } from './fields.ts';

export const LIMIT_RANGES: Readonly<Record<LimitName, Range>> = {
  maxMeanMps: { min: 0.5, max: 25, unit: 'm/s' },
  maxGustMps: { min: 0.5, max: 35, unit: 'm/s' },
  maxGustSpreadMps: { min: 0, max: 20, unit: 'm/s' },
  maxCrossMps: { min: 0, max: 20, unit: 'm/s' },
  maxTailMps: { min: 0, max: 10, unit: 'm/s' },
  maxOffAxisDeg: { min: 0, max: 180, unit: '°' },
  minForwardMps: { min: 0, max: 15, unit: 'm/s' },
  minForwardAloftMps: { min: 0, max: 15, unit: 'm/s' },
  maxUpperMps: { min: 0.5, max: 40, unit: 'm/s' },
  maxBackMps: { min: 0, max: 25, unit: 'm/s' },
  minArrivalM: { min: 0, max: 2000, unit: 'm above the landing' },
  minLandingReserveMps: { min: 0, max: 10, unit: 'm/s above the stall' },
  maxRunMps: { min: 0, max: 30, unit: 'm/s' },
  slopeBufferDeg: { min: 0, max: 30, unit: '° steeper than the glide' },
  minSlopeDeg: { min: 0, max: 60, unit: '°' },
  maxThermalMps: { min: 0, max: 10, unit: 'm/s' },
  minCloudBaseM: { min: 0, max: 5000, unit: 'm' },
  maxCapeJkg: { min: 0, max: 5000, unit: 'J/kg' },
  maxRainMm: { min: 0, max: 20, unit: 'mm in the hour' },
  maxRainChancePct: { min: 0, max: 100, unit: '%' },
  minVisibilityM: { min: 0, max: 50_000, unit: 'm' },
  maxPressureStepHpa: { min: 0, max: 30, unit: 'hPa' },
  minLiftMps: { min: -2, max: 5, unit: 'm/s' },
  minAgreement: { min: 0, max: 1, unit: '(share of members)' },
  maxClimbShearMps: { min: 0, max: 30, unit: 'm/s' },
  minReleaseM: { min: 0, max: 1500, unit: 'm above the strip' },
};

export const PARAMETER_RANGES: Readonly<Record<ParameterName, Range>> = {
  lightWindMps: { min: 0, max: 5, unit: 'm/s' },
  bandM: { min: 0, max: 3000, unit: 'm above the launch' },
  sinkMps: { min: 0, max: 5, unit: 'm/s' },
  sinkPerThermal: { min: 0, max: 2, unit: '(share of the thermal strength)' },
};

/** Where a sheet leaves a parameter out (data shapes, "Limit sheet"). */
export const PARAMETER_DEFAULTS: Readonly<Record<ParameterName, number>> = {
  lightWindMps: 1.34,
  bandM: 0,
  sinkMps: 0,
  sinkPerThermal: 0.25,
};

/** In the margin's own unit: metres of visibility are the largest numbers. */
export const CLOSE_BAND_RANGE: Range = { min: 0, max: 10_000, unit: "(the margin's own unit)" };
