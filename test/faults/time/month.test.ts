import { expect, test } from 'vitest';
import { simulate } from '../../support/year.ts';

test('a month with both ends of winter time in it: nobody is left in silence while one call in ten fails', { timeout: 600_000 }, async () => {
  const { violations, ...counts } = await simulate({ from: '2028-03-08', days: 30, seed: 5 });
  console.log(JSON.stringify(counts));
  expect(violations).toEqual([]);
  expect(counts.mornings).toBe(360);
  expect(counts.faults).toBeGreaterThan(counts.calls / 12);
  expect(counts.lateShare).toBeLessThan(0.01);
  expect(counts.changes).toBeGreaterThan(0);
});
