// Weights as the service's own tests have them, and a plan that keeps inside its buckets.
import { describe, expect, test } from 'vitest';
import { FREE_QUOTA, requestWeight, schedule } from '../../../worker/sources/quota.ts';

describe('the weight of one location', () => {
  // Worked figures of reference/forecast-sources.md 1.9, from the service's source.
  test.each([
    ['59 variables of one model', { variables: 59, members: 1, days: 14 }, 5.9],
    ['4 variables of 51 members', { variables: 4, members: 51, days: 7 }, 20.4],
    ['2 variables of 20 members', { variables: 2, members: 20, days: 2 }, 4],
    ['one variable costs one', { variables: 1, members: 1, days: 2 }, 1],
    ['ten variables for 28 days count twice', { variables: 10, members: 1, days: 28 }, 2],
  ])('%s', (_, request, weight) => {
    expect(requestWeight(request)).toBeCloseTo(weight, 9);
  });
});

describe('the plan', () => {
  const fromMs = Date.parse('2027-05-14T02:07:30Z');
  const plan = (weights: readonly number[], quota = FREE_QUOTA) => schedule(weights.map((weight) => ({ weight })), { fromMs, quota, gapMs: 1000 });
  const clock = (ms: number) => new Date(ms).toISOString().slice(11, 19);

  test('goes on in the next minute when this one is full', () => {
    expect(plan([300, 300, 1, 599, 1]).map(({ atMs }) => clock(atMs))).toEqual(['02:07:30', '02:07:31', '02:08:00', '02:08:01', '02:09:00']);
  });

  test('a request heavier than a whole minute goes at the start of an empty one, alone', () => {
    expect(plan([10, 612, 10]).map(({ atMs }) => clock(atMs))).toEqual(['02:07:30', '02:08:00', '02:09:00']);
  });

  test('no bucket of any plan is overfull', () => {
    let seed = 7;
    const next = () => (seed = (seed * 48_271) % 2_147_483_647) / 2_147_483_647;
    for (let round = 0; round < 50; round += 1) {
      const planned = plan(Array.from({ length: 120 }, () => 1 + Math.floor(next() * 200)));
      for (const [lengthMs, most] of [[60_000, 600], [3_600_000, 5000], [86_400_000, 10_000]] as const) {
        const used = new Map<number, number>();
        for (const { atMs, request } of planned) used.set(Math.floor(atMs / lengthMs), (used.get(Math.floor(atMs / lengthMs)) ?? 0) + request.weight);
        expect(Math.max(...used.values())).toBeLessThanOrEqual(most);
      }
      expect(planned.map(({ atMs }) => atMs)).toEqual(planned.map(({ atMs }) => atMs).sort((a, b) => a - b));
    }
  });

  test('waits for the next hour and the next day', () => {
    const many = plan(Array.from({ length: 60 }, () => 200));
    expect(clock(many[25]!.atMs)).toBe('03:00:00');
    expect(new Date(many[50]!.atMs).toISOString()).toBe('2027-05-15T00:00:00.000Z');
  });
});
