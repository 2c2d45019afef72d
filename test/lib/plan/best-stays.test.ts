import { describe, expect, test } from 'vitest';
import { bestStays } from '../../../lib/plan/best-stays.ts';
import { objectiveOf } from '../../../lib/plan/puzzle.ts';
import { bruteForce, isLawful } from './brute-force.ts';
import { randomPuzzle } from './random-puzzle.ts';

describe('against brute force', () => {
  test('on 500 random small days the objective is the same, and the plan keeps every rule', () => {
    const placed = new Map<number, number>();
    for (let seed = 1; seed <= 500; seed += 1) {
      const groups = 1 + (seed % 3);
      const puzzle = randomPuzzle(seed, { groups, sites: 1 + (seed % 4 === 0 ? 1 : 2) % 3, slots: groups === 3 ? 4 : 5, wish: groups === 3 ? 3 : 4 });
      const best = bestStays(puzzle);
      expect(best.objective, `seed ${seed}`).toEqual(bruteForce(puzzle));
      expect(objectiveOf(puzzle, best.stays)).toEqual(best.objective);
      expect(isLawful(puzzle, best.stays), `seed ${seed}`).toBe(true);
      expect(best.proven).toBe(true);
      placed.set(best.objective.placed, (placed.get(best.objective.placed) ?? 0) + 1);
    }
    // The days are of every kind: some place nobody, some everybody.
    for (const count of [0, 1, 2, 3]) expect(placed.get(count) ?? 0, `${count} placed`).toBeGreaterThan(20);
  });
});
