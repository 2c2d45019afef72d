// NOAA/NCEI WMM2025 test values: https://www.ncei.noaa.gov, file WMM2025_TEST_VALUES.txt, rows as transcribed in
// boxpet/pygeomag test/test_values @2b8ac57; degrees, printed to 0.01. Natick: MathWorks, wrldmagm example, to 0.0001.
import { describe, expect, test } from 'vitest';
import { declinationDeg } from '../../lib/sky/declination.ts';

// row, decimal year, km above the ellipsoid, latitude, longitude, declination
const rows = [
  [0, 2025.0, 28, 89, -121, -99.77],
  [3, 2025.0, 65, 43, 93, 0.5],
  [4, 2025.0, 51, -33, 109, -5.49],
  [7, 2025.0, 94, -29, -110, 15.74],
  [18, 2025.5, 44, 33, -118, 11.1],
  [22, 2026.0, 69, 23, 63, 1.17],
  [30, 2026.5, 14, 0, 80, -3.1],
  [33, 2026.5, 43, 17, 52, 1.19],
] as const;

function instantOf(decimalYear: number): number {
  const year = Math.floor(decimalYear);
  return Date.UTC(year) + (decimalYear - year) * (Date.UTC(year + 1) - Date.UTC(year));
}

describe('the WMM2025 test values', () => {
  test.each(rows)('row %i', (_row, decimalYear, km, latDeg, lonDeg, expected) => {
    const found = declinationDeg({ lonDeg, latDeg, elevationM: km * 1000, atMs: instantOf(decimalYear) });
    expect(Math.abs((found.ok ? found.value : NaN) - expected)).toBeLessThanOrEqual(0.005001);
  });

  test('are eight', () => {
    expect(rows).toHaveLength(8);
  });

  test('Natick on 4 July 2028: -13.6891°', () => {
    const found = declinationDeg({ lonDeg: -71.35, latDeg: 42.283, elevationM: 1000, atMs: Date.UTC(2028, 6, 4) });
    expect(Math.abs((found.ok ? found.value : NaN) - -13.6891)).toBeLessThan(0.002);
  });
});

describe('outside the years of the model', () => {
  const place = { lonDeg: 11, latDeg: 46, elevationM: 1000 };

  test.each([Date.UTC(2014, 0, 1), Date.UTC(2031, 0, 1), NaN])('there is no declination at %d', (atMs) => {
    expect(declinationDeg({ ...place, atMs }).ok).toBe(false);
  });

  test('the reason names the years', () => {
    const found = declinationDeg({ ...place, atMs: Date.UTC(2031, 0, 1) });
    expect(found.ok ? '' : found.error.reason).toBe('the magnetic model covers 2014-12-15 to 2029-11-13, not 2031-01-01');
  });
});
