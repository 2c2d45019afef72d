/** Expected outcomes are values: a Result is either a value or a tagged failure, never a throw. */
export type Result<T, E> = { readonly ok: true; readonly value: T } | { readonly ok: false; readonly error: E };

export function success<T>(value: T): { readonly ok: true; readonly value: T } {
  return { ok: true, value };
}

export function failure<E>(error: E): { readonly ok: false; readonly error: E } {
  return { ok: false, error };
}

/** One thing wrong with a piece of data from outside, said so that a person can mend it. */
export interface Issue {
  /** Where, as a JSON path: `$.features[0].properties.slopeDeg`. */
  readonly path: string;
  /** The value found there, as JSON text cut to 80 characters; `missing` when there is none. */
  readonly value: string;
  /** What is wrong, one sentence without the path. */
  readonly problem: string;
  /** What would be right: a range, a list of words, a unit. */
  readonly allowed: string;
}
