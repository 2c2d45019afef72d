import type { MarginId } from './ids.ts';

/** The limits someone is held to, unit in every name. A limit left out is not judged, and said so. */
export const LIMIT_NAMES = [
  'maxMeanMps', 'maxGustMps', 'maxGustSpreadMps', 'maxCrossMps', 'maxTailMps', 'maxOffAxisDeg', 'minForwardMps',
  'minForwardAloftMps', 'maxUpperMps', 'maxBackMps', 'minArrivalM', 'minLandingReserveMps', 'maxRunMps', 'slopeBufferDeg',
  'minSlopeDeg', 'maxThermalMps', 'minCloudBaseM', 'maxCapeJkg', 'maxRainMm', 'maxRainChancePct', 'minVisibilityM',
  'maxPressureStepHpa', 'minLiftMps', 'minAgreement', 'maxClimbShearMps', 'minReleaseM',
] as const;

export type LimitName = (typeof LIMIT_NAMES)[number];

/** Parameters stand among the limits of a sheet but are not compared with anything. */
export const PARAMETER_NAMES = ['lightWindMps', 'bandM', 'sinkMps', 'sinkPerThermal'] as const;

export type ParameterName = (typeof PARAMETER_NAMES)[number];

export interface LimitSheet {
  readonly id: string;
  readonly name: string;
  readonly version: number;
  readonly kind: 'launch' | 'strip';
  /** Whom it is for, in words; says that local rules and an instructor's or tow master's word come first. */
  readonly for: string;
  readonly limits: Readonly<Partial<Record<LimitName, number>>>;
  /** Defaults filled in: lightWindMps 1.34, bandM 0, sinkMps 0, sinkPerThermal 0.25. */
  readonly parameters: Readonly<Record<ParameterName, number>>;
  readonly closeBands: Readonly<Partial<Record<MarginId, number>>>;
  readonly basis: Readonly<Partial<Record<LimitName | ParameterName, string>>>;
}
