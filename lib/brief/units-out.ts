/**
 * Numbers as a reader sees them: SI inside, the reader's units outside, rounded so that no figure flatters. Spares and
 * limits that must not be passed are rounded down, limits that must be reached are rounded up, the rest to nearest.
 */
import { MPS_PER_KMH, MPS_PER_KT, MPS_PER_MPH, M_PER_FT } from '../units.ts';

export const SPEED_UNITS = ['m/s', 'km/h', 'kt', 'mph'] as const;
export const HEIGHT_UNITS = ['m', 'ft'] as const;

export type SpeedUnit = (typeof SPEED_UNITS)[number];
export type HeightUnit = (typeof HEIGHT_UNITS)[number];

export interface DisplayUnits {
  readonly speed: SpeedUnit;
  readonly height: HeightUnit;
}

export const SI_UNITS: DisplayUnits = { speed: 'm/s', height: 'm' };

export type Rounding = 'nearest' | 'down' | 'up';

/** A number in a unit; `asIs` keeps distances out of the reader's height unit and climbs out of the unit of wind. */
export interface Quantity {
  readonly value: number;
  readonly unit: string;
  readonly asIs?: boolean;
}

/** Keeps 0.3 from becoming 0.2 because a sum left it at 0.29999999999999998. */
const SUM_NOISE = 1e-9;

/** U+2212: a hyphen before a number can be taken for a dash, and lines break at it. */
const MINUS = '\u2212';

function perUnit(unit: SpeedUnit | HeightUnit): number {
  switch (unit) {
    case 'm/s': return 1;
    case 'km/h': return MPS_PER_KMH;
    case 'kt': return MPS_PER_KT;
    case 'mph': return MPS_PER_MPH;
    case 'm': return 1;
    case 'ft': return M_PER_FT;
  }
}

/** The same quantity in the reader's units; a share becomes a percentage. */
export function inUnits(quantity: Quantity, units: DisplayUnits): Quantity {
  const { value, unit } = quantity;
  if (quantity.asIs === true) return quantity;
  if (unit === 'm/s') return { value: value / perUnit(units.speed), unit: units.speed };
  if (unit === 'm') return { value: value / perUnit(units.height), unit: units.height };
  if (unit === 'share') return { value: value * 100, unit: '%' };
  return quantity;
}

/** Decimals that a person can use, by unit and size. */
function decimalsFor({ value, unit }: Quantity): number {
  if (unit === 'm/s' || unit === 'mm' || unit === 'hPa') return 1;
  const isFine = unit === 'km/h' || unit === 'kt' || unit === 'mph' || unit === '°';
  return isFine && Math.abs(value) < 10 ? 1 : 0;
}

function rounded(value: number, decimals: number, rounding: Rounding): number {
  const scaled = value * 10 ** decimals;
  const whole =
    rounding === 'down' ? Math.floor(scaled + SUM_NOISE)
    : rounding === 'up' ? Math.ceil(scaled - SUM_NOISE)
    : Math.round(scaled);
  return whole === 0 ? 0 : whole / 10 ** decimals;
}

function digits(value: number, decimals: number): string {
  return value < 0 ? `${MINUS}${(-value).toFixed(decimals)}` : value.toFixed(decimals);
}

/** A bare number, without its unit; "not known" stands for anything that is no finite number. */
export function figure(value: number, options: { readonly decimals: number; readonly rounding?: Rounding }): string {
  if (!Number.isFinite(value)) return 'not known';
  return digits(rounded(value, options.decimals, options.rounding ?? 'nearest'), options.decimals);
}

function withUnit(text: string, unit: string): string {
  if (unit === '°') return `${text}°`;
  return unit === '' ? text : `${text} ${unit}`;
}

/** A quantity in the reader's units: `1.2 m/s`, `25°`, `980 ft`. */
export function quantityText(quantity: Quantity, units: DisplayUnits, rounding: Rounding = 'nearest'): string {
  if (!Number.isFinite(quantity.value)) return 'not known';
  const out = inUnits(quantity, units);
  return withUnit(figure(out.value, { decimals: decimalsFor(out), rounding }), out.unit);
}

/** The number alone, as the columns of airspeed write it. */
export function quantityFigure(quantity: Quantity, units: DisplayUnits, rounding: Rounding = 'nearest'): string {
  const out = inUnits(quantity, units);
  return figure(out.value, { decimals: decimalsFor(out), rounding });
}

/**
 * Two numbers of one unit side by side, with as many decimals (three at most) as it takes to tell them apart when they
 * differ: "gusts reach 5.37; the sheet allows 5.36", never 5.4 against 5.4.
 */
export function pairTexts(
  pair: { readonly first: Quantity; readonly second: Quantity }, units: DisplayUnits,
): { readonly first: string; readonly second: string; readonly unit: string } {
  const first = inUnits(pair.first, units);
  const second = inUnits(pair.second, units);
  let decimals = Math.max(decimalsFor(first), decimalsFor(second));
  const text = (quantity: Quantity) => figure(quantity.value, { decimals });
  while (text(first) === text(second) && first.value !== second.value && decimals < 3) decimals += 1;
  const tidy = (quantity: Quantity) => text(quantity).replace(/\.0+$/, '');
  return { first: withUnit(text(first), first.unit), second: tidy(second), unit: second.unit };
}
