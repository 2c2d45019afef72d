// Requests at random: no crash, no half-stored row. `npm run prove -- fuzz` tries 200,000 of each kind.
import { expect, test } from 'vitest';
import { BODIES, CONFIGS, fuzz } from '../../support/fuzz.ts';

const CASES = 2500;

test.each([['bodies that people hand in', BODIES, 1], ['configurations that an operator hands in', CONFIGS, 2]] as const)('%s, two and a half thousand at random: no fault of ours, and nothing of what was refused is stored', async (_, doors, seed) => {
  const { statuses, violations } = await fuzz(doors, { cases: CASES, seed });
  expect(violations).toEqual([]);
  // Both kinds of answer are seen, or the cases prove nothing.
  expect(statuses['400']).toBeGreaterThan(CASES / 4);
  expect((statuses['200'] ?? 0) + (statuses['202'] ?? 0)).toBeGreaterThan(CASES / 50);
});
