/**
 * The places, the wing, the sheets and the weather of the self-test. Invented, and never shown. A short winter day on
 * 65° north in UTC: few hours to judge, and no zone whose rules could change.
 */
import type { Conditions, ConditionField, Forecast, Level } from '../../forecast/conditions.ts';
import type { LimitSheet } from '../../margin/sheet.ts';
import type { LaunchSite, StripSite } from '../../site.ts';
import { HOUR_MS, isoUtc } from '../../time.ts';
import type { Wing } from '../../wing/wing.ts';

export const DATE = '2026-12-21';
export const NOW = `${DATE}T06:00:00Z`;
const RUN_AT = `${DATE}T00:00:00Z`;
const GROUND_M = 400;

const COMMON = {
  lonDeg: 0, latDeg: 65, timeZone: 'UTC', daylight: { rule: 'sunrise-sunset', beforeMin: 0, afterMin: 0 }, sectors: [], localWind: [],
  pressureStep: null, localRules: null, notes: [], declinationDeg: 0,
} as const;

export const LAUNCH: LaunchSite = {
  ...COMMON, kind: 'launch', id: 'self-test-launch', name: 'Self-test', elevationM: 650, facingDeg: 250, slopeDeg: 24,
  hill: { form: 'ridge', heightM: 180, halfLengthM: 320 }, summitElevationM: null,
  landing: { lonDeg: -0.02, latDeg: 65, elevationM: 410, roughnessM: 0.03 }, trackDeg: 250, distanceM: 940,
};

export const STRIP: StripSite = {
  ...COMMON, kind: 'strip', id: 'self-test-strip', name: 'Self-test', elevationM: 402, headingDeg: 250, usableBothWays: true,
  lineLengthM: 900, roughnessM: 0.03, lineTensionRatio: 0.8, releaseAngleDeg: 70, lineClearM: null,
};

export const WING: Wing = { class: null, trimMps: 10.5, glideAtTrim: 9, minSinkMps: 1.1, stallMps: 6.5, topMps: 14, referenceMassKg: null, allUpMassKg: null };

const PARAMETERS = { lightWindMps: 1.34, bandM: 0, sinkMps: 0, sinkPerThermal: 0.25 };

export const LAUNCH_SHEET: LimitSheet = {
  id: 'self-test-launch', name: 'Self-test', version: 1, kind: 'launch', for: 'nobody', parameters: PARAMETERS, closeBands: {}, basis: {},
  limits: {
    maxMeanMps: 6, maxGustMps: 8, maxGustSpreadMps: 3.5, maxCrossMps: 3, maxTailMps: 0.5, maxOffAxisDeg: 60, minForwardMps: 2.5, minForwardAloftMps: 2,
    maxUpperMps: 9, maxBackMps: 0.5, minArrivalM: 20, minLandingReserveMps: 1, maxThermalMps: 2.5, minCloudBaseM: 200, maxCapeJkg: 300,
    maxRainMm: 0.2, maxRainChancePct: 40, minVisibilityM: 3000,
  },
};

export const STRIP_SHEET: LimitSheet = {
  ...LAUNCH_SHEET, id: 'self-test-strip', kind: 'strip',
  limits: { maxMeanMps: 7, maxGustMps: 9, maxGustSpreadMps: 3.5, maxCrossMps: 3, maxTailMps: 1, maxClimbShearMps: 5, minReleaseM: 150, minForwardMps: 2, maxRainMm: 0.2 },
};

/** Wind from 265°, 3 m/s at 10 m, a little more with every level; dry, clear, cool. */
export const LEVELS: readonly Level[] = ([[950, 545], [925, 767], [900, 993], [850, 1462], [700, 3016]] as const).map(([pressureHpa, altitudeM], index) => ({
  pressureHpa, altitudeM, speedMps: 3.4 + index / 2, fromDeg: 262, temperatureC: 4 - altitudeM * 0.0055, relativeHumidityPct: 50,
}));

function hour(index: number, changes: Partial<Conditions> = {}): Conditions {
  return {
    validAt: isoUtc(Date.parse(`${DATE}T00:00:00Z`) + index * HOUR_MS), gridElevationM: GROUND_M, wind10m: { speedMps: 3 + (index % 3) / 20, fromDeg: 265 },
    gustMps: 4.6 + (index % 2) / 10, levels: LEVELS, temperature2mC: 4 - (index % 5) / 10, dewPoint2mC: -4, surfacePressureHpa: 968, seaLevelPressureHpa: 1017,
    mixedLayerM: 350, shortwaveWm2: 60, capeJkg: 10, precipitationMm: 0, precipitationProbabilityPct: 5, weatherCode: 1, visibilityM: 20_000, ...changes,
  };
}

const DECLARES = [
  'wind10m', 'gustMps', 'levels', 'temperature2mC', 'dewPoint2mC', 'surfacePressureHpa', 'seaLevelPressureHpa', 'mixedLayerM', 'shortwaveWm2', 'capeJkg',
  'precipitationMm', 'precipitationProbabilityPct', 'weatherCode', 'visibilityM',
] as const satisfies readonly ConditionField[];

/** Three judged hours, 11 to 13, and the two after them that a thunderstorm could come in. */
const AROUND = [11, 12, 13, 14, 15];

/** That weather, changed hour by hour as told. */
export function forecast(changeOf: (index: number) => Partial<Conditions> = () => ({}), given: Partial<Forecast> & { readonly hours?: readonly number[] } = {}): Forecast {
  const { hours = AROUND, ...rest } = given;
  return {
    source: 'self-test:one', kind: 'deterministic', runAt: RUN_AT, fetchedAt: NOW, declares: DECLARES,
    members: [hours.map((index) => hour(index, changeOf(index)))], gridDistanceM: 900, demo: false, trustedWithoutRunTime: false, ...rest,
  };
}
