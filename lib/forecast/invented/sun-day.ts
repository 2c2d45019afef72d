/**
 * The heating of one local day at one place: shortwave by the sun's height, the heat it gives to the air, and the mixed
 * layer that the heat has dug by then.
 *
 * Clear sky: Haurwitz (1945), J. Meteor. 2, 154: 1098 sin(h) exp(-0.057 / sin h) W/m2. Cloud: Kasten & Czeplak (1980),
 * Solar Energy 24, 177: 1 - 0.75 n^3.4. Both from memory; the demo needs their shape. Growth by encroachment with a fifth
 * for entrainment: zi = sqrt(2 x 1.2 x Q / gamma), Q the kinematic heat since sunrise, gamma the stability of the morning.
 */
import { legalDay, sunAt } from '../../sky/sun.ts';
import { radians } from '../../angles.ts';
import { HOUR_MS, localDay } from '../../time.ts';

export interface Place {
  readonly latDeg: number;
  readonly lonDeg: number;
  readonly timeZone: string;
}

export interface SunDay {
  readonly date: string;
  readonly fromMs: number;
  readonly toMs: number;
  readonly riseMs: number;
  readonly setMs: number;
  /** Clear-sky shortwave of each half hour of the day from `fromMs`, W/m2. */
  readonly clearWm2: readonly number[];
}

const STEP_MS = HOUR_MS / 2;
/** Of the shortwave that warms the air, as in the flight model: common practice, no source. */
const SHORTWAVE_TO_HEAT = 0.35;
/** Density times heat capacity of air over low ground, J/(m3 K). */
const HEAT_PER_M3K = 1.15 * 1005;
const ENTRAINMENT = 1.2;
/** What is left of a mixed layer without heating, m. */
const NIGHT_LAYER_M = 80;

export function sunDay(place: Place, date: string): SunDay {
  const { fromMs, toMs } = localDay(date, place.timeZone);
  const legal = legalDay({ ...place, daylight: { rule: 'sunrise-sunset', beforeMin: 0, afterMin: 0 } }, date);
  // The demo's places have a sunrise every day; a place that has none gets a day from six to six.
  const [riseMs, setMs] = 'none' in legal ? [fromMs + 6 * HOUR_MS, fromMs + 18 * HOUR_MS] : [legal.fromMs, legal.toMs];
  const steps = Math.ceil((toMs - fromMs) / STEP_MS);
  const clearWm2 = Array.from({ length: steps + 1 }, (_, step) => {
    const sine = Math.sin(radians(sunAt(fromMs + step * STEP_MS, place).altitudeDeg));
    return sine <= 0.01 ? 0 : 1098 * sine * Math.exp(-0.057 / sine);
  });
  return { date, fromMs, toMs, riseMs, setMs, clearWm2 };
}

/** Clear-sky shortwave at an instant, between the half hours; nil outside the day. */
export function clearSkyWm2(day: SunDay, atMs: number): number {
  const step = (atMs - day.fromMs) / STEP_MS;
  const before = Math.floor(step);
  const [a, b] = [day.clearWm2[before] ?? 0, day.clearWm2[before + 1] ?? 0];
  return a + (b - a) * (step - before);
}

/** Share of the clear sky's shortwave that cloud lets through. */
export function throughCloud(cloudShare: number): number {
  return 1 - 0.75 * cloudShare ** 3.4;
}

export function heatWm2(shortwaveWm2: number): number {
  return SHORTWAVE_TO_HEAT * shortwaveWm2;
}

/** Kinematic heat given to the air from sunrise to an instant, K m. */
export function heatSinceRise(day: SunDay, atMs: number, shortwaveAt: (atMs: number) => number): number {
  let sum = 0;
  for (let from = day.riseMs; from < atMs; from += STEP_MS) {
    const spanMs = Math.min(STEP_MS, atMs - from);
    sum += (heatWm2(shortwaveAt(from + spanMs / 2)) / HEAT_PER_M3K) * (spanMs / 1000);
  }
  return sum;
}

/** Depth of the mixed layer, m above the ground. It falls back to the night's as the heating ends. */
export function mixedLayerM(heat: { readonly sinceRiseKm: number; readonly nowWm2: number }, air: { readonly lapseKpkm: number; readonly topM: number }): number {
  const gammaKpm = Math.max(0.5, 9.76 - air.lapseKpkm) / 1000;
  const dugM = Math.sqrt((2 * ENTRAINMENT * heat.sinceRiseKm) / gammaKpm);
  const isHeld = Math.min(1, Math.max(0, heat.nowWm2) / 30);
  return NIGHT_LAYER_M + isHeld * Math.max(0, Math.min(air.topM, dugM) - NIGHT_LAYER_M);
}
