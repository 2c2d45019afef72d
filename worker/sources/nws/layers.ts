/**
 * Layers of the US National Weather Service's grid: a unit code and intervals of time with a value each, equal neighbours
 * merged. An interval counts from its beginning up to, not including, its end. A layer that cannot be read whole (a
 * duration we do not know, intervals over one another) is not read at all. Pure.
 */
import { fieldOf, instantOf, listOf, numberOf } from '../values.ts';
import type { SourceFailure } from '../../../lib/forecast/failure.ts';
import { failure, success, type Result } from '../../../lib/result.ts';
import { HOUR_MS } from '../../../lib/time.ts';
import { MPS_PER_KMH, MPS_PER_KT } from '../../../lib/units.ts';

export interface Interval {
  readonly fromMs: number;
  readonly toMs: number;
  readonly value: unknown;
}

const duration = /^P(?:(\d{1,3})D)?(?:T(?:(\d{1,3})H)?)?$/;

function intervalOf(json: unknown): Interval | null {
  const validTime = fieldOf(json, 'validTime');
  const [start, length = '', ...rest] = typeof validTime === 'string' ? validTime.split('/') : [];
  const fromMs = instantOf(start);
  const [, days, hours] = duration.exec(length) ?? [];
  const lengthHours = Number(days ?? 0) * 24 + Number(hours ?? 0);
  if (fromMs === null || rest.length > 0 || lengthHours === 0 || fromMs % HOUR_MS !== 0) return null;
  return { fromMs, toMs: fromMs + lengthHours * HOUR_MS, value: fieldOf(json, 'value') };
}

/** The intervals of a layer in their order; null when there are none to rely on. */
export function intervalsOf(layer: unknown): readonly Interval[] | null {
  const values = listOf(fieldOf(layer, 'values'));
  if (values === null || values.length === 0) return null;
  const intervals = values.map(intervalOf);
  const isWhole = intervals.every((interval, i) => interval !== null && interval.fromMs >= (intervals[i - 1]?.toMs ?? -Infinity));
  return isWhole ? intervals.filter((interval) => interval !== null) : null;
}

/** The value of the interval that holds an instant, undefined when none does. */
export function valueAt(intervals: readonly Interval[] | null, atMs: number): unknown {
  return intervals?.find((interval) => atMs >= interval.fromMs && atMs < interval.toMs)?.value;
}

export type Quantity = 'speed' | 'angle' | 'temperature' | 'share' | 'length';

/** To m/s, degrees, °C, %, m. Codes of WMO and of the older payloads; any other is a fault. */
const factors: Readonly<Record<Quantity, Readonly<Record<string, number>>>> = {
  speed: { 'km_h-1': MPS_PER_KMH, 'm_s-1': 1, kt: MPS_PER_KT },
  angle: { 'degree_(angle)': 1 },
  temperature: { degC: 1 },
  share: { percent: 1 },
  length: { m: 1 },
};

const EXPECTED: Readonly<Record<Quantity, string>> = { speed: 'wmoUnit:km_h-1', angle: 'wmoUnit:degree_(angle)', temperature: 'wmoUnit:degC', share: 'wmoUnit:percent', length: 'wmoUnit:m' };

function factorOf(unit: unknown, quantity: Quantity): number | null {
  const code = typeof unit === 'string' ? unit.replace(/^(?:wmoUnit|unit):/, '') : '';
  return Object.hasOwn(factors[quantity], code) ? (factors[quantity][code] ?? null) : null;
}

export type Numbers = (atMs: number) => number | null;

const NOTHING: Numbers = () => null;

/** A layer as numbers by instant. Without values it gives nothing, whatever its unit; with them, the unit must be known. */
export function numbersOf(properties: unknown, name: string, quantity: Quantity): Result<Numbers, SourceFailure> {
  const layer = fieldOf(properties, name);
  const intervals = intervalsOf(layer);
  if (intervals === null) return success(NOTHING);
  const unit = fieldOf(layer, 'uom');
  const factor = factorOf(unit, quantity);
  if (factor === null) return failure({ kind: 'unit', field: name, expected: EXPECTED[quantity], found: unit === undefined ? null : 'other' });
  return success((atMs) => {
    const value = numberOf(valueAt(intervals, atMs));
    return value === null ? null : value * factor;
  });
}

/** A single measure such as the elevation, in metres. */
export function lengthM(json: unknown): number | null {
  const factor = factorOf(fieldOf(json, 'unitCode'), 'length');
  const value = numberOf(fieldOf(json, 'value'));
  return factor === null || value === null ? null : value * factor;
}
