// The n-th-operation sweep (F31, F32, F34, F42, F43, F54, F64, F72): a whole morning in which one call fails, for every call
// there is and in every way it can. On D1 itself, in fewer ways, in test/worker/delivery-sweep.
import { beforeEach, describe, expect, test, vi } from 'vitest';
import { health } from '../../../worker/routes/health.ts';
import { FastHouse } from '../../support/fast-house.ts';
import { oraclesOf, toldByWebhook } from '../../support/oracles.ts';
import { EXPECTED, LEAST_CALLS, MORNING_AT, morningUnder } from '../../worker/support/swept-morning.ts';
import { Faults, MODES, type Kind, type Mode } from '../../worker/support/faults.ts';

// What the house says about faults that the test has made is of no interest to who reads the tests.
beforeEach(() => { vi.spyOn(console, 'error').mockImplementation(() => undefined); });

async function morningWith(faults: Faults): Promise<FastHouse> {
  const house = new FastHouse({ nowIso: MORNING_AT });
  await morningUnder(house, faults, () => Promise.resolve(house.rows().map(({ state }) => state)));
  return house;
}

async function wrongAfter(house: FastHouse, faults: Faults): Promise<string[]> {
  const told = house.posts.map((post) => toldByWebhook({ ...post, taken: true }, post.data));
  const { faults: _, ...options } = house.options;
  house.options = options;
  const wrong = await oraclesOf(
    { told, health: async () => (await health(house.services())).json(), ask: <Row>(sql: string) => Promise.resolve(house.d1.ask<Row>(sql)) },
    EXPECTED,
  );
  return wrong.map((text) => `${faults.kind} call ${faults.at}, ${faults.mode}: ${text}`);
}

describe.each<[string, Kind]>([['F31, F32, F34, F54', 'db'], ['F42, F64, F72', 'fetch'], ['F43, F44', 'queue']])('%s: every %s call of a morning', (_, kind) => {
  test.each<Mode>(MODES.map((mode) => mode))('fails in the way "%s", and nothing is lost', { timeout: 240_000 }, async (mode) => {
    const wrong: string[] = [];
    let cases = 0;
    for (let at = 1; ; at += 1) {
      const faults = new Faults(kind, at, mode);
      const house = await morningWith(faults);
      if (!faults.isHit) break;
      cases += 1;
      wrong.push(...(await wrongAfter(house, faults)));
      house.d1.close();
    }
    expect(wrong).toEqual([]);
    expect(cases).toBeGreaterThanOrEqual(LEAST_CALLS[kind]);
  });
});
