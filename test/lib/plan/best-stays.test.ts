import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { bestStays } from '../../../lib/plan/best-stays.ts';
import { objectiveOf } from '../../../lib/plan/puzzle.ts';
import { mostUsed } from '../../../lib/plan/staffed-hours.ts';
import { bruteForce, isLawful } from './brute-force.ts';
import { randomPuzzle } from './random-puzzle.ts';

describe('against brute force', () => {
  test('on 500 random small days the objective is the same, and the plan keeps every rule', () => {
    const placed = new Map<number, number>();
    for (let seed = 1; seed <= 500; seed += 1) {
      const groups = 1 + (seed % 3);
      const puzzle = randomPuzzle(seed, { groups, sites: seed % 4 === 0 ? 2 : 3, slots: groups === 3 ? 4 : 5, wish: groups === 3 ? 3 : 4 });
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

describe('with too few instructors', () => {
  test('on 200 random small days, half of those that are needed, it is the same as brute force too', () => {
    for (let seed = 1001; seed <= 1200; seed += 1) {
      const { groups, ...rest } = randomPuzzle(seed, { groups: 3, sites: 2, slots: 4, wish: 3 });
      const needy = groups.map((group, index) => ({ ...group, instructors: 1 + ((seed + index) % 3) }));
      const puzzle = { ...rest, groups: needy, instructors: Math.ceil(needy.reduce((sum, { instructors }) => sum + instructors, 0) / 2) };
      const best = bestStays(puzzle);
      expect(best.objective, `seed ${seed}`).toEqual(bruteForce(puzzle));
      expect(isLawful(puzzle, best.stays), `seed ${seed}`).toBe(true);
    }
  });

  test('what can be used of them is the largest sum of needs that there is', () => {
    fc.assert(fc.property(fc.array(fc.integer({ min: 0, max: 9 }), { maxLength: 7 }), fc.integer({ min: 0, max: 40 }), (needs, left) => {
      const sums = Array.from({ length: 2 ** needs.length }, (_, chosen) => needs.reduce((sum, need, index) => sum + ((chosen & (1 << index)) === 0 ? 0 : need), 0));
      // Above thirty it may say what there is: a bound that is no less than the truth.
      const truth = Math.max(...sums.filter((sum) => sum <= left));
      if (left <= 30) expect(mostUsed(needs, left)).toBe(truth);
      else expect(mostUsed(needs, left)).toBeGreaterThanOrEqual(truth);
    }));
  });
});

describe('the work', () => {
  test('8 groups, 6 sites, 12 hours: few ways are tried, and a search that runs out says so', () => {
    const nodes: number[] = [];
    let unproven = 0;
    for (let seed = 1; seed <= 40; seed += 1) {
      const best = bestStays(randomPuzzle(seed * 7919, { groups: 8, sites: 6, slots: 12, wish: 4 }), 20_000);
      nodes.push(best.nodes);
      if (!best.proven) unproven += 1;
    }
    nodes.sort((a, b) => a - b);
    expect(nodes[20]).toBeLessThan(100);
    expect(nodes[36]).toBeLessThan(2_000);
    expect(unproven).toBeLessThanOrEqual(1);
  });

  test('out of budget there is still a plan that keeps every rule', () => {
    for (let seed = 1; seed <= 40; seed += 1) {
      const puzzle = randomPuzzle(seed * 7919, { groups: 8, sites: 6, slots: 12, wish: 6 });
      const hurried = bestStays(puzzle, 12);
      expect(isLawful(puzzle, hurried.stays), `seed ${seed}`).toBe(true);
      if (hurried.proven) expect(hurried.objective).toEqual(bestStays(puzzle).objective);
    }
  });
});
