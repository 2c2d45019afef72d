import { describe, expect, test } from 'vitest';
import { find } from '../accuracy/compare.ts';
import type { Table } from '../accuracy/table.ts';

function standing({ evidence, standing: where, source }: Table): string {
  const what = { number: 'printed by', nature: 'measured,', formula: 'the same formula again,' }[evidence];
  return `${what} ${source}${where === 'published' ? '' : `, ${where === 'memory' ? 'from memory' : where}`}`;
}

/** Our numbers agree with every row of these tables, and no row is missing. */
export function holds(tables: readonly Table[]): void {
  for (const table of tables) {
    describe(`${table.topic}: ${standing(table)}`, () => {
      test.each(table.checks.map((check) => ({ ...check, check })))('$says: $expected', ({ check }) => {
        const finding = find(table, check);
        expect(finding, `ours is ${finding.ours} ${table.unit}, tolerance ${table.tolerance} ${table.unit}`).toMatchObject({ agrees: true });
      });

      test(`has ${table.count} rows`, () => {
        expect(table.checks).toHaveLength(table.count);
      });
    });
  }
}
