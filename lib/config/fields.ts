/**
 * The kinds of field that our JSON is made of, as zod schemas. The message of every schema is what would be right
 * there: check.ts turns it into the `allowed` of an Issue. Call these inside functions: building schemas costs start-up.
 */
import * as z from 'zod/mini';

export interface Range {
  readonly min: number;
  readonly max: number;
  readonly unit: string;
}

/** `a number from 0 to 60 °`. */
export function rangeText({ min, max, unit }: Range): string {
  return `a number from ${min} to ${max}${unit === '' ? '' : ` ${unit}`}`;
}

export function number(range: Range): z.ZodMiniNumber<number> {
  const error = (): string => rangeText(range);
  return z.number({ error }).check(z.minimum(range.min, { error }), z.maximum(range.max, { error }));
}

export function wholeNumber(range: Range): z.ZodMiniNumberFormat {
  const error = (): string => rangeText(range).replace('a number', 'a whole number');
  return z.int({ error }).check(z.minimum(range.min, { error }), z.maximum(range.max, { error }));
}

/** Any finite number: whether it is plausible is for the judge of forecasts to say. */
export function anyNumber(unit: string): z.ZodMiniNumber<number> {
  return z.number({ error: () => `a number${unit === '' ? '' : `, ${unit}`}` });
}

export function trueOrFalse(): z.ZodMiniBoolean {
  return z.boolean({ error: () => 'true or false' });
}

export function oneOf<const W extends readonly [string, ...string[]]>(words: W): z.ZodMiniEnum<{ [K in W[number]]: K }> {
  return z.enum(words, { error: () => words.map((word) => JSON.stringify(word)).join(', ') });
}

export function list<T extends z.ZodMiniType>(item: T, size: { readonly min: number; readonly max: number }): z.ZodMiniArray<T> {
  const error = (): string => `a list of ${size.min} to ${size.max}`;
  return z.array(item, { error }).check(z.minLength(size.min, { error }), z.maxLength(size.max, { error }));
}

/** An object with these keys and no others. */
export function fields<S extends z.core.$ZodLooseShape>(shape: S): z.ZodMiniObject<S, z.core.$strict> {
  const keys = Object.keys(shape).join(', ');
  return z.strictObject(shape, { error: (issue) => (issue.code === 'unrecognized_keys' ? keys : `an object with ${keys}`) });
}

/** Builds once, at first use. */
export function once<T>(build: () => T): () => T {
  let built: { readonly value: T } | undefined;
  return () => (built ??= { value: build() }).value;
}
