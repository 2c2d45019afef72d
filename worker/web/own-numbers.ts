/** The numbers of a "what if": which can be given, how they are read, and what they do to an hour of a forecast. */
import { fromDegOf, vectorOf } from '../../lib/air/wind.ts';
import { inUnits, type DisplayUnits } from '../../lib/brief/units-out.ts';
import type { Conditions, Wind } from '../../lib/forecast/conditions.ts';

export const OWN_NUMBERS = ['wind', 'from', 'gust', 'rain', 'cape', 'trim', 'glide', 'sink'] as const;

export type OwnNumber = (typeof OWN_NUMBERS)[number];

/** SI; left out where the forecast's, or the chosen wing's, stands. */
export type OwnNumbers = Readonly<Partial<Record<OwnNumber, number>>>;

export interface NumberField {
  readonly label: string;
  readonly unit: string;
  readonly isSpeed: boolean;
}

export function numberField(name: OwnNumber, units: DisplayUnits): NumberField {
  switch (name) {
    case 'wind': return { label: 'Mean wind at 10 m', unit: units.speed, isSpeed: true };
    case 'from': return { label: 'Wind from', unit: '°', isSpeed: false };
    case 'gust': return { label: 'Gust', unit: units.speed, isSpeed: true };
    case 'rain': return { label: 'Rain', unit: 'mm', isSpeed: false };
    case 'cape': return { label: 'CAPE', unit: 'J/kg', isSpeed: false };
    case 'trim': return { label: 'Trim airspeed', unit: units.speed, isSpeed: true };
    case 'glide': return { label: 'Glide at trim', unit: '', isSpeed: false };
    case 'sink': return { label: 'Least sink', unit: 'm/s', isSpeed: false };
  }
}

/** Reads what was typed, a comma as a point; every text that is no number is named. */
export function readOwnNumbers(
  typed: Readonly<Partial<Record<string, string>>>, units: DisplayUnits,
): { readonly numbers: OwnNumbers; readonly problems: readonly string[] } {
  const numbers: Partial<Record<OwnNumber, number>> = {};
  const problems: string[] = [];
  const perUnit = inUnits({ value: 1, unit: 'm/s' }, units).value;
  for (const name of OWN_NUMBERS) {
    const text = (typed[name] ?? '').trim().replace(',', '.');
    if (text === '') continue;
    const field = numberField(name, units);
    if (/^[+-]?\d{1,6}(\.\d{1,6})?$/.test(text)) numbers[name] = Number(text) / (field.isSpeed ? perUnit : 1);
    else problems.push(`${field.label}: a number${field.unit === '' ? '' : ` in ${field.unit}`} is needed.`);
  }
  const figures = [numbers.trim, numbers.glide, numbers.sink].filter((value) => value !== undefined).length;
  if (figures > 0 && figures < 3) problems.push('A wing of your own needs all three: trim airspeed, glide at trim and least sink.');
  return { numbers, problems };
}

interface Change {
  readonly uMps: number;
  readonly vMps: number;
}

function moved<W extends Wind>(wind: W, change: Change): W {
  if (wind.speedMps === null || (wind.fromDeg === null && wind.speedMps > 0)) return wind;
  const own = wind.fromDeg === null ? { uMps: 0, vMps: 0 } : vectorOf(wind.speedMps, wind.fromDeg);
  const uMps = own.uMps + change.uMps;
  const vMps = own.vMps + change.vMps;
  return { ...wind, speedMps: Math.hypot(uMps, vMps), fromDeg: fromDegOf(uMps, vMps) };
}

/** What the own wind adds to the forecast's at 10 m, as a vector; nothing where either is not known. */
function changeOf(given: Wind | null | undefined, own: Wind): Change {
  if (given === null || given === undefined || given.speedMps === null || own.speedMps === null) return { uMps: 0, vMps: 0 };
  const before = given.fromDeg === null ? { uMps: 0, vMps: 0 } : vectorOf(given.speedMps, given.fromDeg);
  const after = own.fromDeg === null ? { uMps: 0, vMps: 0 } : vectorOf(own.speedMps, own.fromDeg);
  return { uMps: after.uMps - before.uMps, vMps: after.vMps - before.vMps };
}

/** The hour with the own numbers in it. Winds higher up change by the same vector: a wind that differs below differs above. */
export function withOwnNumbers(hour: Conditions, own: OwnNumbers): Conditions {
  const wind10m: Wind = { speedMps: own.wind ?? hour.wind10m?.speedMps ?? null, fromDeg: own.from ?? hour.wind10m?.fromDeg ?? null };
  const isWindOwn = own.wind !== undefined || own.from !== undefined;
  const change = changeOf(hour.wind10m, wind10m);
  return {
    ...hour,
    ...(isWindOwn ? { wind10m } : {}),
    ...(isWindOwn && hour.nearGround ? { nearGround: hour.nearGround.map((wind) => moved(wind, change)) } : {}),
    ...(isWindOwn && hour.levels ? { levels: hour.levels.map((level) => moved(level, change)) } : {}),
    ...(own.gust === undefined ? {} : { gustMps: own.gust }),
    ...(own.rain === undefined ? {} : { precipitationMm: own.rain }),
    ...(own.cape === undefined ? {} : { capeJkg: own.cape }),
  };
}
