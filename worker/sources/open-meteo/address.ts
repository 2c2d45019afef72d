/** Addresses of the Open-Meteo interface: one model a request, heights of the grid, m/s, unix time, GMT. */
import { isoUtc } from '../../../lib/time.ts';

export interface Point {
  readonly latDeg: number;
  readonly lonDeg: number;
}

export interface ForecastQuestion {
  readonly origin: string;
  readonly path: '/v1/forecast' | '/v1/ensemble';
  readonly model: string;
  readonly points: readonly Point[];
  readonly variables: Iterable<string>;
  readonly fromMs: number;
  readonly toMs: number;
}

/** Degrees with four decimals, 11 m. */
function degrees(deg: number): string {
  return String(Number(deg.toFixed(4)));
}

/** YYYY-MM-DDThh:mm without a Z: the service refuses more. */
function hour(ms: number): string {
  return isoUtc(ms).slice(0, 16);
}

/**
 * `elevation=nan` switches height correction off, so that two-metre values belong to the model's ground and the answer's
 * `elevation` is that ground; with it `cell_selection=nearest` keeps two neighbouring sites on their own grid points.
 */
export function forecastUrl(question: ForecastQuestion): string {
  const { points } = question;
  const query: readonly [string, string][] = [
    ['latitude', points.map((point) => degrees(point.latDeg)).join(',')],
    ['longitude', points.map((point) => degrees(point.lonDeg)).join(',')],
    ['elevation', points.map(() => 'nan').join(',')],
    ['models', question.model],
    ['cell_selection', 'nearest'],
    ['wind_speed_unit', 'ms'],
    ['timeformat', 'unixtime'],
    ['timezone', 'GMT'],
    ['start_hour', hour(question.fromMs)],
    ['end_hour', hour(question.toMs)],
    ['hourly', [...question.variables].join(',')],
  ];
  return `${question.origin}${question.path}?${query.map(([name, value]) => `${name}=${value}`).join('&')}`;
}

export function metaUrl(origin: string, runTimeName: string): string {
  return `${origin}/data/${runTimeName}/static/meta.json`;
}

/** With a key the service is asked at its host for customers; an address that an operator has set stays as it is. */
export function originWithKey(origin: string, key: string | null): string {
  const free = /^https:\/\/((?:ensemble-)?api\.open-meteo\.com)$/.exec(origin);
  return key !== null && free !== null ? `https://customer-${free[1]}` : origin;
}
