// Magnetic declination against the model's own test values, and outside its years.
import { describe, expect, test } from 'vitest';
import { normalDeg } from '../../lib/angles.ts';
import { declinationDeg } from '../../lib/sky/declination.ts';
import { holds } from './holds.ts';
import { declination } from './tables/declination.ts';

holds(declination);

// Definition: true = magnetic + declination, east positive. Natick's 13.69° west.
test('a compass heading of 270° under 13.69° of west declination is 256.31° true', () => {
  expect(normalDeg(270 + -13.69)).toBeCloseTo(256.31, 9);
});

describe('outside the years of the model', () => {
  const place = { lonDeg: 11, latDeg: 46, elevationM: 1000 };

  test.each([Date.UTC(2014, 0, 1), Date.UTC(2024, 10, 12), Date.UTC(2031, 0, 1), NaN])('there is no declination at %d', (atMs) => {
    expect(declinationDeg({ ...place, atMs }).ok).toBe(false);
  });

  test('the reason names the years', () => {
    const found = declinationDeg({ ...place, atMs: Date.UTC(2031, 0, 1) });
    expect(found.ok ? '' : found.error.reason).toBe('the magnetic model covers 2024-11-13 to 2029-11-13, not 2031-01-01');
  });
});
