import { geometricM, geopotentialM, pressureAltitudeM, standardAir } from '../air/standard-atmosphere.ts';
import { consistentGustMps } from '../air/gust.ts';
import { epochOf } from '../time.ts';
import { pascal } from '../units.ts';
import type { Conditions, Level, NearGroundWind, Wind } from './conditions.ts';

/**
 * The gate every forecast number passes before anything is computed from it. A value that is missing, not a finite
 * number or outside its plausible range leaves as NaN, and NaN ends as "unknown": nothing later needs to ask again.
 */
export const PLAUSIBLE = {
  windMps: [0, 75], gustMps: [0, 100], directionDeg: [0, 360], temperatureC: [-60, 55], pressureHpa: [400, 1085],
  seaLevelPressureHpa: [870, 1085], capeJkg: [0, 8000], precipitationMm: [0, 150], percent: [0, 100],
  visibilityM: [0, 300_000], mixedLayerM: [0, 6000], radiationWm2: [-5, 1400], heatFluxWm2: [-400, 800],
  weatherCode: [0, 99], elevationM: [-500, 9000],
} as const satisfies Record<string, readonly [number, number]>;

export type PlausibleKey = keyof typeof PLAUSIBLE;

/** Dew points may exceed the temperature by this much through rounding. */
const DEW_POINT_EXCESS_K = 0.5;
/** Levels lie within this of the standard atmosphere's height for their pressure. */
const LEVEL_TOLERANCE_M = 900;
/** Surface pressure lies within this of the standard atmosphere at the model's ground. */
const SURFACE_PRESSURE_TOLERANCE_HPA = 60;

/** The value, or NaN when it is not a finite number inside its range. */
export function plausible(value: unknown, key: PlausibleKey): number {
  if (typeof value !== 'number' || !Number.isFinite(value)) return NaN;
  const [low, high] = PLAUSIBLE[key];
  return value >= low && value <= high ? value : NaN;
}

export interface CheckedWind {
  readonly speedMps: number;
  readonly fromDeg: number;
}

export interface CheckedLevel extends CheckedWind {
  readonly pressureHpa: number;
  readonly altitudeM: number;
  readonly temperatureC: number;
  readonly relativeHumidityPct: number;
}

/** An hour in which every number is plausible or NaN. */
export interface CheckedHour {
  readonly validAtMs: number;
  readonly gridElevationM: number;
  readonly wind10m: CheckedWind;
  /** NaN when missing or inconsistent with the mean; raised to the mean when up to 1 m/s below it. */
  readonly gustMps: number;
  /** The forecast gust lay below the mean and was raised to it. */
  readonly gustRaised: boolean;
  readonly nearGround: readonly (CheckedWind & { readonly heightAglM: number })[];
  /** Rising; a level whose height is unknown lies as high as it could, its values NaN. */
  readonly levels: readonly CheckedLevel[];
  readonly temperature2mC: number;
  readonly dewPoint2mC: number;
  readonly surfacePressureHpa: number;
  readonly seaLevelPressureHpa: number;
  readonly referencePressureHpa: { readonly a: number; readonly b: number };
  readonly mixedLayerM: number;
  readonly shortwaveWm2: number;
  readonly sensibleHeatWm2: number;
  readonly capeJkg: number;
  readonly precipitationMm: number;
  readonly precipitationProbabilityPct: number;
  readonly weatherCode: number;
  readonly visibilityM: number;
  readonly lowCloudPct: number;
}

const NO_WIND: CheckedWind = { speedMps: NaN, fromDeg: NaN };
const HOLE = { speedMps: NaN, fromDeg: NaN, temperatureC: NaN, relativeHumidityPct: NaN };

function checkedWind(wind: Wind | null | undefined): CheckedWind {
  if (wind === null || wind === undefined) return NO_WIND;
  return { speedMps: plausible(wind.speedMps, 'windMps'), fromDeg: plausible(wind.fromDeg, 'directionDeg') };
}

function checkedNearGround(list: readonly NearGroundWind[] | null | undefined): CheckedHour['nearGround'] {
  if (list === null || list === undefined || list.length === 0) return [];
  return list
    .filter((entry) => Number.isFinite(entry.heightAglM) && entry.heightAglM > 10 && entry.heightAglM <= 1000)
    .map((entry) => ({ ...checkedWind(entry), heightAglM: entry.heightAglM }))
    .sort((a, b) => a.heightAglM - b.heightAglM)
    .filter((entry, i, all) => i === 0 || entry.heightAglM !== all[i - 1]?.heightAglM);
}

/** Geometric height of a pressure in the standard atmosphere. */
function standardHeightM(pressureHpa: number): number {
  return geometricM(pressureAltitudeM(pascal(pressureHpa)));
}

function checkedLevels(list: readonly Level[] | null | undefined): CheckedLevel[] {
  if (list === null || list === undefined || list.length === 0) return [];
  const levels = list
    .filter((level) => !Number.isNaN(plausible(level.pressureHpa, 'pressureHpa')))
    .map((level) => {
      const wind = checkedWind(level);
      const altitudeM = typeof level.altitudeM === 'number' && Math.abs(level.altitudeM - standardHeightM(level.pressureHpa)) <= LEVEL_TOLERANCE_M ? level.altitudeM : NaN;
      return {
        ...wind, pressureHpa: level.pressureHpa, altitudeM,
        temperatureC: plausible(level.temperatureC, 'temperatureC'), relativeHumidityPct: plausible(level.relativeHumidityPct, 'percent'),
      };
    })
    .sort((a, b) => b.pressureHpa - a.pressureHpa);
  return placed(levels);
}

/**
 * Heights must rise as pressure falls: of any two levels that do not, both lose theirs. A level without a height becomes a hole, a NaN
 * node as high as it could lie below the next known one, so that nothing is ever interpolated across it.
 */
function placed(levels: readonly CheckedLevel[]): CheckedLevel[] {
  const heights = levels.map((level) => level.altitudeM);
  for (let i = 0; i < levels.length; i += 1) {
    for (let j = i + 1; j < levels.length; j += 1) if (levels[j]!.altitudeM <= levels[i]!.altitudeM) heights[i] = heights[j] = NaN;
  }
  let ceilingM = Infinity;
  for (let i = heights.length - 1; i >= 0; i -= 1) {
    if (Number.isNaN(heights[i])) heights[i] = Math.min(standardHeightM(levels[i]!.pressureHpa) + LEVEL_TOLERANCE_M, ceilingM - 1);
    ceilingM = heights[i]!;
  }
  return levels.map((level, i) => (level.altitudeM === heights[i] ? level : { ...HOLE, pressureHpa: level.pressureHpa, altitudeM: heights[i]! }));
}

function checkedSurfacePressure(value: unknown, gridElevationM: number): number {
  const pressureHpa = plausible(value, 'pressureHpa');
  if (Number.isNaN(pressureHpa)) return NaN;
  const standardHpa = standardAir(geopotentialM(gridElevationM)).pressurePa / 100;
  return Math.abs(pressureHpa - standardHpa) <= SURFACE_PRESSURE_TOLERANCE_HPA ? pressureHpa : NaN;
}

/** Passes an hour through the gate. */
export function checkHour(hour: Conditions): CheckedHour {
  const wind10m = checkedWind(hour.wind10m);
  const rawGust = plausible(hour.gustMps, 'gustMps');
  const gustMps = Number.isNaN(wind10m.speedMps) ? rawGust : consistentGustMps(wind10m.speedMps, rawGust);
  const gridElevationM = plausible(hour.gridElevationM, 'elevationM');
  const temperature2mC = plausible(hour.temperature2mC, 'temperatureC');
  const dew = plausible(hour.dewPoint2mC, 'temperatureC');
  return {
    validAtMs: epochOf(hour.validAt),
    gridElevationM, wind10m, gustMps,
    gustRaised: gustMps > rawGust,
    nearGround: checkedNearGround(hour.nearGround),
    levels: checkedLevels(hour.levels),
    temperature2mC,
    dewPoint2mC: dew - temperature2mC > DEW_POINT_EXCESS_K ? NaN : dew,
    surfacePressureHpa: checkedSurfacePressure(hour.surfacePressureHpa, gridElevationM),
    seaLevelPressureHpa: plausible(hour.seaLevelPressureHpa, 'seaLevelPressureHpa'),
    referencePressureHpa: {
      a: plausible(hour.referencePressureHpa?.a, 'seaLevelPressureHpa'), b: plausible(hour.referencePressureHpa?.b, 'seaLevelPressureHpa'),
    },
    mixedLayerM: plausible(hour.mixedLayerM, 'mixedLayerM'),
    shortwaveWm2: plausible(hour.shortwaveWm2, 'radiationWm2'),
    sensibleHeatWm2: plausible(hour.sensibleHeatWm2, 'heatFluxWm2'),
    capeJkg: plausible(hour.capeJkg, 'capeJkg'),
    precipitationMm: plausible(hour.precipitationMm, 'precipitationMm'),
    precipitationProbabilityPct: plausible(hour.precipitationProbabilityPct, 'percent'),
    weatherCode: Number.isInteger(hour.weatherCode) ? plausible(hour.weatherCode, 'weatherCode') : NaN,
    visibilityM: plausible(hour.visibilityM, 'visibilityM'),
    lowCloudPct: plausible(hour.lowCloudPct, 'percent'),
  };
}
