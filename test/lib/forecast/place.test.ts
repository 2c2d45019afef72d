import { expect, test } from 'vitest';
import { gridDistanceM, MAX_GRID_DISTANCE_M } from '../../../lib/forecast/place.ts';

test('the farthest a point can lie from the middle of its 0.25 degree cell is inside the tolerance, two cells are not', () => {
  const corner = gridDistanceM({ lonDeg: 0.125, latDeg: 0.125 }, { lonDeg: 0, latDeg: 0 }) ?? NaN;
  expect(corner).toBeGreaterThan(19_600);
  expect(corner).toBeLessThan(MAX_GRID_DISTANCE_M);
  expect(gridDistanceM({ lonDeg: 11, latDeg: 47 }, { lonDeg: 11, latDeg: 47.25 })).toBeGreaterThan(MAX_GRID_DISTANCE_M);
});

test('A46: swapped coordinates are far away', () => {
  expect(gridDistanceM({ lonDeg: 11.4, latDeg: 47.3 }, { lonDeg: 47.3, latDeg: 11.4 })).toBeGreaterThan(5_000_000);
});

test('across the date line the distance is the short one', () => {
  expect(gridDistanceM({ lonDeg: 179.99, latDeg: -17 }, { lonDeg: -179.99, latDeg: -17 })).toBeLessThan(2200);
});

test.each([
  [{ lonDeg: NaN, latDeg: 47 }],
  [{ lonDeg: 11, latDeg: 91 }],
  [{ lonDeg: 181, latDeg: 47 }],
  [{ lonDeg: Infinity, latDeg: 47 }],
])('%j is no place', (place) => {
  expect(gridDistanceM({ lonDeg: 11, latDeg: 47 }, place)).toBeNull();
});
