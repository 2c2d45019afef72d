// Weights as the service's own tests have them, and a plan that keeps inside its buckets.
import { describe, expect, test } from 'vitest';
import { createHost } from '../../../worker/sources/host.ts';
import { forgetful } from '../../../worker/sources/order.ts';
import { FREE_QUOTA, parseUsage, requestWeight, schedule } from '../../../worker/sources/quota.ts';
import { planRequests } from '../../../worker/sources/request-plan.ts';
import { order } from './pipeline.ts';

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

describe('a host with a quota', () => {
  const t0 = Date.parse('2027-05-14T02:40:30Z');
  const quota = { perMinute: 10, perHour: 15, perDay: 100 };
  const make = () => {
    const kept = forgetful();
    const world = { nowMs: t0, calls: 0 };
    const outside = { fetch: () => (world.calls++, Promise.resolve(Response.json({}))), now: () => world.nowMs, local: false, ...kept };
    const host = () => createHost('https://a.example', outside, { name: 'quota:a', quota });
    const ask = async (weight: number) => {
      const answer = await host().ask({ path: '/', weight });
      return answer.ok || answer.error;
    };
    return { world, ask };
  };

  test('counts over invocations, refuses what would overflow without asking, and says when to come back', async () => {
    const { world, ask } = make();
    expect(await ask(6)).toBe(true);
    expect(await ask(4)).toBe(true);
    expect(await ask(1)).toEqual({ kind: 'rate-limited', retryAfterS: 30 });
    expect(world.calls).toBe(2);
    world.nowMs += 30_000;
    expect(await ask(5)).toBe(true);
    expect(await ask(1)).toEqual({ kind: 'rate-limited', retryAfterS: 19 * 60 });
    world.nowMs = Date.parse('2027-05-14T03:00:00Z');
    expect(await ask(1)).toBe(true);
  });

  test('what weighs nothing always passes, and its own refusals do not open the breaker', async () => {
    const { ask } = make();
    expect(await ask(12)).toBe(true);
    for (let i = 0; i < 9; i += 1) expect(await ask(1)).toMatchObject({ kind: 'rate-limited' });
    expect(await ask(0)).toBe(true);
  });

  test.each([null, 'x', '[1,"2"]', '{"a":"b"}'])('a usage of %j is none', (body) => {
    expect(Object.values(parseUsage(body)).filter((value) => typeof value !== 'number')).toEqual([]);
  });
});

describe('npm run quota', () => {
  test('two hundred sites fit into a morning that begins two hours before the first brief', () => {
    const fromMs = Date.parse('2027-05-14T03:00:00Z');
    for (const place of [{ latDeg: 47.26, lonDeg: 11.44 }, { latDeg: 60.1, lonDeg: 9.1 }, { latDeg: 40.2, lonDeg: -111.7 }, { latDeg: -33.4, lonDeg: -70.6 }]) {
      const plan = planRequests(order, { sites: 200, place, sitesPerRequest: 8, sitesWithStep: 200, fromMs, quota: FREE_QUOTA, gapMs: 2000 });
      expect(plan.totalWeight).toBeLessThan(10_000);
      expect(plan.requests.at(-1)!.atMs).toBeLessThan(fromMs + 2 * 3_600_000);
      expect(plan.requests.reduce((sum, { request }) => sum + request.weight, 0)).toBeCloseTo(plan.totalWeight, 6);
    }
  });
});
