/**
 * The invented weather of one site and one local day: heat, air and wind as functions of height and time. One set of
 * causes moves everything: the sun warms the ground, the heat digs a mixed layer and drives the breeze, the front turns
 * and freshens the wind, and gusts follow from the turbulence of both.
 */
import { normalDeg, turnDeg } from '../../angles.ts';
import { fromDegOf, vectorOf } from '../../air/wind.ts';
import { GRAVITY_MPS2, kelvin } from '../../units.ts';
import { HOUR_MS } from '../../time.ts';
import { dateSwing, ease } from './date-share.ts';
import { passage, type Passage } from './front.ts';
import type { InventedRegion, InventedSite } from './scenario.ts';
import { clearSkyWm2, heatSinceRise, heatWm2, mixedLayerM, throughCloud, type SunDay } from './sun-day.ts';

/** How one source or member sees it. */
export interface Twist {
  readonly groundM: number;
  readonly breezeFactor: number;
  readonly windFactor: number;
  readonly turnDeg: number;
}

export interface Vector {
  readonly uMps: number;
  readonly vMps: number;
}

/** What the sun and the front make of the day, whatever the source: shared by all members with the same front. */
export interface Heating {
  readonly day: SunDay;
  /** What sets this date apart from others, each from -1 to 1. */
  readonly swing: { readonly speed: number; readonly direction: number; readonly temperature: number; readonly pressure: number };
  readonly front: Passage;
  readonly fogUntilMs: number;
  readonly cloudShare: (atMs: number) => number;
  readonly shortwaveWm2: (atMs: number) => number;
  readonly heatSinceRiseKm: (atMs: number) => number;
  readonly mixedLayerM: (atMs: number) => number;
  /** 0 at night to about 1 on a clear midsummer noon, an hour and a half behind the sun. */
  readonly breezeShare: (atMs: number) => number;
}

const BREEZE_LAG_MS = 1.5 * HOUR_MS;
/** Heat flux at which the breeze has its full strength, W/m2. */
const FULL_HEAT_WM2 = 300;

export function heating(region: InventedRegion, site: InventedSite, day: SunDay, frontShiftHours: number): Heating {
  const front = passage(region, day, frontShiftHours);
  const fogUntilMs = site.fogHours === 0 ? -Infinity : day.riseMs + site.fogHours * HOUR_MS;
  const cloudShare = (atMs: number): number => {
    const fair = region.cloudShare + 0.3 * front.ahead(atMs);
    return Math.min(1, fair + (0.95 - fair) * front.behind(atMs));
  };
  const shortwaveWm2 = (atMs: number): number => (atMs < fogUntilMs ? 0.5 : 1) * throughCloud(cloudShare(atMs)) * clearSkyWm2(day, atMs);
  const kept = new Map<number, number>();
  const heatSinceRiseKm = (atMs: number): number => {
    let sum = kept.get(atMs);
    if (sum === undefined) kept.set(atMs, (sum = heatSinceRise(day, atMs, shortwaveWm2)));
    return sum;
  };
  const swingOf = (purpose: string): number => dateSwing(day.date, `${region.id} ${purpose}`);
  return {
    day, swing: { speed: swingOf('speed'), direction: swingOf('direction'), temperature: swingOf('temperature'), pressure: swingOf('pressure') },
    front, fogUntilMs, cloudShare, shortwaveWm2, heatSinceRiseKm,
    mixedLayerM: (atMs) => mixedLayerM({ sinceRiseKm: heatSinceRiseKm(atMs), nowWm2: heatWm2(shortwaveWm2(atMs)) }, { lapseKpkm: region.lapseKpkm, topM: region.mixedLayerTopM }),
    breezeShare: (atMs) => (heatWm2(shortwaveWm2(atMs - BREEZE_LAG_MS)) / FULL_HEAT_WM2) ** 0.75 * (1 - front.behind(atMs)),
  };
}

/** Height above the ground at which the free air blows at its full speed. */
const FREE_AIR_M = 2500;
/** The breeze fills the valley to here, strongest at the first of the two heights. */
const BREEZE_CORE_M = 200;
const BREEZE_TOP_M = 700;
/** Backing of the free air's wind on its way down to the ground. */
const BACKING_DEG = 12;

/** The wind at a height above the ground. */
export function windAt(parts: { readonly region: InventedRegion; readonly site: InventedSite; readonly heat: Heating; readonly twist: Twist }, aglM: number, atMs: number): Vector {
  const { heat, twist } = parts;
  const free = freeWind(parts, atMs);
  const behind = heat.front.behind(atMs);
  // The exponent of the power law: slack mixing at night, brisk behind the front.
  const exponent = 0.3 - 0.06 * Math.min(1, heat.breezeShare(atMs)) - 0.13 * behind;
  const share = aglM >= FREE_AIR_M ? 1 + (0.1 * (aglM - FREE_AIR_M)) / 1000 : (Math.max(2, aglM) / FREE_AIR_M) ** exponent;
  const synoptic = vectorOf(free.speedMps * share, free.fromDeg - BACKING_DEG * (1 - Math.min(1, share)) + twist.turnDeg);
  const breeze = breezeAt(parts, aglM, atMs);
  return { uMps: synoptic.uMps + breeze.uMps, vMps: synoptic.vMps + breeze.vMps };
}

function freeWind({ region, heat, twist }: { readonly region: InventedRegion; readonly heat: Heating; readonly twist: Twist }, atMs: number) {
  const { front } = region;
  const speedMps = region.freeWind.speedMps * (1 + 0.1 * heat.swing.speed) * (1 + 0.35 * heat.front.ahead(atMs));
  const fromDeg = region.freeWind.fromDeg + 6 * heat.swing.direction;
  const behind = heat.front.behind(atMs);
  const windFactor = twist.windFactor;
  if (front === null || behind === 0) return { speedMps: windFactor * speedMps, fromDeg };
  return {
    speedMps: windFactor * (speedMps + (front.wind.speedMps - speedMps) * behind),
    fromDeg: normalDeg(fromDeg + turnDeg(fromDeg, front.wind.fromDeg) * Math.min(1, 3 * behind)),
  };
}

function breezeAt({ site, heat, twist }: { readonly site: InventedSite; readonly heat: Heating; readonly twist: Twist }, aglM: number, atMs: number): Vector {
  const share = heat.breezeShare(atMs);
  const drainage = site.drainageMps * (1 - ease(share, 0, 0.5)) * (1 - heat.front.behind(atMs));
  const at10M = twist.breezeFactor * (site.breeze.speedMps * share - drainage);
  const rising = (Math.min(Math.max(aglM, 2), BREEZE_CORE_M) / 10) ** 0.12;
  const shape = rising * (1 - ease(aglM, BREEZE_CORE_M, BREEZE_TOP_M));
  return vectorOf(at10M * shape, site.breeze.fromDeg + twist.turnDeg);
}

/** Standard deviations by which the highest gust of an hour exceeds the mean. */
const GUST_SIGMAS = 1.7;

/**
 * Gust at an instant: mean and 1.7 standard deviations of the turbulence, sigma² = (2.3 u*)² + 0.35 w*² (Panofsky et al.
 * 1977, Boundary-Layer Meteorol. 11, from memory), u* by the log law at 10 m.
 */
export function gustAt(parts: { readonly region: InventedRegion; readonly site: InventedSite; readonly heat: Heating; readonly twist: Twist }, atMs: number): number {
  const { uMps, vMps } = windAt(parts, 10, atMs);
  const meanMps = Math.hypot(uMps, vMps);
  const frictionMps = (0.4 * meanMps) / Math.log(10 / parts.site.roughnessM);
  const thermalMps = thermalAt(parts.heat, atMs);
  return meanMps + GUST_SIGMAS * Math.sqrt((2.3 * frictionMps) ** 2 + 0.35 * thermalMps ** 2);
}

/** Deardorff's w* of the invented mixed layer, m/s, for air of 15 °C. */
function thermalAt(heat: Heating, atMs: number): number {
  const fluxKmps = heatWm2(heat.shortwaveWm2(atMs)) / (1.15 * 1005);
  return Math.cbrt((GRAVITY_MPS2 / kelvin(15)) * heat.mixedLayerM(atMs) * fluxKmps);
}

/** Largest gust of the two hours that touch the instant: at it and in the middle of both. */
export function hourlyGustMps(parts: Parameters<typeof gustAt>[0], atMs: number): number {
  return Math.max(...[-0.5, 0, 0.5].map((hours) => gustAt(parts, atMs + hours * HOUR_MS)));
}

export function speedAndDirection({ uMps, vMps }: Vector): { readonly speedMps: number; readonly fromDeg: number | null } {
  const speedMps = Math.round(Math.hypot(uMps, vMps) * 100) / 100;
  const fromDeg = fromDegOf(uMps, vMps);
  return { speedMps, fromDeg: fromDeg === null ? null : Math.round(fromDeg) % 360 };
}
