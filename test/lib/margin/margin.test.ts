// The door to a comparison with a limit, and the close bands: the page's numbers, written out again.
import { describe, expect, test } from 'vitest';
import { MARGIN_IDS, type MarginId } from '../../../lib/margin/ids.ts';
import { closeBand, defaultBand, margin } from '../../../lib/margin/margin.ts';
import { UNIT_OF } from '../../support/days.ts';

describe('at most', () => {
  test.each([
    [5, 6, 0.5, 1, 'within'], [5.5, 6, 0.5, 0.5, 'within'], [5.51, 6, 0.5, 0.49, 'close'], [6, 6, 0.5, 0, 'close'], [6.01, 6, 0.5, -0.01, 'beyond'], [6, 6, 0, 0, 'within'],
  ] as const)('%d against %d, close below %d: %d spare, %s', (demand, limit, band, spare, status) => {
    const found = margin({ demand, limit, sense: 'atMost', band });
    expect(found.spare).toBeCloseTo(spare, 9);
    expect(found.status).toBe(status);
  });
});

describe('at least', () => {
  test.each([
    [7, 6, 0.5, 1, 'within'], [6.5, 6, 0.5, 0.5, 'within'], [6.49, 6, 0.5, 0.49, 'close'], [6, 6, 0.5, 0, 'close'], [5.99, 6, 0.5, -0.01, 'beyond'], [-2, -3, 0, 1, 'within'],
  ] as const)('%d against %d, close below %d: %d spare, %s', (demand, limit, band, spare, status) => {
    const found = margin({ demand, limit, sense: 'atLeast', band });
    expect(found.spare).toBeCloseTo(spare, 9);
    expect(found.status).toBe(status);
  });
});

test('a spare that is only the rounding of its own sum is none: 0.1 + 0.2 is 0.3', () => {
  expect(margin({ demand: 0.1 + 0.2, limit: 0.3, sense: 'atMost', band: 0 })).toEqual({ spare: 0, status: 'within' });
  expect(margin({ demand: 0.3, limit: 0.1 + 0.2, sense: 'atLeast', band: 0 })).toEqual({ spare: 0, status: 'within' });
  expect(margin({ demand: 1, limit: 1 - 0.9e-9, sense: 'atMost', band: 0 })).toEqual({ spare: 0, status: 'within' });
  expect(margin({ demand: 1, limit: 1 - 1.1e-9, sense: 'atMost', band: 0 }).status).toBe('beyond');
  expect(margin({ demand: 1, limit: 1 + 1.1e-9, sense: 'atMost', band: 0 }).spare).toBeGreaterThan(0);
  // Exactly the rounding is a spare, and exactly the rounding short of a band is not close.
  expect(margin({ demand: 0, limit: 1e-9, sense: 'atMost', band: 0 }).spare).toBe(1e-9);
  expect(margin({ demand: 3, limit: 3, sense: 'atMost', band: 1e-9 }).status).toBe('within');
  // And a band that is only just not reached is reached.
  expect(margin({ demand: 0, limit: 0.3, sense: 'atMost', band: 0.3 + 0.9e-9 }).status).toBe('within');
  expect(margin({ demand: 0, limit: 0.3, sense: 'atMost', band: 0.3 + 1.1e-9 }).status).toBe('close');
});

test('no solution is beyond any limit, without a spare, unless the limit itself is none', () => {
  expect(margin({ demand: 'no solution', limit: 3, sense: 'atLeast', band: 0 })).toEqual({ spare: null, status: 'beyond' });
  expect(margin({ demand: 'no solution', limit: NaN, sense: 'atLeast', band: 0 })).toEqual({ spare: null, status: 'unknown' });
});

test.each([NaN, Infinity, -Infinity, null, undefined, '', '3', [], [3], true])('%s for any of the three numbers is unknown', (odd) => {
  const unknown = { spare: null, status: 'unknown' };
  for (const sense of ['atMost', 'atLeast'] as const) {
    expect(margin({ demand: odd as number, limit: 3, sense, band: 0 })).toEqual(unknown);
    expect(margin({ demand: 3, limit: odd as number, sense, band: 0 })).toEqual(unknown);
    expect(margin({ demand: 3, limit: 3, sense, band: odd as number })).toEqual(unknown);
  }
});

/** Data shapes, "Default close bands". */
const PAGE: Readonly<Partial<Record<MarginId, number>>> = {
  meanWind: 0.5, arrival: 30, cloudBase: 100, offAxis: 5, slope: 1, daylight: 15, storm: 100, rain: 0.1, rainChance: 10, pressureStep: 0.5, visibility: 500, agreement: 0.05, towHeight: 30,
};

test('the default bands are those of the page', () => {
  for (const [id, band] of Object.entries(PAGE)) expect([id, defaultBand(id as MarginId, UNIT_OF[id as MarginId])]).toEqual([id, band]);
  const speeds = MARGIN_IDS.filter((id) => UNIT_OF[id] === 'm/s');
  expect(new Set(speeds.map((id) => defaultBand(id, 'm/s')))).toEqual(new Set([0.5]));
  expect(defaultBand('gust', 'h')).toBe(0);
});

test('a band is capped at a quarter of the limit, but that of daylight, whose limit is an edge', () => {
  expect(closeBand('meanWind', { unit: 'm/s', limit: 6, sheetBand: undefined })).toBe(0.5);
  expect(closeBand('meanWind', { unit: 'm/s', limit: 1.6, sheetBand: undefined })).toBe(0.4);
  expect(closeBand('ridgeLift', { unit: 'm/s', limit: -1, sheetBand: undefined })).toBe(0.25);
  expect(closeBand('storm', { unit: 'J/kg', limit: 0, sheetBand: undefined })).toBe(0);
  expect(closeBand('daylight', { unit: 'min', limit: 0, sheetBand: undefined })).toBe(15);
});

test('the sheet has the last word on a band, nothing of it included', () => {
  expect(closeBand('arrival', { unit: 'm', limit: 0, sheetBand: 5 })).toBe(5);
  expect(closeBand('meanWind', { unit: 'm/s', limit: 6, sheetBand: 0 })).toBe(0);
  expect(closeBand('daylight', { unit: 'min', limit: 0, sheetBand: 40 })).toBe(40);
});
