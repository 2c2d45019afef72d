// The US National Weather Service's grid as its documentation describes it: /points leads to /gridpoints; layers are
// intervals with ISO durations, equal neighbours merged, units by code, layers without data have no unit.
import { weatherAt, type Spot, type Weather } from './weather.ts';
import type { Terrain } from './open-meteo.ts';

const HOUR_MS = 3_600_000;
const STEP_DEG = 0.025;

export interface NwsLayer {
  uom?: string;
  values: { validTime: string; value: unknown }[];
}

export interface NwsAnswer {
  geometry: unknown;
  properties: { updateTime?: string; validTimes: string; elevation?: { unitCode: string; value: number | null }; [layer: string]: unknown };
}

const iso = (ms: number) => new Date(ms).toISOString().replace('.000Z', '+00:00');

export function isUnitedStates(latDeg: number, lonDeg: number): boolean {
  return latDeg >= 24 && latDeg <= 50 && lonDeg >= -125 && lonDeg <= -66;
}

export function pointAnswer(latDeg: number, lonDeg: number, origin: string): object {
  const [x, y] = [Math.round((lonDeg + 180) / STEP_DEG), Math.round((latDeg + 90) / STEP_DEG)];
  return { properties: { gridId: 'TST', gridX: x, gridY: y, forecastGridData: `${origin}/gridpoints/TST/${x},${y}` } };
}

function updateTimeMs(nowMs: number): number {
  return Math.floor(nowMs / HOUR_MS) * HOUR_MS - 2_700_000;
}

export function gridAnswer(x: number, y: number, nowMs: number, terrain: Terrain): NwsAnswer {
  const [lonDeg, latDeg] = [x * STEP_DEG - 180, y * STEP_DEG - 90];
  const spot = { latDeg, lonDeg, groundM: terrain.groundAtM(latDeg, lonDeg) };
  const first = Math.floor(nowMs / HOUR_MS) * HOUR_MS - 6 * HOUR_MS;
  const half = STEP_DEG / 2;
  const corner = (east: number, north: number) => [lonDeg + east * half, latDeg + north * half];
  const layer = (uom: string, read: (weather: Weather) => number): NwsLayer => ({ uom, values: merged(spot, first, read) });
  return {
    geometry: { type: 'Polygon', coordinates: [[corner(-1, 1), corner(-1, -1), corner(1, -1), corner(1, 1), corner(-1, 1)]] },
    properties: {
      updateTime: iso(updateTimeMs(nowMs)), validTimes: `${iso(first)}/P7DT14H`, elevation: { unitCode: 'wmoUnit:m', value: spot.groundM },
      temperature: layer('wmoUnit:degC', (w) => Number(w.temperatureC.toFixed(2))),
      dewpoint: layer('wmoUnit:degC', (w) => Number(w.dewPointC.toFixed(1))),
      windDirection: layer('wmoUnit:degree_(angle)', (w) => Math.round(w.fromDeg / 10) * 10),
      windSpeed: layer('wmoUnit:km_h-1', (w) => Math.round((w.windMps * 3.6) / 1.852) * 1.852),
      windGust: layer('wmoUnit:km_h-1', (w) => Math.round((w.gustMps * 3.6) / 1.852) * 1.852),
      skyCover: layer('wmoUnit:percent', (w) => w.lowCloudPct),
      probabilityOfPrecipitation: layer('wmoUnit:percent', (w) => w.precipitationProbabilityPct),
      visibility: layer('wmoUnit:m', (w) => Math.round(w.visibilityM)),
      mixingHeight: layer('wmoUnit:m', (w) => Math.round(w.mixedLayerM)),
      weather: { values: [{ validTime: `${iso(first)}/P7DT14H`, value: [{ coverage: null, weather: null, intensity: null, visibility: { unitCode: 'wmoUnit:km', value: null }, attributes: [] }] }] },
      pressure: { values: [] },
      probabilityOfThunder: { values: [] },
    },
  };
}

/** Hourly values for three days with equal neighbours merged into one interval. */
function merged(spot: Spot, first: number, read: (weather: Weather) => number): NwsLayer['values'] {
  const values: { from: number; hours: number; value: number }[] = [];
  for (let i = 0; i < 72; i += 1) {
    const at = first + i * HOUR_MS;
    const value = read(weatherAt(spot, at));
    const last = values.at(-1);
    if (last !== undefined && last.value === value) last.hours += 1;
    else values.push({ from: at, hours: 1, value });
  }
  return values.map(({ from, hours, value }) => ({ validTime: `${iso(from)}/${duration(hours)}`, value }));
}

function duration(hours: number): string {
  const days = Math.floor(hours / 24);
  const rest = hours % 24;
  return `P${days > 0 ? `${days}D` : ''}${rest > 0 ? `T${rest}H` : ''}`;
}
