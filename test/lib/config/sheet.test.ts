import { describe, expect, test } from 'vitest';
import { parseSheet, parseSheets } from '../../../lib/config/sheet.ts';
import { LIMIT_RANGES, PARAMETER_RANGES } from '../../../lib/config/sheet-ranges.ts';
import { LIMIT_NAMES, PARAMETER_NAMES } from '../../../lib/margin/sheet.ts';
import { issuesOf, pathsOf, sheet, valueOf, withValue, type Json } from './fixtures.ts';

const optional = { basis: 'optional' } as const;
const required = { basis: 'required' } as const;

function withLimits(limits: unknown): Json {
  return { ...sheet(), limits };
}

function paths(json: unknown): string[] {
  return pathsOf(parseSheet(json, optional));
}

describe('a sheet in a request', () => {
  test('is read with the parameters it leaves out filled in', () => {
    expect(valueOf(parseSheet(sheet(), optional))).toEqual({
      id: 'our-sheet', name: 'Our sheet', version: 3, kind: 'launch', for: 'our pilots', limits: { maxMeanMps: 5, maxGustMps: 7 },
      parameters: { lightWindMps: 1.34, bandM: 0, sinkMps: 0, sinkPerThermal: 0.25 }, closeBands: {}, basis: {},
    });
  });

  test('keeps parameters among the limits apart from them', () => {
    const read = valueOf(parseSheet(withLimits({ maxMeanMps: 5, bandM: 150, sinkPerThermal: 0 }), optional));
    expect(read.limits).toEqual({ maxMeanMps: 5 });
    expect(read.parameters).toEqual({ lightWindMps: 1.34, bandM: 150, sinkMps: 0, sinkPerThermal: 0 });
  });

  test('may be short: name, version and for are made up, kind is the site\'s', () => {
    expect(valueOf(parseSheet({ id: 'x', limits: { maxGustMps: 8 } }, { basis: 'optional', kind: 'strip' }))).toMatchObject({ name: 'x', version: 1, kind: 'strip', for: '' });
  });

  test('its own kind wins, so that a wrong one is noticed', () => {
    expect(valueOf(parseSheet(sheet(), { basis: 'optional', kind: 'strip' })).kind).toBe('launch');
  });

  test('without a kind from anywhere is refused', () => {
    expect(pathsOf(parseSheet({ id: 'x', limits: { maxGustMps: 8 } }, optional))).toEqual(['$.kind']);
  });

  test('keeps close bands and basis', () => {
    const read = valueOf(parseSheet({ ...sheet(), closeBands: { arrival: 5 }, basis: { maxGustMps: 'club rule 7' } }, optional));
    expect(read.closeBands).toEqual({ arrival: 5 });
    expect(read.basis).toEqual({ maxGustMps: 'club rule 7' });
  });
});

describe('a shipped sheet', () => {
  const shipped = (): Json => ({ ...sheet(), basis: { maxMeanMps: 'common practice, no source', maxGustMps: 'common practice, no source' } });

  test('has a basis for every number', () => {
    expect(parseSheet(shipped(), required).ok).toBe(true);
    expect(pathsOf(parseSheet(withValue(shipped(), ['basis', 'maxGustMps'], undefined), required))).toEqual(['$.basis.maxGustMps']);
    expect(pathsOf(parseSheet(withValue(shipped(), ['limits', 'bandM'], 50), required))).toEqual(['$.basis.bandM']);
    expect(pathsOf(parseSheet(withValue(shipped(), ['basis'], undefined), required))).toEqual(['$.basis.maxMeanMps', '$.basis.maxGustMps']);
  });

  test('and no basis without its number', () => {
    expect(pathsOf(parseSheet(withValue(shipped(), ['basis', 'maxRainMm'], 'x'), required))).toEqual(['$.basis.maxRainMm']);
  });

  test.each(['name', 'version', 'kind', 'for'])('says its %s', (name) => {
    expect(pathsOf(parseSheet(withValue(shipped(), [name], undefined), required))).toEqual([`$.${name}`]);
  });
});

describe('is refused', () => {
  test('B2 a misspelt limit, with what it may have meant', () => {
    const [issue, ...others] = issuesOf(parseSheet(withLimits({ maxMeanMps: 5, max_gsut: 8 }), optional));
    expect(others).toEqual([]);
    expect(issue?.path).toBe('$.limits.max_gsut');
    expect(issue?.value).toBe('8');
    expect(issue?.problem).toBe('unknown key; did you mean "maxGustMps"?');
    expect(issue?.allowed).toContain('maxGustMps');
  });

  test.each(['limit', 'Limits', 'confirmed', '__proto__x'])('an unknown key beside the limits: %s', (key) => {
    expect(paths({ ...sheet(), [key]: 1 })).toEqual([`$.${key}`]);
  });

  test('B4 no limits at all, or parameters only', () => {
    expect(paths(withLimits({}))).toEqual(['$.limits']);
    expect(paths(withLimits({ bandM: 50, sinkMps: 0.5 }))).toEqual(['$.limits']);
    expect(paths(withLimits(undefined))).toEqual(['$.limits']);
  });

  test.each([[null], [''], ['8'], [NaN], [Infinity], [true], [[]], [[8]], [{}]])('B5 a limit of %j', (value) => {
    expect(paths(withLimits({ maxMeanMps: 5, maxGustMps: value }))).toEqual(['$.limits.maxGustMps']);
  });

  test('B6 a largest wind of nothing or less, B7 of 250', () => {
    for (const value of [0, -3, 250]) expect(paths(withLimits({ maxMeanMps: value }))).toEqual(['$.limits.maxMeanMps']);
  });

  test('B9 a gust limit below the mean limit; equal is allowed', () => {
    const [issue] = issuesOf(parseSheet(withLimits({ maxMeanMps: 6, maxGustMps: 5.9 }), optional));
    expect(issue).toEqual({
      path: '$.limits.maxGustMps', value: '5.9', problem: 'the gust limit is below the mean wind limit of 6 m/s', allowed: 'a number from 6 to 35 m/s',
    });
    expect(paths(withLimits({ maxMeanMps: 6, maxGustMps: 6 }))).toEqual([]);
  });

  test('also when another limit is wrong as well: everything at once', () => {
    const json = { ...withLimits({ maxMeanMps: 6, maxGustMps: 5, maxTailMps: 'x', foo: 1 }), version: 0 };
    expect(paths(json).sort()).toEqual(['$.limits.foo', '$.limits.maxGustMps', '$.limits.maxTailMps', '$.version']);
  });

  test.each([0, -1, 1.5, '1', null])('version %j', (version) => {
    expect(paths({ ...sheet(), version })).toEqual(['$.version']);
  });

  test('a close band for no margin, or below zero', () => {
    expect(paths({ ...sheet(), closeBands: { arival: 5 } })).toEqual(['$.closeBands.arival']);
    expect(paths({ ...sheet(), closeBands: { arrival: -5 } })).toEqual(['$.closeBands.arrival']);
  });

  test('an id that is not kebab-case', () => {
    expect(paths({ ...sheet(), id: 'Our Sheet' })).toEqual(['$.id']);
  });
});

describe('every limit and parameter', () => {
  const all = { ...LIMIT_RANGES, ...PARAMETER_RANGES };

  test.each([...LIMIT_NAMES, ...PARAMETER_NAMES])('%s is allowed at both ends of its range and nowhere outside', (name) => {
    const { min, max } = all[name];
    // Beside a limit that contradicts none of them.
    const beside = name === 'maxGustMps' ? { maxTailMps: 1 } : name === 'maxMeanMps' ? { maxTailMps: 1 } : { maxMeanMps: 5 };
    for (const value of [min, max]) expect(paths(withLimits({ ...beside, [name]: value }))).toEqual([]);
    for (const value of [min - 0.001, max + 0.001]) expect(paths(withLimits({ ...beside, [name]: value }))).toEqual([`$.limits.${name}`]);
  });

  test('are thirty', () => {
    expect(Object.keys(all)).toHaveLength(30);
  });
});

describe('a file of sheets', () => {
  test('has unique ids', () => {
    expect(pathsOf(parseSheets([sheet(), sheet()], optional))).toEqual(['$[1].id']);
  });

  test('reports every sheet', () => {
    expect(pathsOf(parseSheets([withLimits({ a: 1, maxTailMps: 1 }), { ...sheet(), id: 'b', limits: {} }], optional))).toEqual(['$[0].limits.a', '$[1].limits']);
  });

  test('is a list', () => {
    expect(pathsOf(parseSheets({}, optional))).toEqual(['$']);
  });
});
