import { CALM_BELOW_MPS } from './wind.ts';

/**
 * Typical gust factors, highest 3 s gust over the 10 minute mean: WMO/TD-1555 (Harper, Kepert & Ginger 2010) table 1.1.
 * Derived for strong wind. Only ever shown beside a missing gust, never counted.
 */
export const TYPICAL_GUST_FACTOR = { inLand: 1.66, offLand: 1.52, offSea: 1.38, atSea: 1.23 } as const;

/** Free-air gust over the free-air mean where the forecast gust is smaller: starting value, common practice, no source. */
export const FREE_AIR_GUST_FACTOR = 1.3;

/** How far a gust may lie below the mean it belongs to before the pair contradicts itself, m/s. */
const PAIR_TOLERANCE_MPS = 1;

/**
 * The gust of a mean and gust pair: the mean where the gust lies up to 1 m/s below it (some models mix an instant and
 * an hour's maximum), NaN where it lies further below or either is missing.
 */
export function consistentGustMps(meanMps: number, gustMps: number): number {
  const shortfall = meanMps - gustMps;
  if (shortfall > PAIR_TOLERANCE_MPS) return NaN;
  return Math.max(meanMps, gustMps);
}

export function isCalm(speedMps: number): boolean {
  return speedMps < CALM_BELOW_MPS;
}
