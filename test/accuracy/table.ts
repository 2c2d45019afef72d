/**
 * A table of numbers that did not come out of this repository, and what each number is worth. Every table carries its
 * passport, so that nobody has to take an expectation on trust.
 */

/** Where a number was read: in the source named, nowhere but in common practice, or in memory of the source. */
export type Standing = 'published' | 'common practice' | 'memory';

/**
 * What agreement with a number proves: a number that somebody else printed; a measurement; or only that the same
 * formula was worked out twice, which says nothing about the world.
 */
export type Evidence = 'number' | 'nature' | 'formula';

export interface Passport {
  /** What is compared. Tables of one topic share a unit. */
  readonly topic: string;
  /** Who printed it: document, edition, table or page where known. */
  readonly source: string;
  readonly standing: Standing;
  readonly evidence: Evidence;
  readonly unit: string;
  /** How the table is printed. */
  readonly rounding: string;
  /** The largest error that agrees: half of the last printed digit, and no less. */
  readonly tolerance: number;
  /** Why the tolerance is wider than the rounding; a table without it is held to its rounding. */
  readonly wider?: string;
  readonly compared?: 'around the circle' | 'in percent';
  /** Rows the table must have, so that none falls out unseen. */
  readonly count: number;
}

export interface Check {
  readonly says: string;
  readonly expected: number;
  ours(): number;
}

export interface Table extends Passport {
  readonly checks: readonly Check[];
}

/** Reads one column of a printed table as checks. */
export function table<Row>(
  passport: Passport,
  rows: readonly Row[],
  column: { readonly says: (row: Row) => string; readonly expected: (row: Row) => number; readonly ours: (row: Row) => number },
): Table {
  const checks = rows.map((row) => ({ says: column.says(row), expected: column.expected(row), ours: () => column.ours(row) }));
  return { ...passport, checks };
}
