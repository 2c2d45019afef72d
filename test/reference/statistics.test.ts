// The spread of an ensemble.
import { expect, test } from 'vitest';
import { quantile } from '../../lib/numeric/quantile.ts';
import { holds } from './holds.ts';
import { statistics } from './tables/statistics.ts';

holds(statistics);

test('one member is every quantile of itself, no member has none', () => {
  expect([quantile([3], 0.1), quantile([3], 0.5), quantile([3], 0.9)]).toEqual([3, 3, 3]);
  expect(quantile([], 0.5)).toBeNaN();
});

test('a quantile does not depend on the order of the members', () => {
  expect(quantile([9, 1, 5, 3], 0.25)).toBe(quantile([1, 3, 5, 9], 0.25));
});
