/** The fields of the form as the JSON that programs send, and back: one schema reads both. Field names: `g0.name`, `s1.capacity`. */

export type Typed = Readonly<Record<string, readonly string[]>>;

type Json = Readonly<Record<string, unknown>>;

const GROUP_NUMBERS = ['minHours', 'wishHours', 'earliestHour', 'latestHour', 'instructors'] as const;

export function typedOf(form: URLSearchParams): Typed {
  const typed: Record<string, string[]> = Object.create(null) as Record<string, string[]>;
  for (const [name, value] of form) (typed[name] ??= []).push(value.trim());
  return typed;
}

/** Rows without a name, a site or both ends are left out; what is no number stays text, and the schema says so. */
export function jsonOf(typed: Typed): unknown {
  const one = (name: string): string => typed[name]?.[0] ?? '';
  const numbers = (row: string, names: readonly string[]): Json => Object.fromEntries(names.flatMap((name) => {
    const text = one(`${row}${name}`);
    return text === '' ? [] : [[name, number(text)]];
  }));
  const rows = (letter: string): string[] => Array.from({ length: 60 }, (_, index) => `${letter}${index}.`);
  const lose = one('lose');
  const lost = [...(typed['lost'] ?? []), ...(lose === '' ? [] : [lose])].filter((text) => text !== one('give'));
  return {
    ...(one('date') === '' ? {} : { date: one('date') }),
    ...numbers('', ['instructors', 'movingMin']),
    moves: rows('m').filter((row) => one(`${row}from`) !== '' && one(`${row}to`) !== '').map((row) => ({ from: one(`${row}from`), to: one(`${row}to`), ...numbers(row, ['minutes']) })),
    sites: rows('s').filter((row) => one(`${row}id`) !== '').map((row) => ({ id: one(`${row}id`), ...numbers(row, ['capacity', 'openFromHour', 'openToHour']) })),
    groups: rows('g').filter((row) => one(`${row}name`) !== '').map((row) => ({
      name: one(`${row}name`), sheet: one(`${row}sheet`), wing: one(`${row}wing`), ...numbers(row, GROUP_NUMBERS), sites: typed[`${row}sites`] ?? [], close: one(`${row}close`) !== '',
    })),
    lost: [...new Set(lost)].map((text) => { const [site = '', hour = ''] = text.split(' '); return { site, hour: number(hour) }; }),
  };
}

function number(text: string): number | string {
  return /^-?\d+(\.\d+)?$/.test(text) ? Number(text) : text;
}

/** A list in a JSON that may be anything. */
export function listIn(json: unknown, name: string): Json[] {
  const value = fieldIn(json, name);
  return Array.isArray(value) ? value.filter((item): item is Json => typeof item === 'object' && item !== null) : [];
}

export function fieldIn(json: unknown, name: string): unknown {
  return typeof json === 'object' && json !== null && Object.hasOwn(json, name) ? (json as Json)[name] : undefined;
}

export function textIn(json: unknown, name: string): string {
  const value = fieldIn(json, name);
  return typeof value === 'string' || typeof value === 'number' ? String(value) : '';
}
