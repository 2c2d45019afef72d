// MET Norway Locationforecast 2.0 `complete` as its documentation describes it: identifying User-Agent, at most four
// decimals, Expires and Last-Modified, 304, hourly steps and then six-hourly ones, gusts in the north only.
import { weatherAt, type Spot } from './weather.ts';
import type { Terrain } from './open-meteo.ts';

const HOUR_MS = 3_600_000;

interface Period {
  summary?: { symbol_code: string };
  details?: Record<string, number>;
}

export interface MetEntry {
  time: string;
  data: { instant: { details: Record<string, number | string | null> }; next_1_hours?: Period; next_6_hours?: Period; next_12_hours?: Period };
}

export interface MetAnswer {
  type: 'Feature';
  geometry: { type: 'Point'; coordinates: number[] };
  properties: { meta: { updated_at?: string; units: Record<string, string> }; timeseries: MetEntry[] };
}

const iso = (ms: number) => new Date(ms).toISOString().replace('.000Z', 'Z');
const round = (value: number) => Number(value.toFixed(1));

/** Where the finer products of the service reach: gusts and probabilities exist. */
function isNorth(latDeg: number, lonDeg: number): boolean {
  return latDeg >= 54 && lonDeg >= -5 && lonDeg <= 42;
}

/** Updated on the last full hour less ten minutes. */
export function updatedAtMs(nowMs: number): number {
  return Math.floor(nowMs / HOUR_MS) * HOUR_MS - 600_000;
}

export function metNorway(place: { latDeg: number; lonDeg: number }, nowMs: number, terrain: Terrain): MetAnswer {
  const spot = { ...place, groundM: terrain.groundAtM(place.latDeg, place.lonDeg) };
  const north = isNorth(place.latDeg, place.lonDeg);
  const first = Math.floor(nowMs / HOUR_MS) * HOUR_MS;
  const hourly = Array.from({ length: 55 }, (_, i) => first + i * HOUR_MS);
  const sixHourly = Array.from({ length: 26 }, (_, i) => first + (55 + 6 * i) * HOUR_MS);
  const units: Record<string, string> = {
    air_pressure_at_sea_level: 'hPa', air_temperature: 'celsius', cloud_area_fraction: '%', cloud_area_fraction_low: '%', dew_point_temperature: 'celsius',
    precipitation_amount: 'mm', relative_humidity: '%', wind_from_direction: 'degrees', wind_speed: 'm/s',
    ...(north ? { wind_speed_of_gust: 'm/s', probability_of_precipitation: '%' } : {}),
  };
  return {
    type: 'Feature',
    geometry: { type: 'Point', coordinates: [place.lonDeg, place.latDeg, spot.groundM] },
    properties: {
      meta: { updated_at: iso(updatedAtMs(nowMs)), units },
      timeseries: [...hourly.map((at) => entry(spot, at, north, 1)), ...sixHourly.map((at, i) => entry(spot, at, north, i < 25 ? 6 : 0))],
    },
  };
}

function entry(spot: Spot, at: number, north: boolean, stepHours: 0 | 1 | 6): MetEntry {
  const weather = weatherAt(spot, at);
  const details = {
    air_pressure_at_sea_level: round(weather.seaLevelPressureHpa), air_temperature: round(weather.temperatureC), cloud_area_fraction: 20,
    cloud_area_fraction_low: weather.lowCloudPct, dew_point_temperature: round(weather.dewPointC), relative_humidity: round(weather.humidityPct),
    wind_from_direction: round(weather.fromDeg), wind_speed: round(weather.windMps), ...(north ? { wind_speed_of_gust: round(weather.gustMps) } : {}),
  };
  const amount = { precipitation_amount: 0, ...(north ? { probability_of_precipitation: weather.precipitationProbabilityPct } : {}) };
  return {
    time: iso(at),
    data: {
      instant: { details },
      ...(stepHours > 0 ? { next_12_hours: { summary: { symbol_code: 'fair_day' }, details: {} }, next_6_hours: { summary: { symbol_code: 'fair_day' }, details: amount } } : {}),
      ...(stepHours === 1 ? { next_1_hours: { summary: { symbol_code: 'fair_day' }, details: amount } } : {}),
    },
  };
}
