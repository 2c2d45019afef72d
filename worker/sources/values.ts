/**
 * The gate between a provider's JSON and our numbers: a finite number comes out as itself, everything else as null, which
 * means missing. Texts that look like numbers, true, [5] and the like are not numbers. Whether a number is plausible is
 * asked later, by lib/forecast/ranges.ts; here only the values go that services use to say "nothing", whatever the field:
 * 9999 m is a possible visibility, and still more likely a hole.
 */
const fillValues: ReadonlySet<number> = new Set([-999, -9999, -32768, 9999, 32767, 65535, 9.96921e36, Math.fround(9.96921e36)]);

export function numberOf(value: unknown): number | null {
  if (typeof value !== 'number' || !Number.isFinite(value) || fillValues.has(value)) return null;
  // -0 is 0.
  return value + 0;
}

/** The larger of what two neighbouring hours give; missing when either is. */
export function largerOf(a: number | null, b: number | null): number | null {
  return a === null || b === null ? null : Math.max(a, b);
}

/** A direction of 360 is north, 0. Anything else is left for the range check to judge. */
export function directionOf(value: unknown): number | null {
  const deg = numberOf(value);
  return deg === 360 ? 0 : deg;
}

export type Fields = Readonly<Record<string, unknown>>;

/** The fields of a JSON object; null for anything else. Prototypes are never looked at: use `fieldOf`. */
export function fieldsOf(value: unknown): Fields | null {
  return typeof value === 'object' && value !== null && !Array.isArray(value) ? (value as Fields) : null;
}

/** A field of a JSON value, undefined when the value is no object or has no such field of its own. */
export function fieldOf(value: unknown, name: string): unknown {
  const fields = fieldsOf(value);
  return fields !== null && Object.hasOwn(fields, name) ? fields[name] : undefined;
}

export function listOf(value: unknown): readonly unknown[] | null {
  return Array.isArray(value) ? (value as unknown[]) : null;
}

const instant = /^(\d{4}-\d{2}-\d{2}T\d{2}:\d{2}(?::\d{2}(?:\.\d{1,3})?)?)(Z|[+-]\d{2}:\d{2})$/;

/** Epoch ms of an ISO 8601 instant that says its offset; null for anything else. */
export function instantOf(value: unknown): number | null {
  if (typeof value !== 'string' || !instant.test(value)) return null;
  const ms = Date.parse(value);
  return Number.isFinite(ms) ? ms : null;
}
