/**
 * A Locationforecast 2.0 answer as hours of conditions. Its hourly part only: where steps are six hours long, an hour has
 * no value and none is made up. Heights: `coordinates[2]` is the service's own kilometre-scale ground when no altitude is
 * asked for; winds outside the north come from a coarser model whose ground it does not tell, so config/ asks it in the
 * north only. Pure.
 */
import { weatherCodeOf } from './symbols.ts';
import type { PlaceForecast } from '../one-by-one.ts';
import { directionOf, fieldOf, fieldsOf, instantOf, largerOf, listOf, numberOf } from '../values.ts';
import type { ConditionField, Conditions } from '../../../lib/forecast/conditions.ts';
import type { SourceFailure } from '../../../lib/forecast/failure.ts';
import { timesFault } from '../../../lib/forecast/instants.ts';
import { failure, success, type Result } from '../../../lib/result.ts';
import { HOUR_MS, isoUtc } from '../../../lib/time.ts';

const gust = { name: 'wind_speed_of_gust', unit: 'm/s' };

const instantFields = {
  temperature2mC: { name: 'air_temperature', unit: 'celsius' },
  dewPoint2mC: { name: 'dew_point_temperature', unit: 'celsius' },
  seaLevelPressureHpa: { name: 'air_pressure_at_sea_level', unit: 'hPa' },
  lowCloudPct: { name: 'cloud_area_fraction_low', unit: '%' },
} as const satisfies Partial<Record<ConditionField, { name: string; unit: string }>>;

const periodFields = {
  precipitationMm: { name: 'precipitation_amount', unit: 'mm' },
  precipitationProbabilityPct: { name: 'probability_of_precipitation', unit: '%' },
} as const satisfies Partial<Record<ConditionField, { name: string; unit: string }>>;

const expectedUnits: readonly { readonly name: string; readonly unit: string }[] = [
  { name: 'wind_speed', unit: 'm/s' }, { name: 'wind_from_direction', unit: 'degrees' }, gust, ...Object.values(instantFields), ...Object.values(periodFields),
];

interface Entry {
  readonly atMs: number;
  readonly details: unknown;
  /** `next_1_hours`, undefined where the step is longer. */
  readonly hour: unknown;
}

/** `nowMs`: when it came. */
export function toMetForecast(json: unknown, nowMs: number): Result<PlaceForecast, SourceFailure> {
  const properties = fieldOf(json, 'properties');
  const series = listOf(fieldOf(properties, 'timeseries'));
  const coordinates = listOf(fieldOf(fieldOf(json, 'geometry'), 'coordinates'));
  if (series === null) return failure({ kind: 'shape', path: '$.properties.timeseries' });
  if (coordinates === null) return failure({ kind: 'shape', path: '$.geometry.coordinates' });
  const meta = fieldOf(properties, 'meta');
  const misfit = unitFault(fieldOf(meta, 'units'), series);
  if (misfit !== null) return failure(misfit);
  const groundM = numberOf(coordinates[2]);
  if (groundM === null) return failure({ kind: 'ground', why: 'missing', byM: null });
  const entries = hourlyPart(series.map(entryOf));
  const why = timesFault(entries.map((entry) => entry.atMs));
  if (why !== null) return failure({ kind: 'times', why });
  const byStamp = new Map(entries.map((entry) => [entry.atMs, entry]));
  const updatedMs = instantOf(fieldOf(meta, 'updated_at'));
  return success({
    runAt: updatedMs === null ? null : isoUtc(updatedMs),
    latDeg: numberOf(coordinates[1]),
    lonDeg: numberOf(coordinates[0]),
    hours: entries.map((entry, i) => {
      // The series begins with the hour under way; of the one before it, which is over, nothing is told and nothing is to come.
      const isUnderWay = i === 0 && entry.atMs <= nowMs && entry.atMs > nowMs - HOUR_MS;
      return hourOf(entry, { before: isUnderWay ? entry : byStamp.get(entry.atMs - HOUR_MS), after: byStamp.get(entry.atMs + HOUR_MS) }, groundM);
    }),
  });
}

function entryOf(json: unknown): Entry {
  const data = fieldOf(json, 'data');
  const time = fieldOf(json, 'time');
  const isUtc = typeof time === 'string' && time.endsWith('Z');
  return { atMs: (isUtc ? instantOf(time) : null) ?? NaN, details: fieldOf(fieldOf(data, 'instant'), 'details'), hour: fieldOf(data, 'next_1_hours') };
}

/** Up to the last entry whose next hour is told, and the instant that ends it. */
function hourlyPart(entries: readonly Entry[]): readonly Entry[] {
  const last = entries.findLastIndex((entry) => entry.hour !== undefined);
  const end = entries[last + 1];
  const isEnd = last >= 0 && end !== undefined && end.atMs === (entries[last]?.atMs ?? NaN) + HOUR_MS;
  return entries.slice(0, isEnd ? last + 2 : last + 1);
}

/** A unit that is not the one we know; none at all, for values that are there, is not the one we know either. */
function unitFault(units: unknown, series: readonly unknown[]): SourceFailure | null {
  const first = fieldOf(series[0], 'data');
  const there = { ...fieldsOf(fieldOf(fieldOf(first, 'instant'), 'details')), ...fieldsOf(fieldOf(fieldOf(first, 'next_1_hours'), 'details')) };
  for (const { name, unit } of expectedUnits) {
    const given = fieldOf(units, name);
    if (given !== unit && (given !== undefined || Object.hasOwn(there, name))) {
      return { kind: 'unit', field: name, expected: unit, found: given === undefined ? null : 'other' };
    }
  }
  return null;
}

/**
 * Amounts and symbols are of the hour after their entry, so an instant is touched by those of the entry before it too.
 * A gust is the largest up to its entry, so an instant is touched by that of the entry after it.
 */
function hourOf(entry: Entry, { before, after }: { readonly before: Entry | undefined; readonly after: Entry | undefined }, gridElevationM: number): Conditions {
  const details = (name: string) => numberOf(fieldOf(entry.details, name));
  const period = (of: Entry | undefined, name: string) => numberOf(fieldOf(fieldOf(of?.hour, 'details'), name));
  const code = (of: Entry | undefined) => weatherCodeOf(fieldOf(fieldOf(of?.hour, 'summary'), 'symbol_code'));
  return {
    validAt: isoUtc(entry.atMs),
    gridElevationM,
    wind10m: { speedMps: details('wind_speed'), fromDeg: directionOf(fieldOf(entry.details, 'wind_from_direction')) },
    gustMps: largerOf(details(gust.name), numberOf(fieldOf(after?.details, gust.name))),
    temperature2mC: details(instantFields.temperature2mC.name),
    dewPoint2mC: details(instantFields.dewPoint2mC.name),
    seaLevelPressureHpa: details(instantFields.seaLevelPressureHpa.name),
    lowCloudPct: details(instantFields.lowCloudPct.name),
    precipitationMm: largerOf(period(before, periodFields.precipitationMm.name), period(entry, periodFields.precipitationMm.name)),
    precipitationProbabilityPct: largerOf(period(before, periodFields.precipitationProbabilityPct.name), period(entry, periodFields.precipitationProbabilityPct.name)),
    weatherCode: largerOf(code(before), code(entry)),
  };
}
