// One value of an hour taken away or spoilt, chosen by a number: what a broken feed does.
import fc from 'fast-check';
import type { Conditions } from '../../../lib/forecast/conditions.ts';

type Json = Record<string, unknown>;

/** Where the values of an hour stand that a source measures, and so may lack: not its stamp and not the heights of its rows. */
function places(hour: Conditions): (readonly (string | number)[])[] {
  const found: (readonly (string | number)[])[] = [];
  const look = (value: unknown, path: readonly (string | number)[]): void => {
    if (typeof value === 'number') found.push(path);
    else if (Array.isArray(value)) value.forEach((item, i) => look(item, [...path, i]));
    else if (typeof value === 'object' && value !== null) for (const [key, item] of Object.entries(value)) look(item, [...path, key]);
  };
  look(hour, []);
  return found.filter((path) => !['pressureHpa', 'heightAglM', 'gridElevationM'].includes(String(path.at(-1))));
}

/** The hour with one of its numbers, the `which`th, replaced; null when it has none. */
export function spoilt(hour: Conditions, which: number, by: unknown): { readonly hour: Conditions; readonly field: string } | null {
  const all = places(hour);
  const path = all[which % Math.max(all.length, 1)];
  if (path === undefined) return null;
  const copy = structuredClone(hour) as unknown as Json;
  let at: Json = copy;
  for (const key of path.slice(0, -1)) at = at[key] as Json;
  at[path.at(-1)!] = by;
  return { hour: copy as unknown as Conditions, field: path.join('.') };
}

/** What stands where a number should: nothing, no number, or a number nobody has ever read. */
export const spoilers = fc.constantFrom<unknown>(null, undefined, '', '15', [], [5], {}, true, false, NaN, Infinity, -Infinity, -999, -9999, 9999, 32_767, 65_535, 9.96921e36);
