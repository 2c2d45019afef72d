/** Where in a piece of JSON something stands, and what stands there, as people read it. */
export type Path = readonly (string | number)[];

const LONGEST_VALUE = 80;
const LONGEST_KEY = 60;

/** `$.features[0].properties.slopeDeg`; keys that are no plain words in brackets and quotes. */
export function formatPath(path: Path): string {
  return `$${path.map(formatStep).join('')}`;
}

function formatStep(step: string | number): string {
  if (typeof step === 'number') return `[${step}]`;
  return /^[A-Za-z_][A-Za-z0-9_]{0,59}$/.test(step) ? `.${step}` : `[${JSON.stringify(cut(step, LONGEST_KEY))}]`;
}

/** The value at a path, undefined where there is none. */
export function valueAt(root: unknown, path: Path): unknown {
  return path.reduce<unknown>((value, step) => {
    return typeof value === 'object' && value !== null && Object.hasOwn(value, step) ? (value as Record<string | number, unknown>)[step] : undefined;
  }, root);
}

/** The number at a path; undefined where there is none that could be reckoned with. */
export function numberAt(root: unknown, path: Path): number | undefined {
  const value = valueAt(root, path);
  return typeof value === 'number' && Number.isFinite(value) ? value : undefined;
}

/** JSON text of a value, cut, with what prints nothing or turns the line written as an escape; `missing` for none. */
export function valueText(value: unknown): string {
  if (value === undefined) return 'missing';
  if (typeof value === 'number' && !Number.isFinite(value)) return String(value);
  return printable(shortened(JSON.stringify(outline(value, 3)) ?? typeof value));
}

function printable(text: string): string {
  return text.replace(/[\p{Cc}\p{Cf}\p{Zl}\p{Zp}\p{Co}]/gu, (character) => `\\u{${(character.codePointAt(0) ?? 0).toString(16)}}`);
}

/** Enough of a large value for its first 80 characters: nothing of a whole request is written out to be cut off again. */
function outline(value: unknown, levels: number): unknown {
  if (typeof value === 'string') return cut(value, 2 * LONGEST_VALUE);
  if (typeof value !== 'object' || value === null) return value;
  if (levels === 0) return Array.isArray(value) ? [] : {};
  if (Array.isArray(value)) return value.slice(0, 20).map((item) => outline(item, levels - 1));
  return Object.fromEntries(Object.entries(value).slice(0, 20).map(([key, item]) => [cut(key, LONGEST_KEY), outline(item, levels - 1)]));
}

export function shortened(text: string): string {
  return cut(text, LONGEST_VALUE);
}

function cut(text: string, length: number): string {
  if (text.length <= length) return text;
  return `${text.slice(0, length - 1).toWellFormed()}…`;
}
