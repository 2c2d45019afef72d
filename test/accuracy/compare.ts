/**
 * The one comparison: our numbers against a table's. The gate (test/reference) and `npm run accuracy` both use it, so
 * the README cannot say anything that the gate does not hold.
 */
import type { Check, Table } from './table.ts';

export interface Finding {
  readonly check: Check;
  readonly ours: number;
  /** In the unit of the table, or percent; Infinity where we have no number. */
  readonly error: number;
  readonly agrees: boolean;
}

export interface Comparison {
  readonly table: Table;
  readonly findings: readonly Finding[];
  readonly worst: Finding;
}

/** Binary numbers are not decimal ones: a few last places of the expectation. */
function lastPlaces(expected: number): number {
  return 8 * Number.EPSILON * Math.max(1, Math.abs(expected));
}

function errorOf(ours: number, expected: number, compared: Table['compared']): number {
  const difference = Math.abs(ours - expected);
  if (Number.isNaN(difference)) return Infinity;
  if (compared === 'in percent') return (100 * difference) / Math.abs(expected);
  return compared === 'around the circle' ? Math.abs(((ours - expected + 540) % 360 + 360) % 360 - 180) : difference;
}

export function find(table: Table, check: Check): Finding {
  const ours = check.ours();
  const error = errorOf(ours, check.expected, table.compared);
  return { check, ours, error, agrees: error <= table.tolerance + lastPlaces(check.expected) };
}

export function compare(table: Table): Comparison {
  const findings = table.checks.map((check) => find(table, check));
  const [first] = findings;
  if (first === undefined) throw new Error(`the table "${table.topic}" of ${table.source} has no rows`);
  const worst = findings.reduce((most, finding) => (finding.error > most.error ? finding : most), first);
  return { table, findings, worst };
}
