// The n-th-operation sweep on D1 itself, in the way that tries it most: every call of a morning in turn is carried out, and
// its answer lost. In every other way: test/faults/delivery/sweep.
import { beforeEach, expect, test, vi } from 'vitest';
import { Faults, type Kind } from './support/faults.ts';
import { newHouse, type House } from './support/house.ts';
import { oracles } from './support/oracles.ts';
import { EXPECTED, LEAST_CALLS, MORNING_AT, morningUnder } from './support/swept-morning.ts';

// What the house says about faults that the test has made is of no interest to who reads the tests.
beforeEach(() => { vi.spyOn(console, 'error').mockImplementation(() => undefined); });

async function morningWith(faults: Faults): Promise<House> {
  const house = await newHouse({ nowIso: MORNING_AT });
  await morningUnder(house, faults, async () => (await house.outbox()).map(({ state }) => state));
  return house;
}

async function wrongAfter(house: House, faults: Faults): Promise<string[]> {
  const wrong = await oracles(house, EXPECTED);
  return wrong.map((text) => `${faults.kind} call ${faults.at}, ${faults.mode}: ${text}`);
}

test.each<Kind>(['db', 'fetch', 'queue'])('F32: the answer of any %s call of a morning is lost, and nothing else is', { timeout: 240_000 }, async (kind) => {
  const wrong: string[] = [];
  let cases = 0;
  for (let at = 1; ; at += 1) {
    const faults = new Faults(kind, at, 'after');
    const house = await morningWith(faults);
    if (!faults.isHit) break;
    cases += 1;
    wrong.push(...(await wrongAfter(house, faults)));
  }
  expect(wrong).toEqual([]);
  expect(cases).toBeGreaterThanOrEqual(LEAST_CALLS[kind]);
});
