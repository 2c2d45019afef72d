/**
 * The gate over every published table, and the README that shows it. Topics with published numbers that have
 * no table here, because the model does not compute them:
 *
 * | topic | why not |
 * |---|---|
 * | thickness of a deep layer | levels come with their heights; the model never adds thicknesses up |
 * | vector mean of many winds, direction a wind blows to | nothing is averaged, and winds are named by where they come from |
 * | Beaufort forces 1 to 12, inches of mercury, feet a minute | only the bound of calm is used; no such unit is read or shown |
 * | displacement height, power law, stability functions, roughness classes | neutral log law over the site's own roughness |
 * | EN 1991-1-4, ASCE 7 and AS/NZS 1170.2 hills, inner layer, lee separation | one guideline is used; of ASCE 7 the cap of the slope |
 * | wind at the foot of Askervein, turbulence on its crest | no slow-down is modelled; that turbulence does not speed up is a choice, not a number |
 * | gust factors over other times, turbulence intensity, gust formulas of services | gusts come from the forecast; a typical factor is only shown |
 * | cross-country speed, parabolic drag, lift coefficient, half the headwind, EN report lines, line strength, glide of other aircraft | not computed |
 * | speed of the run | a margin: tested with the margins |
 * | Allen's thermal, buoyancy velocity, K and lifted index, CAPE words, stability, moist adiabat, radiation | strength is the scale velocity; CAPE is compared with the sheet as it comes |
 * | condensation over ice, or of air at 200 K | outside the formula's range and anybody's launch |
 * | weak links | site and equipment, not forecast |
 * | Julian days, longitude of the sun | inside the ephemeris, whose rise, set and position are tested |
 * | definitions of night | a site's rule of daylight: the two ends and their minutes are its own |
 * | mountain waves, Froude number, wake of obstacles | cautions of experience; the foehn limit of 4 hPa is checked with the sheets |
 * | CRPS, Brier score, calibration, quantiles of other types, plotting positions | agreement is a plain share, spread is type 8 |
 * | limits of handbooks that no shipped sheet takes over | not used |
 * | magnetic inclination and intensity | only declination turns a heading |
 */
import { execFileSync } from 'node:child_process';
import { readFileSync } from 'node:fs';
import path from 'node:path';
import { describe, expect, test } from 'vitest';
import { compare, find } from '../accuracy/compare.ts';
import { accuracyReport } from '../accuracy/report.ts';
import { table } from '../accuracy/table.ts';
import { allTables } from '../accuracy/tables.ts';
import { root } from '../support/run-tool.ts';

describe('every table', () => {
  test.each(allTables.map((one) => [`${one.topic}, ${one.source}, ${one.standing} ${one.evidence}`, one] as const))('%s', (_name, one) => {
    expect(one.checks).toHaveLength(one.count);
    expect(compare(one).findings.filter(({ agrees }) => !agrees)).toEqual([]);
  });

  test('there are 81 of them with 699 rows, 550 printed or measured by others', () => {
    const rows = (some: typeof allTables): number => some.reduce((sum, { count }) => sum + count, 0);
    const outside = allTables.filter(({ standing, evidence }) => standing === 'published' && evidence !== 'formula');
    expect([allTables.length, rows(allTables), rows(outside)]).toEqual([81, 699, 550]);
  });

  test('tables of one topic share a unit', () => {
    const units = Map.groupBy(allTables, ({ topic }) => topic);
    expect([...units.values()].filter((some) => new Set(some.map(({ unit }) => unit)).size > 1)).toEqual([]);
  });

  test('a tolerance wider than the rounding says why, and no tolerance is negative', () => {
    expect(allTables.filter(({ tolerance, wider }) => tolerance < 0 || wider === '')).toEqual([]);
  });
});

describe('the README', () => {
  const readme = readFileSync(path.join(root, 'README.md'), 'utf8');
  const shown = /<!-- accuracy:begin -->\n([\s\S]*)<!-- accuracy:end -->/.exec(readme)?.[1];

  test('shows what npm run accuracy prints', () => {
    const { scripts } = JSON.parse(readFileSync(path.join(root, 'package.json'), 'utf8')) as { scripts: Record<string, string> };
    expect(scripts['accuracy']).toBe('node test/accuracy/main.ts');
    const printed = execFileSync(process.execPath, ['test/accuracy/main.ts'], { cwd: root, encoding: 'utf8' });
    expect(shown).toBe(printed);
    expect(printed).toBe(`${accuracyReport(allTables)}\n`);
  });
});

describe('the comparison', () => {
  const passport = { topic: 't', source: 's', standing: 'published', evidence: 'number', unit: 'm', rounding: 'to 1 m', tolerance: 0.5, count: 1 } as const;
  const agrees = (expected: number, ours: number, compared?: 'around the circle' | 'in percent'): boolean => {
    const one = table({ ...passport, ...(compared === undefined ? {} : { compared }) }, [0], { says: () => 'row', expected: () => expected, ours: () => ours });
    return one.checks.every((check) => find(one, check).agrees);
  };

  test('lets half of the last digit pass and no more', () => {
    expect([agrees(10, 10.5), agrees(10, 9.5), agrees(10, 10.501), agrees(10, 9.499)]).toEqual([true, true, false, false]);
  });

  test('takes no number for no agreement', () => {
    expect([agrees(10, NaN), agrees(NaN, 10), agrees(10, Infinity)]).toEqual([false, false, false]);
  });

  test('goes round the circle by the short way', () => {
    expect([agrees(0, 359.6, 'around the circle'), agrees(359.6, 0, 'around the circle'), agrees(360, 0, 'around the circle'), agrees(0, 180, 'around the circle')]).toEqual([true, true, true, false]);
  });

  test('counts percent of the published number', () => {
    expect([agrees(200, 201, 'in percent'), agrees(200, 199, 'in percent'), agrees(200, 201.1, 'in percent')]).toEqual([true, true, false]);
  });

  test('refuses a table without rows', () => {
    expect(() => compare(table(passport, [], { says: () => '', expected: () => 0, ours: () => 0 }))).toThrow('has no rows');
  });
});
