// worker/store/SCHEMA.md speaks of the tables that the migrations make, of all of them, and of no others.
import { readFileSync } from 'node:fs';
import path from 'node:path';
import { afterAll, expect, test } from 'vitest';
import { root } from '../../support/run-tool.ts';
import { sqliteD1 } from '../../support/sqlite-d1.ts';

const db = sqliteD1();
afterAll(() => db.close());

const told = new Map(readFileSync(path.join(root, 'worker/store/SCHEMA.md'), 'utf8').split('\n').flatMap((line) => {
  const [, name, key] = /^\| `(\w+)` \| ([^|]+) \|/.exec(line) ?? [];
  return name === undefined || key === undefined ? [] : [[name, /`([^`]+)`/.exec(key)?.[1] ?? ''] as const];
}));
const made = (db.ask(`SELECT name FROM sqlite_master WHERE type = 'table' AND name NOT LIKE 'sqlite_%' AND name NOT LIKE 'd1_%' ORDER BY name`) as { name: string }[]).map(({ name }) => name);

test('every table is told of, and every table told of is made', () => {
  expect([...told.keys()].sort()).toEqual(made);
});

test.each(made)('the key of %s is the one that is told', (table) => {
  const key = (db.ask(`SELECT name FROM pragma_table_info('${table}') WHERE pk > 0 ORDER BY pk`) as { name: string }[]).map(({ name }) => name);
  expect(told.get(table)).toBe(key.join(', '));
});

test('what is named as an instant is a whole number, what is named as a date a text', () => {
  const instants = made.flatMap((table) => (db.ask(`SELECT name, type FROM pragma_table_info('${table}')`) as { name: string; type: string }[])
    .filter(({ name, type }) => /(_at|_by|_until|_date)$/.test(name) && type !== (name.endsWith('_date') ? 'TEXT' : 'INTEGER') && name !== 'lease_by').map(({ name }) => `${table}.${name}`));
  expect(instants).toEqual([]);
});
