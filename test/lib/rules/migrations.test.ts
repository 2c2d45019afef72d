// Code and database agree on the newest migration: a database that lacks one is told so by /healthz and by the tick.
import { readdirSync, readFileSync } from 'node:fs';
import path from 'node:path';
import { expect, test } from 'vitest';
import { SCHEMA_VERSION } from '../../../worker/store/meta.ts';
import { root } from '../../support/run-tool.ts';
import { sqliteD1 } from '../../support/sqlite-d1.ts';

const folder = path.join(root, 'worker/store/migrations');
const files = readdirSync(folder).filter((name) => name.endsWith('.sql')).sort();
const numberOf = (name: string): number => Number(/^(\d{4})_/.exec(name)?.[1]);

test('every migration has a number of its own', () => {
  expect(new Set(files.map(numberOf)).size, files.join(' ')).toBe(files.length);
  expect(files.every((name) => numberOf(name) > 0)).toBe(true);
});

test('the newest migration writes its number, and the code was written for it', () => {
  const newest = files.at(-1) ?? '';
  expect(readFileSync(path.join(folder, newest), 'utf8'), newest).toContain(`UPDATE meta SET value = '${numberOf(newest)}' WHERE key = 'schema';`);
  expect(SCHEMA_VERSION, `the newest migration is ${newest}`).toBe(numberOf(newest));
  const db = sqliteD1();
  expect(db.ask(`SELECT value FROM meta WHERE key = 'schema'`)).toEqual([{ value: String(SCHEMA_VERSION) }]);
  db.close();
});

test('they are what a remote database can take: no trigger, no carriage return', () => {
  for (const name of files) {
    const text = readFileSync(path.join(folder, name), 'utf8');
    expect(text, name).not.toMatch(/\r|CREATE\s+(TEMP\s+)?TRIGGER|BEGIN\b/i);
  }
});

test('they only add: code that is rolled back finds every table and column that it knows', () => {
  for (const name of files) expect(readFileSync(path.join(folder, name), 'utf8'), name).not.toMatch(/DROP\s+(TABLE|COLUMN)|RENAME\s+(TO|COLUMN)/i);
});
