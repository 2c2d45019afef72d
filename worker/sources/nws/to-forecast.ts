/**
 * A gridpoints answer as hours of conditions, for the hours of its wind. Precipitation is not taken: amounts of six hours
 * say nothing about one. `mixingHeight` is read as height above ground; were it above sea level, thermals would only be
 * judged stronger than they are. Pure.
 */
import { intervalsOf, lengthM, numbersOf, valueAt, type Numbers, type Quantity } from './layers.ts';
import { weatherCodeOf } from './weather.ts';
import type { PlaceForecast } from '../one-by-one.ts';
import { directionOf, fieldOf, instantOf, largerOf, listOf, numberOf } from '../values.ts';
import type { Conditions } from '../../../lib/forecast/conditions.ts';
import type { SourceFailure } from '../../../lib/forecast/failure.ts';
import { failure, success, type Result } from '../../../lib/result.ts';
import { HOUR_MS, hourlyInstants, isoUtc } from '../../../lib/time.ts';

const LONGEST_MS = 96 * HOUR_MS;

const layers = {
  windSpeed: 'speed', windDirection: 'angle', windGust: 'speed', temperature: 'temperature', dewpoint: 'temperature', mixingHeight: 'length',
  probabilityOfPrecipitation: 'share', visibility: 'length',
} as const satisfies Record<string, Quantity>;

type Layer = keyof typeof layers;

export function toNwsForecast(json: unknown): Result<PlaceForecast, SourceFailure> {
  const properties = fieldOf(json, 'properties');
  const wind = intervalsOf(fieldOf(properties, 'windSpeed'));
  if (wind === null) return failure({ kind: 'shape', path: '$.properties.windSpeed' });
  const read = new Map<Layer, Numbers>();
  for (const name of Object.keys(layers) as Layer[]) {
    const numbers = numbersOf(properties, name, layers[name]);
    if (!numbers.ok) return numbers;
    read.set(name, numbers.value);
  }
  const groundM = lengthM(fieldOf(properties, 'elevation'));
  if (groundM === null) return failure({ kind: 'ground', why: 'missing', byM: null });
  const weather = intervalsOf(fieldOf(properties, 'weather'));
  const at = (name: Layer, atMs: number) => read.get(name)?.(atMs) ?? null;
  const code = (atMs: number) => weatherCodeOf(valueAt(weather, atMs));
  const both = (value: (atMs: number) => number | null, atMs: number) => largerOf(value(atMs - HOUR_MS), value(atMs));
  const firstMs = wind[0]?.fromMs ?? NaN;
  const lastMs = Math.min((wind.at(-1)?.toMs ?? NaN) - HOUR_MS, firstMs + LONGEST_MS);
  const updatedMs = instantOf(fieldOf(properties, 'updateTime'));
  const middle = middleOf(fieldOf(json, 'geometry'));
  return success({
    runAt: updatedMs === null ? null : isoUtc(updatedMs),
    ...middle,
    // An interval is the hour after its beginning: an instant is touched by that one and the one before.
    hours: hourlyInstants(firstMs, lastMs).map((atMs): Conditions => ({
      validAt: isoUtc(atMs),
      gridElevationM: groundM,
      wind10m: { speedMps: at('windSpeed', atMs), fromDeg: directionOf(at('windDirection', atMs)) },
      gustMps: both((ms) => at('windGust', ms), atMs),
      temperature2mC: at('temperature', atMs),
      dewPoint2mC: at('dewpoint', atMs),
      mixedLayerM: at('mixingHeight', atMs),
      precipitationProbabilityPct: both((ms) => at('probabilityOfPrecipitation', ms), atMs),
      weatherCode: both(code, atMs),
      visibilityM: at('visibility', atMs),
    })),
  });
}

/** The mean of the corners of a polygon, whose first corner comes again as its last. */
function middleOf(geometry: unknown): { readonly latDeg: number | null; readonly lonDeg: number | null } {
  const ring = listOf(listOf(fieldOf(geometry, 'coordinates'))?.[0])?.slice(0, -1) ?? [];
  const mean = (index: number): number | null => {
    const values = ring.map((corner) => numberOf(listOf(corner)?.[index]));
    const sum = values.reduce((total: number | null, value) => (total === null || value === null ? null : total + value), 0);
    return sum === null || values.length < 3 ? null : sum / values.length;
  };
  return { lonDeg: mean(0), latDeg: mean(1) };
}
