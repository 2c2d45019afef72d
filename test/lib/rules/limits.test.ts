import { describe, expect, test } from 'vitest';
import { LIMIT_NAMES } from '../../../lib/margin/sheet.ts';
import { listFiles, parse, readSource } from '../../support/source.ts';
import { limitBreaches } from './limits.ts';

test('only margin() compares with a limit', () => {
  const sources = listFiles(['lib', 'worker'], '.ts').map(readSource);
  expect(sources.length).toBeGreaterThan(0);
  expect(sources.flatMap(limitBreaches)).toEqual([]);
});

describe('the check', () => {
  test.each(LIMIT_NAMES)('knows %s', (name) => {
    expect(limitBreaches(parse('worker/a.ts', `export const a = v <= sheet.limits.${name};`))).toHaveLength(1);
    expect(limitBreaches(parse('worker/a.ts', `if (${name} > v) b();`))).toHaveLength(1);
  });

  test.each([
    'export const a = windMps <= sheet.limits.maxMeanMps!;',
    'export const a = (sheet.limits.maxMeanMps ?? 99) > windMps;',
    'export const a = sheet.limits["maxMeanMps"] < windMps;',
    'export const a = sheet.limits[name] < windMps;',
    'export const a = limits[name]! >= windMps;',
    'export const a = margin.limit! < margin.demand!;',
    'export const a = Math.max(windMps, sheet.limits.maxMeanMps as number);',
    'export const a = Math.min(limits.maxMeanMps! - windMps, 3);',
    'export const a = Math["min"](limits.maxMeanMps!, 3);',
    'export const a = Math.abs(limits.maxMeanMps! - windMps) > 0.5;',
    'export const a = hours.every((hour) => hour.gustMps <= limits.maxGustMps);',
    'export const a = windMps < sector.maxMps;',
    'export function f({ maxRunMps: run }: Limits, v: number) { return v > run!; }',
    'export function f(limits: Limits, v: number) { const { maxRunMps: run } = limits; return v > run!; }',
    'export function f(sheet: Sheet, v: number) { const most = sheet.limits.maxRunMps ?? 3; return v > most; }',
    'export function f(sheet: Sheet, v: number) { const a = sheet.limits.maxRunMps; const b = a! * 2; return () => v > b; }',
    'while (v < (limits.maxRunMps as number)) v++;',
  ])('finds: %s', (text) => {
    expect(limitBreaches(parse('lib/brief/a.ts', text))).toHaveLength(1);
  });

  test.each([
    'export const a = windMps < 0.3;',
    'export const a = margin({ limit: sheet.limits.maxMeanMps, demand: windMps });',
    'export const a = sheet.limits.maxMeanMps === undefined;',
    'export const a = limits.length > 3;',
    'export const a = Object.keys(sheet.limits).length > 0;',
    'export function f(sheet: Sheet) { const m = margin({ limit: sheet.limits.maxRunMps }); return m.spare > m.band; }',
    'export function f(sheet: Sheet, v: number) { const run = sheet.limits.maxRunMps; return { run, g: (run: number) => v > run }; }',
    'export const a = sheet.parameters.lightWindMps > windMps;',
    '// a < limits.maxMeanMps\nexport const a = "a < limits.maxMeanMps";',
    'export function f<T extends Record<"maxMeanMps", number>>(v: T): T { return v; }',
  ])('lets pass: %s', (text) => {
    expect(limitBreaches(parse('lib/brief/a.ts', text))).toEqual([]);
  });

  test('opens the door at margin() and the ranges of the schemas only', () => {
    const text = 'export const a = limit < demand;';
    expect(limitBreaches(parse('lib/margin/margin.ts', text))).toEqual([]);
    expect(limitBreaches(parse('lib/config/sheet.ts', text))).toEqual([]);
    expect(limitBreaches(parse('lib/margin/wind.ts', text))).toHaveLength(1);
    expect(limitBreaches(parse('lib/margin/margin.ts.ts', text))).toHaveLength(1);
  });

  test('lets a margin take the larger of the two fields of slope, and nobody else', () => {
    const text = 'export const a = Math.max(glideDeg + limits.slopeBufferDeg!, limits.minSlopeDeg!);';
    expect(limitBreaches(parse('lib/margin/slope.ts', text))).toEqual([]);
    expect(limitBreaches(parse('lib/brief/slope.ts', text))).toHaveLength(1);
    expect(limitBreaches(parse('lib/margin/slope.ts', text.replace('max', 'min')))).toHaveLength(1);
    expect(limitBreaches(parse('lib/margin/slope.ts', 'export const a = slopeDeg > limits.minSlopeDeg!;'))).toHaveLength(1);
  });

  test.each(['if (!(x > 20)) b();', 'const a = !(x > 20 && y);', 'const a = !((x as number) <= y);'])('finds the negated comparison: %s', (text) => {
    expect(limitBreaches(parse('lib/margin/a.ts', text))).toHaveLength(1);
    expect(limitBreaches(parse('lib/forecast/a.ts', text))).toHaveLength(1);
    expect(limitBreaches(parse('lib/brief/a.ts', text))).toEqual([]);
  });

  test.each(['if (!x) b();', 'const a = !(x === y);', 'const a = x <= 20;', 'const a = !within(x);'])('lets pass: %s', (text) => {
    expect(limitBreaches(parse('lib/margin/a.ts', text))).toEqual([]);
  });
});
