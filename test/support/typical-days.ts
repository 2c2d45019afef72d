// Days as a forecaster would tell them, turned into the hours of a source: the winds at a few heights, the temperatures at
// a few more, and what the ground sees of it. Places and weather are invented; the date is one in May at Vienna's clocks.
import { readFileSync } from 'node:fs';
import path from 'node:path';
import type { DayInput } from '../../lib/brief/day-input.ts';
import type { JudgedDay, JudgedHour } from '../../lib/brief/day.ts';
import { judgeDay } from '../../lib/brief/judge-day.ts';
import { dewPointC } from '../../lib/air/moist-air.ts';
import { geometricM, geopotentialM, pressureAltitudeM, standardAir } from '../../lib/air/standard-atmosphere.ts';
import { fromDegOf, vectorOf } from '../../lib/air/wind.ts';
import { parseSheets } from '../../lib/config/sheet.ts';
import { parseThresholds } from '../../lib/config/thresholds.ts';
import { parseWingClasses } from '../../lib/config/wing-classes.ts';
import { CONDITION_FIELDS, type Conditions, type Forecast, type Level } from '../../lib/forecast/conditions.ts';
import type { MarginId } from '../../lib/margin/ids.ts';
import type { LimitSheet } from '../../lib/margin/sheet.ts';
import type { Result } from '../../lib/result.ts';
import type { LaunchSite, Site, StripSite } from '../../lib/site.ts';
import { epochOf, HOUR_MS, hourlyInstants, isoUtc } from '../../lib/time.ts';
import type { WingClass } from '../../lib/wing/wing.ts';
import { root } from './run-tool.ts';

/** A wind as it is said: metres a second, and where from. */
export type Said = readonly [speedMps: number, fromDeg: number];

/** One hour in words of the trade. */
export interface Sky {
  /** At 10 m over the model's ground. */
  readonly wind: Said;
  readonly gustMps: number;
  /** Winds aloft by altitude above the sea, rising; between them by components, above the last the last. */
  readonly aloft: readonly (readonly [altitudeM: number, ...wind: Said])[];
  readonly temperatureC: number;
  readonly dewPointC: number;
  /** Temperature and humidity aloft by altitude, rising; above the last 6.5 K/km colder. */
  readonly air: readonly (readonly [altitudeM: number, temperatureC: number, humidityPct: number])[];
  readonly shortwaveWm2: number;
  readonly mixedLayerM: number;
  readonly capeJkg: number;
  readonly rainMm: number;
  readonly rainChancePct: number;
  readonly weatherCode: number;
  readonly visibilityM: number;
  readonly seaLevelHpa: number;
  readonly pressureStep: readonly [aHpa: number, bHpa: number];
}

/** A quiet, dry, clear hour: what a day's own words change. */
export const QUIET: Sky = {
  wind: [1.5, 250], gustMps: 2.6, aloft: [[1500, 2.5, 250], [3000, 4, 260]], temperatureC: 12, dewPointC: 4, air: [[2500, 3, 40], [4000, -7, 30]],
  shortwaveWm2: 40, mixedLayerM: 150, capeJkg: 0, rainMm: 0, rainChancePct: 0, weatherCode: 0, visibilityM: 40_000, seaLevelHpa: 1019, pressureStep: [1019, 1019],
};

const PRESSURES_HPA = [1000, 975, 950, 925, 900, 850, 800, 750, 700, 600, 500];

/** Linear between rows by their first number; the first and last row hold outside. */
function between(rows: readonly (readonly number[])[], at: number, column: number): number {
  const above = rows.findIndex((row) => row[0]! >= at);
  if (above === 0) return rows[0]![column]!;
  const low = rows[above === -1 ? rows.length - 1 : above - 1]!;
  const high = above === -1 ? low : rows[above]!;
  return high === low ? low[column]! : low[column]! + ((at - low[0]!) / (high[0]! - low[0]!)) * (high[column]! - low[column]!);
}

/** The hour of conditions that this sky makes over a model's ground. */
export function conditions(atMs: number, groundM: number, sky: Sky): Conditions {
  const vectors = [[groundM + 10, ...sky.wind] as const, ...sky.aloft].map(([altitudeM, speedMps, fromDeg]) => {
    const { uMps, vMps } = vectorOf(speedMps, fromDeg);
    return [altitudeM, uMps, vMps];
  });
  const humidityPct = 100 * Math.min(1, 10 ** ((7.5 * sky.dewPointC) / (237.3 + sky.dewPointC) - (7.5 * sky.temperatureC) / (237.3 + sky.temperatureC)));
  const air = [[groundM, sky.temperatureC, humidityPct], ...sky.air];
  const highest = air.at(-1)!;
  const excessHpa = sky.seaLevelHpa - 1013.25;
  const levels = PRESSURES_HPA.map((pressureHpa): Level => {
    const altitudeM = geometricM(pressureAltitudeM(100 * pressureHpa)) + 8.3 * excessHpa;
    const [uMps, vMps] = [between(vectors, altitudeM, 1), between(vectors, altitudeM, 2)];
    return {
      pressureHpa, altitudeM, speedMps: Math.hypot(uMps, vMps), fromDeg: fromDegOf(uMps, vMps),
      temperatureC: between(air, altitudeM, 1) - 0.0065 * Math.max(0, altitudeM - highest[0]!), relativeHumidityPct: between(air, altitudeM, 2),
    };
  });
  return {
    validAt: isoUtc(atMs), gridElevationM: groundM, wind10m: { speedMps: sky.wind[0], fromDeg: sky.wind[1] }, gustMps: sky.gustMps, levels,
    temperature2mC: sky.temperatureC, dewPoint2mC: sky.dewPointC, surfacePressureHpa: standardAir(geopotentialM(groundM)).pressurePa / 100 + excessHpa,
    seaLevelPressureHpa: sky.seaLevelHpa, referencePressureHpa: { a: sky.pressureStep[0], b: sky.pressureStep[1] }, mixedLayerM: sky.mixedLayerM,
    shortwaveWm2: sky.shortwaveWm2, capeJkg: sky.capeJkg, precipitationMm: sky.rainMm, precipitationProbabilityPct: sky.rainChancePct,
    weatherCode: sky.weatherCode, visibilityM: sky.visibilityM, lowCloudPct: 0,
  };
}

/** Humidity that gives a dew point, for skies that are told by it. */
export function dewOf(temperatureC: number, humidityPct: number): number {
  return dewPointC(temperatureC, humidityPct);
}

const COMMON = {
  name: 'Invented place', timeZone: 'Europe/Vienna', daylight: { rule: 'sunrise-sunset', beforeMin: 0, afterMin: 0 },
  sectors: [], localWind: [], pressureStep: null, localRules: null, notes: [], declinationDeg: 0,
} as const;

/** A ridge launch 160 m above the model's ground, its landing on it. */
export const ALPINE: LaunchSite = {
  ...COMMON, kind: 'launch', id: 'alpine', lonDeg: 11.4, latDeg: 47.2, elevationM: 1340, facingDeg: 250, slopeDeg: 24,
  hill: { form: 'ridge', heightM: 180, halfLengthM: 320 }, summitElevationM: null,
  landing: { lonDeg: 11.39, latDeg: 47.2, elevationM: 1185, roughnessM: 0.03 }, trackDeg: 250, distanceM: 430,
};
export const ALPINE_GROUND_M = 1180;

export const STRIP: StripSite = {
  ...COMMON, kind: 'strip', id: 'strip', lonDeg: 14.03, latDeg: 48.2, elevationM: 598, headingDeg: 250, usableBothWays: true,
  lineLengthM: 900, roughnessM: 0.03, lineTensionRatio: 0.8, releaseAngleDeg: 70, lineClearM: null,
};
export const STRIP_GROUND_M = 590;

export const DATE = '2027-05-14';
export const ISSUED_AT = '2027-05-14T03:00:00Z';
const RUN_AT = '2027-05-14T00:00:00Z';

function config(name: string): unknown {
  return JSON.parse(readFileSync(path.join(root, 'config', name), 'utf8'));
}

function valueOf<T, E>(result: Result<T, E>): T {
  if (result.ok) return result.value;
  throw new Error(`config that does not parse: ${JSON.stringify(result.error)}`);
}

export const sheets = valueOf(parseSheets(config('sheets.json'), { basis: 'required' }));
export const wings = valueOf(parseWingClasses(config('wing-classes.json')));
export const thresholds = valueOf(parseThresholds(config('thresholds.json')));

export function sheetOf(id: string): LimitSheet {
  const sheet = sheets.find((each) => each.id === id);
  if (sheet === undefined) throw new Error(`config has no sheet "${id}"`);
  return sheet;
}

/** Instant of an hour of the day on the site's clocks, in May two hours ahead of UTC. */
export function instantAt(localHour: number): number {
  return epochOf(`${DATE}T00:00:00Z`) + (localHour - 2) * HOUR_MS;
}

/** A day's sky by local hour, from the evening before to the evening after. */
export type Day = (localHour: number) => Sky;

export function forecastOf(given: { readonly groundM: number; readonly day: Day } & Partial<Forecast>): Forecast {
  const { groundM, day, ...changes } = given;
  const hours = hourlyInstants(instantAt(-4), instantAt(27)).map((atMs) => conditions(atMs, groundM, day((atMs - instantAt(0)) / HOUR_MS)));
  return {
    source: 'told', kind: 'deterministic', runAt: RUN_AT, fetchedAt: ISSUED_AT, declares: CONDITION_FIELDS.filter((field) => hours[0]![field] !== undefined),
    members: [hours], gridDistanceM: 900, demo: false, trustedWithoutRunTime: false, ...changes,
  };
}

export function inputOf(given: {
  readonly site: Site; readonly sheet: string | LimitSheet; readonly forecasts: readonly Forecast[]; readonly wing?: WingClass;
} & Partial<Pick<DayInput, 'issuedAt' | 'localDate' | 'thresholds' | 'storedGroundM' | 'answers' | 'demo'>>): DayInput {
  const { site, sheet, forecasts, wing = 'EN B', ...changes } = given;
  return {
    site, wing: wings[wing], wingKey: wing, wingName: wing, sheet: typeof sheet === 'string' ? sheetOf(sheet) : sheet, localDate: DATE,
    issuedAt: ISSUED_AT, validUntil: `${DATE}T22:00:00Z`, demo: false, thresholds, storedGroundM: {},
    answers: forecasts.map((value) => ({ source: value.source, kind: value.kind, outcome: { ok: true, value } })), ...changes,
  };
}

/** The judged day of one source that tells this day over the site. */
export function judged(given: { readonly site: Site; readonly groundM: number; readonly sheet: string; readonly day: Day; readonly wing?: WingClass }): JudgedDay {
  const { groundM, day, ...rest } = given;
  return judgeDay(inputOf({ ...rest, forecasts: [forecastOf({ groundM, day })] }));
}

export function hourAt(day: JudgedDay, localHour: number): JudgedHour {
  const hour = day.hours.find(({ validAt }) => epochOf(validAt) === instantAt(localHour));
  if (hour === undefined) throw new Error(`${localHour} h is not among the judged hours`);
  return hour;
}

/** Every margin of an hour with that status. */
export function marginsThatAre(hour: JudgedHour, ...statuses: readonly string[]): MarginId[] {
  return hour.margins.filter(({ status }) => statuses.includes(status)).map(({ id }) => id);
}
