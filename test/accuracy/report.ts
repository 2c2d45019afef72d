/**
 * The accuracy table in words, one line a topic. Of a topic's tables the one that comes nearest to its tolerance speaks
 * for it; where any of them was printed or measured by others, one of those.
 */
import { compare, type Comparison } from './compare.ts';
import type { Table } from './table.ts';

/** Printed or measured by others, and read where they printed it. */
function isOutsideEvidence(table: Table): boolean {
  return table.standing === 'published' && table.evidence !== 'formula';
}

function label(table: Table): string {
  if (table.evidence === 'formula') return 'formula only';
  if (table.standing === 'memory') return 'from memory';
  return table.evidence === 'nature' ? 'measured' : table.standing;
}

/** Digits enough to show a hundredth of the tolerance. */
function decimalsFor(tolerance: number): number {
  return tolerance === 0 ? 0 : Math.max(0, 2 - Math.floor(Math.log10(tolerance)));
}

function inUnit(value: number, table: Table, decimals: number): string {
  return `${value.toFixed(decimals)}${table.unit === '' ? '' : ` ${table.unit}`}`;
}

function shortest(value: number): string {
  return value.toFixed(12).replace(/\.?0+$/, '');
}

function nearness({ worst, table }: Comparison): number {
  return worst.error === 0 ? 0 : worst.error / table.tolerance;
}

function sourcesOf(comparisons: readonly Comparison[]): string {
  const labels = new Map<string, Set<string>>();
  for (const { table } of comparisons) {
    const known = labels.get(table.source) ?? new Set<string>();
    labels.set(table.source, known.add(label(table)));
  }
  return [...labels].map(([source, known]) => `${source} (${[...known].join(', ')})`).join('; ');
}

function line(topic: string, comparisons: readonly Comparison[]): string {
  const outside = comparisons.filter(({ table }) => isOutsideEvidence(table));
  const speaking = (outside.length > 0 ? outside : comparisons).reduce((most, next) => (nearness(next) > nearness(most) ? next : most));
  const count = (some: readonly Comparison[]): number => some.reduce((sum, { findings }) => sum + findings.length, 0);
  const { worst, table } = speaking;
  const error = inUnit(worst.error, table, decimalsFor(table.tolerance));
  const tolerance = inUnit(table.tolerance, table, shortest(table.tolerance).split('.')[1]?.length ?? 0);
  return `| ${[topic, count(comparisons), count(outside), error, tolerance, sourcesOf(comparisons)].join(' | ')} |`;
}

/** What `npm run accuracy` prints and the README shows, without a final line break. */
export function accuracyReport(tables: readonly Table[]): string {
  const topics = Map.groupBy(tables.map(compare), ({ table }) => table.topic);
  const countOf = (keep: (table: Table) => boolean): number => tables.filter(keep).reduce((sum, { checks }) => sum + checks.length, 0);
  const all = countOf(() => true);
  const outside = countOf(isOutsideEvidence);
  const formula = countOf(({ evidence }) => evidence === 'formula');
  return [
    '| topic | checks | published or measured | worst error | tolerance | source |',
    '|---|---:|---:|---:|---:|---|',
    ...[...topics].map(([topic, comparisons]) => line(topic, comparisons)),
    '',
    `${all} checks: ${outside} against numbers that others printed or measured, ${all - outside - formula} against numbers from memory or common practice, ${formula} against a formula worked out again, which proves the arithmetic and nothing else. Where a topic has several tables, the error and the tolerance are those of the one that comes nearest to its tolerance, of those that others printed or measured if there are any.`,
  ].join('\n');
}
