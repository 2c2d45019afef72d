import type { MarginId, MarginUnit, Verdict } from './ids.ts';

/**
 * The only door to a comparison with a limit. Nothing else in lib/ or worker/ may compare a number with one: a check
 * in test/lib/rules says so. What comes in has to be a finite number to come out as anything but unknown.
 */

/** What a margin measured: a number, NaN for unknown, or no solution at all (the wing cannot hold the track, does not arrive). */
export type Demand = number | 'no solution';

export interface Compared {
  readonly spare: number | null;
  readonly status: Verdict;
}

/** Below this a spare is a rounding error of its own sum, not a difference. */
const ROUNDING = 1e-9;

/** Default close bands by unit; see closeBand. */
const DEFAULT_BAND: Readonly<Record<MarginUnit, number>> = {
  'm/s': 0.5, m: 30, '°': 5, min: 15, 'J/kg': 100, mm: 0.1, '%': 10, hPa: 0.5, share: 0.05, h: 0,
};

const OWN_BAND: Readonly<Partial<Record<MarginId, number>>> = { cloudBase: 100, slope: 1, visibility: 500 };

/** The default band of a margin before the limit caps it: the unit in which spares of different margins compare. */
export function defaultBand(id: MarginId, unit: MarginUnit): number {
  return OWN_BAND[id] ?? DEFAULT_BAND[unit];
}

/**
 * Spare below which a margin is close: what the sheet says, else the smaller of the default for its unit and a quarter
 * of the limit's size, so that a limit of zero has no band. Daylight keeps its quarter of an hour: its limit is an edge.
 */
export function closeBand(id: MarginId, comparison: { readonly unit: MarginUnit; readonly limit: number; readonly sheetBand: number | undefined }): number {
  if (comparison.sheetBand !== undefined) return comparison.sheetBand;
  const byUnit = defaultBand(id, comparison.unit);
  return id === 'daylight' ? byUnit : Math.min(byUnit, Math.abs(comparison.limit) / 4);
}

/**
 * Compares a demand with a limit. `atMost`: spare = limit - demand; `atLeast`: spare = demand - limit. Exactly on the
 * limit is not beyond it; exactly at the band is not close.
 */
export function margin(comparison: { readonly demand: Demand; readonly limit: number; readonly sense: 'atMost' | 'atLeast'; readonly band: number }): Compared {
  const { demand, limit, sense, band } = comparison;
  if (!Number.isFinite(limit) || !Number.isFinite(band)) return { spare: null, status: 'unknown' };
  if (demand === 'no solution') return { spare: null, status: 'beyond' };
  if (!Number.isFinite(demand)) return { spare: null, status: 'unknown' };
  const exact = sense === 'atMost' ? limit - demand : demand - limit;
  const spare = Math.abs(exact) < ROUNDING ? 0 : exact;
  if (spare < 0) return { spare, status: 'beyond' };
  return { spare, status: spare < band - ROUNDING ? 'close' : 'within' };
}
