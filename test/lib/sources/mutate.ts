// Seeded ways to spoil a clean Open-Meteo answer: types, nulls, shifts in time, units, sentinels, duplicates, truncations,
// lost and added keys, broken bytes. None of them turns a number into another plausible number, or moves a part of a day
// by whole hours: that nobody can see in one answer, and other sources are asked for it. (A whole day moved is seen.)
import type { Location } from '../../support/forecast-server/open-meteo.ts';

/** Uniform in [0, 1), from a seed (Steele and others, SplitMix; 32 bits suffice here). */
export function seeded(seed: number): () => number {
  let state = seed >>> 0;
  return () => {
    state = (state + 0x9e3779b9) >>> 0;
    let mixed = state ^ (state >>> 16);
    mixed = Math.imul(mixed, 0x21f0aaad);
    mixed ^= mixed >>> 15;
    mixed = Math.imul(mixed, 0x735a2d97);
    return ((mixed ^ (mixed >>> 15)) >>> 0) / 4_294_967_296;
  };
}

export interface Spoilt {
  location: Location;
  run: string | null;
  /** Whether its times were moved by whole hours, or its first or last hours taken away: not both. */
  edge?: 'moved' | 'cut';
  /** Two stamps have changed places: taking one of them away would only leave a value at a wrong hour. */
  disordered?: true;
  /** A column has lost or gained a value at one end: cutting the rows to one length again would only move it by an hour. */
  uneven?: true;
}

type Mutation = (spoilt: Spoilt, random: () => number) => void;

const pick = <T>(list: readonly T[], random: () => number): T => list[Math.floor(random() * list.length)]!;
const columnNames = ({ location }: Spoilt) => Object.keys(location.hourly ?? {});
const valueNames = (spoilt: Spoilt) => columnNames(spoilt).filter((name) => name !== 'time');
const anyColumn = (spoilt: Spoilt, random: () => number) => spoilt.location.hourly[pick(columnNames(spoilt), random)] ?? [];
const valueColumn = (spoilt: Spoilt, random: () => number) => spoilt.location.hourly[pick(valueNames(spoilt), random)] ?? [];

const strange: readonly unknown[] = [null, '', '15.2', '0', 'NaN', true, false, [], [5], {}, { value: 3 }, Infinity, -Infinity, '<script>', '1e3'];
const sentinels = [-999, -9999, 9999, 32767, 65535, 9.96921e36, -32768];
const otherUnits = ['km/h', 'mp/h', 'kn', '°F', 'inch', 'ft', 'K', '', 'undefined', 'm/s ', 'iso8601', 'Pa', '<b>', '%%', null, 5, {}];

/** One kind of fault each, by name so that a failure can be told. */
export const mutations: Readonly<Record<string, Mutation>> = {
  'a cell of another type': (spoilt, random) => {
    const column = anyColumn(spoilt, random) as unknown[];
    if (column.length > 0) column[Math.floor(random() * column.length)] = pick(strange, random);
  },
  'a null cell': (spoilt, random) => {
    const column = valueColumn(spoilt, random);
    if (column.length > 0) column[Math.floor(random() * column.length)] = null;
  },
  'a run of nulls': (spoilt, random) => {
    const column = valueColumn(spoilt, random);
    const from = Math.floor(random() * column.length);
    column.fill(null, from, from + 1 + Math.floor(random() * 6));
  },
  'a null column': (spoilt, random) => void valueColumn(spoilt, random).fill(null),
  'a null hour': (spoilt, random) => {
    const row = Math.floor(random() * (spoilt.location.hourly?.['time']?.length ?? 0));
    for (const name of valueNames(spoilt)) spoilt.location.hourly[name]!.fill(null, row, row + 1);
  },
  'a sentinel cell': (spoilt, random) => {
    const column = valueColumn(spoilt, random);
    if (column.length > 0) column[Math.floor(random() * column.length)] = pick(sentinels, random);
  },
  'a sentinel column': (spoilt, random) => void valueColumn(spoilt, random).fill(pick(sentinels, random)),
  'texts for numbers': (spoilt, random) => {
    const name = pick(valueNames(spoilt), random);
    const { hourly } = spoilt.location;
    if (name !== undefined && hourly[name] !== undefined) hourly[name] = hourly[name].map((value) => (value === null ? null : String(value)));
  },
  'an impossible column': (spoilt, random) => {
    const name = pick(valueNames(spoilt), random);
    const beyond = name?.includes('direction') === true ? 361 + random() * 400 : -1e6 - random();
    if (name !== undefined) spoilt.location.hourly[name]?.fill(beyond);
  },
  'another unit': (spoilt, random) => {
    const units = spoilt.location.hourly_units as Record<string, unknown> | undefined;
    if (units !== undefined) units[pick(Object.keys(units), random)] = pick(otherUnits, random);
  },
  'a unit lost': (spoilt, random) => {
    const units = spoilt.location.hourly_units;
    if (units !== undefined) delete units[pick(Object.keys(units), random)];
  },
  'a column lost': (spoilt, random) => {
    if (spoilt.location.hourly) delete spoilt.location.hourly[pick(columnNames(spoilt), random)];
  },
  'a column with its unit lost': (spoilt, random) => {
    const name = pick(columnNames(spoilt), random);
    if (spoilt.location.hourly) delete spoilt.location.hourly[name];
    if (spoilt.location.hourly_units) delete spoilt.location.hourly_units[name];
  },
  'a column under another name': (spoilt, random) => {
    const { hourly } = spoilt.location;
    const name = pick(valueNames(spoilt), random);
    if (name === undefined || hourly[name] === undefined) return;
    hourly[pick([`${name}_member01`, `${name}_best_match`, name.toUpperCase(), `${name} `, '__proto__x', 'constructor'], random)] = hourly[name];
    delete hourly[name];
  },
  'a short column': (spoilt, random) => {
    spoilt.uneven = true;
    anyColumn(spoilt, random).splice(Math.floor(random() * 3) === 0 ? 0 : -1 - Math.floor(random() * 3), 1 + Math.floor(random() * 3));
  },
  'a long column': (spoilt, random) => {
    spoilt.uneven = true;
    anyColumn(spoilt, random).push(pick([0, 1, null], random));
  },
  'rows cut off': (spoilt, random) => {
    if (spoilt.edge === 'moved' || spoilt.disordered || spoilt.uneven) return;
    spoilt.edge = 'cut';
    const rows = spoilt.location.hourly?.['time']?.length ?? 0;
    const keep = Math.floor(random() * rows);
    const atStart = random() < 0.5;
    for (const name of columnNames(spoilt)) spoilt.location.hourly[name] = atStart ? spoilt.location.hourly[name]!.slice(0, keep) : spoilt.location.hourly[name]!.slice(-keep);
  },
  'a row lost': (spoilt, random) => {
    const rows = spoilt.location.hourly?.['time']?.length ?? 0;
    const row = Math.floor(random() * rows);
    const isEdge = row === 0 || row === rows - 1;
    if ((isEdge && spoilt.edge === 'moved') || spoilt.disordered) return;
    if (isEdge) spoilt.edge = 'cut';
    for (const name of columnNames(spoilt)) spoilt.location.hourly[name]!.splice(row, 1);
  },
  'a row twice': (spoilt, random) => {
    const row = Math.floor(random() * (spoilt.location.hourly?.['time']?.length ?? 0));
    for (const name of columnNames(spoilt)) spoilt.location.hourly[name]!.splice(row, 0, spoilt.location.hourly[name]![row] ?? null);
  },
  'times in disorder': (spoilt, random) => {
    const time = spoilt.location.hourly?.['time'];
    if (time === undefined || time.length < 2) return;
    const row = Math.floor(random() * (time.length - 1));
    spoilt.disordered = true;
    [time[row], time[row + 1]] = [time[row + 1]!, time[row]!];
  },
  'times shifted': (spoilt, random) => {
    const byS = pick(spoilt.edge === undefined ? [1, -1, 3600, -3600, 7200, 1800, -5400, 86_400, -86_400, 172_800, 60] : [1, -1, 1800, -5400, 60], random);
    if (byS % 3600 === 0) spoilt.edge = 'moved';
    const { hourly } = spoilt.location;
    if (hourly?.['time'] !== undefined) hourly['time'] = hourly['time'].map((stamp) => Number(stamp) + byS);
  },
  'times in another scale': (spoilt, random) => {
    const factor = pick([1000, 1 / 60, 1 / 3600, -1, 0], random);
    const { hourly } = spoilt.location;
    if (hourly?.['time'] !== undefined) hourly['time'] = hourly['time'].map((stamp) => Number(stamp) * factor);
  },
  'times as texts': (spoilt, random) => {
    const { hourly, hourly_units } = spoilt.location;
    if (hourly?.['time'] === undefined) return;
    hourly['time'] = hourly['time'].map((stamp) => (Number.isFinite(Number(stamp)) ? new Date(Math.min(8e15, Number(stamp) * 1000)).toISOString().slice(0, 16) : stamp));
    if (random() < 0.5 && hourly_units) hourly_units['time'] = 'iso8601';
  },
  'another zone': (spoilt, random) => {
    spoilt.location.utc_offset_seconds = pick([3600, -18_000, 20_700, 1], random);
  },
  'another place': (spoilt, random) => {
    const { location } = spoilt;
    const change = pick<(at: Location) => void>([
      (at) => ([at.latitude, at.longitude] = [at.longitude, at.latitude]),
      (at) => (at.latitude += 0.3 + random() * 20),
      (at) => (at.longitude -= 1 + random() * 100),
      (at) => ((at as { latitude: unknown }).latitude = pick(strange, random)),
      (at) => delete (at as Partial<Location>).longitude,
    ], random);
    change(location);
  },
  'another ground': (spoilt, random) => {
    const { location } = spoilt;
    const change = pick<() => void>([
      () => (location.elevation = (location.elevation ?? 0) + (201 + random() * 3000) * (random() < 0.5 ? -1 : 1)),
      () => ((location as { elevation: unknown }).elevation = pick(strange, random)),
      () => ((location as { elevation: unknown }).elevation = pick(sentinels, random)),
      () => delete location.elevation,
    ], random);
    change();
  },
  'another number of the location': (spoilt, random) => {
    (spoilt.location as { location_id: unknown }).location_id = pick([1, '0', null, 7], random);
  },
  'a section that is something else': (spoilt, random) => {
    (spoilt.location as unknown as Record<string, unknown>)[pick(['hourly', 'hourly_units'], random)] = pick([null, [], {}, 'x', 5, true], random);
  },
  'another run': (spoilt, random) => {
    spoilt.run = pick([null, '', 'yesterday', '2027-12-19T12:00:00Z', '2027-12-21T15:00:00Z', '2027-12-20T24:61:00Z'], random);
  },
  'an error': (spoilt) => {
    Object.assign(spoilt.location, { error: true, reason: 'something' });
  },
};

/** Bytes broken after the JSON was written. Digits, signs and points are left alone. */
export function breakText(text: string, random: () => number): string {
  const at = Math.floor(random() * text.length);
  switch (Math.floor(random() * 7)) {
    case 0: return text.slice(0, at);
    case 1: return `${text.slice(0, at)}Unexpected error while streaming data: timeout`;
    case 2: return text.slice(0, at) + pick(['}', ']', ',', ':', '"', 'x', '\u0000', '[', '{', 'null'], random) + text.slice(at);
    case 3: return text + text;
    case 4: return text.replace('"hourly":{', '"hourly":{"wind_gusts_10m":[],');
    case 5: return text.replace('"hourly":{', `"hourly":{"weather_code":[${'0,'.repeat(13)}0],`);
    default: return `[${text},${text}]`;
  }
}

/** Whether there is still something left to spoil: sections that are objects, columns that are lists. */
export function isWhole({ location }: Spoilt): boolean {
  const isObject = (value: unknown) => typeof value === 'object' && value !== null && !Array.isArray(value);
  if (!isObject(location.hourly) || !isObject(location.hourly_units)) return false;
  const columns = Object.values(location.hourly);
  return columns.length > 1 && Object.hasOwn(location.hourly, 'time') && columns.every((column) => Array.isArray(column) && column.length > 1);
}
