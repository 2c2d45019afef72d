import { describe, expect, test } from 'vitest';
import { listFiles, parse, readSource } from '../../support/source.ts';
import { purityBreaches } from './purity.ts';

test('lib has no clock, no chance and no world', () => {
  expect(listFiles(['lib'], '.ts').map(readSource).flatMap(purityBreaches)).toEqual([]);
});

describe('the check', () => {
  test.each([
    'export const a = new Date(0);',
    'export const a = { process: 1, fetch: 2 };',
    'export const a = (b: { fetch: number }) => b.fetch;',
    '// Date.now()\nexport const a = "Math.random()";',
    'export interface A { readonly console: string }',
    'export const a = Math.max(1, 2);',
  ])('lets pass: %s', (text) => {
    expect(purityBreaches(parse('lib/air/a.ts', text))).toEqual([]);
  });

  test.each([
    'export const a = Date.now();',
    'export const a = Date["now"]();',
    'export const now = Date.now;',
    'export const a = new Date();',
    'export const a = Date();',
    'export const a = Math.random() * 2;',
    'export const a = () => fetch("x");',
    'console.log(1);',
    'export const a = process.env.A;',
    'export const a = (globalThis as unknown as { b: number }).b;',
    'export const a = [performance!.now()];',
  ])('finds: %s', (text) => {
    expect(purityBreaches(parse('lib/air/a.ts', text))).toHaveLength(1);
  });
});
