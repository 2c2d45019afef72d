import { describe, expect, test } from 'vitest';
import { parseAssessRequest, type AssessContext } from '../../../lib/config/assess-request.ts';
import { parseSheet } from '../../../lib/config/sheet.ts';
import { parseSiteFeature } from '../../../lib/config/site.ts';
import { parseWingClasses } from '../../../lib/config/wing-classes.ts';
import wingClassesJson from '../../../config/wing-classes.json' with { type: 'json' };
import { hour, issuesOf, launchFeature, NOW_MS, pathsOf, sheet, stripFeature, valueOf, withProperty, type Json } from './fixtures.ts';

const context: AssessContext = {
  sites: [launchFeature(), stripFeature()].map((json) => valueOf(parseSiteFeature(json, { nowMs: NOW_MS }))),
  sheets: [sheet(), { ...sheet(), id: 'strip-sheet', kind: 'strip' }].map((json) => valueOf(parseSheet(json, { basis: 'optional' }))),
  wingClasses: valueOf(parseWingClasses(wingClassesJson)),
  nowMs: NOW_MS,
};

function request(): Json {
  return { site: launchFeature(), wing: { class: 'EN B' }, sheet: { id: 'x', limits: { maxGustMps: 8 } }, hours: [hour()] };
}

function paths(json: unknown): string[] {
  return pathsOf(parseAssessRequest(json, context));
}

describe('a request', () => {
  test('with everything given whole', () => {
    const read = valueOf(parseAssessRequest({ ...request(), declares: ['gustMps'], now: '2027-05-14T03:12:30Z' }, context));
    expect(read.site.id).toBe('larch-shoulder');
    expect(read.sheet).toMatchObject({ id: 'x', kind: 'launch', version: 1 });
    expect(read.wing.class).toBe('EN B');
    expect(read.hours).toHaveLength(1);
    expect(read.declares).toEqual(['gustMps']);
    expect(read.nowMs).toBe(Date.UTC(2027, 4, 14, 3, 12, 30));
  });

  test('with site and sheet by their ids', () => {
    const read = valueOf(parseAssessRequest({ ...request(), site: { id: 'long-field' }, sheet: { id: 'strip-sheet' } }, context));
    expect(read.site).toBe(context.sites[1]);
    expect(read.sheet).toBe(context.sheets[1]);
  });

  test('that declares nothing declares what its hours hold', () => {
    expect(valueOf(parseAssessRequest(request(), context))).toMatchObject({ declares: ['wind10m', 'gustMps'], nowMs: null });
    expect(valueOf(parseAssessRequest({ ...request(), declares: null }, context)).declares).toEqual(['wind10m', 'gustMps']);
    expect(valueOf(parseAssessRequest({ ...request(), declares: [] }, context)).declares).toEqual([]);
  });
});

describe('is refused', () => {
  test('a sheet for the other kind of site', () => {
    expect(paths({ ...request(), sheet: { id: 'strip-sheet' } })).toEqual(['$.sheet']);
    expect(paths({ ...request(), site: { id: 'long-field' }, sheet: sheet() })).toEqual(['$.sheet']);
  });

  test('an unknown id, with what it may have meant', () => {
    const issues = issuesOf(parseAssessRequest({ ...request(), site: { id: 'larch-sholder' }, sheet: { id: 'nothing' } }, context));
    expect(issues).toEqual([
      { path: '$.site.id', value: '"larch-sholder"', problem: 'no site has this id; did you mean "larch-shoulder"?', allowed: 'one of larch-shoulder, long-field' },
      { path: '$.sheet.id', value: '"nothing"', problem: 'no sheet has this id', allowed: 'one of our-sheet, strip-sheet' },
    ]);
  });

  test.each<[string, Json, string]>([
    ['an id and more', { site: { id: 'long-field', name: 'x' } }, '$.site.name'],
    ['an id that is none', { sheet: { id: 7 } }, '$.sheet.id'],
    ['an unknown key', { hour: [] }, '$.hour'],
    ['a mass assignment', { admin: true }, '$.admin'],
    ['a now without zone', { now: '2027-05-14T04:00:00' }, '$.now'],
    ['a now that is a number', { now: 1 }, '$.now'],
    ['an unknown field declared', { declares: ['gusts'] }, '$.declares[0]'],
    ['declares that are no list', { declares: 'gustMps' }, '$.declares'],
  ])('%s', (_case, part, path) => {
    expect(paths({ ...request(), ...part })).toEqual([path]);
  });

  test.each([[null], [[]], ['x'], [42], [undefined]])('%j as a whole', (json) => {
    expect(paths(json)).toEqual(['$']);
  });

  test('an empty object, part by part', () => {
    expect(paths({})).toEqual(['$.site', '$.wing', '$.sheet', '$.hours']);
  });

  test('every part at once', () => {
    const json = {
      site: withProperty(launchFeature(), 'slopeDeg', 99), wing: { class: 'EN X' }, sheet: { id: 'x', limits: { max_gsut: 8, maxTailMps: 1 } },
      hours: [{ ...hour(), gustMps: 'x' }], declares: ['y'], now: 'z', extra: 1,
    };
    expect(paths(json).sort()).toEqual([
      '$.declares[0]', '$.extra', '$.hours[0].gustMps', '$.now', '$.sheet.limits.max_gsut', '$.site.properties.slopeDeg', '$.wing.class',
    ]);
  });

  test('a sheet is not blamed for a site that is wrong elsewhere', () => {
    const json = { ...request(), site: withProperty(stripFeature(), 'lineLengthM', 1), sheet: { id: 'x', limits: { maxGustMps: 8 } } };
    expect(paths(json)).toEqual(['$.site.properties.lineLengthM']);
  });

  test('thousands of faults in one request are counted, not listed', () => {
    const junk = Object.fromEntries(Array.from({ length: 5000 }, (_, i) => [`key${i}`, i]));
    const issues = issuesOf(parseAssessRequest({ ...request(), ...junk }, context));
    expect(issues).toHaveLength(500);
    expect(issues.at(-1)?.problem).toBe('4501 more problems are not listed');
  });
});
