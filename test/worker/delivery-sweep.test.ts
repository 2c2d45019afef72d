// The n-th-operation sweep on D1 itself, in the way that tries it most: every call of a morning in turn is carried out, and
// its answer lost. In every other way: test/faults/delivery/sweep.
import { beforeEach, expect, test, vi } from 'vitest';
import { Faults, type Kind } from './support/faults.ts';
import { newHouse, type House } from './support/house.ts';
import { oracles } from './support/oracles.ts';

// What the house says about faults that the test has made is of no interest to who reads the tests.
beforeEach(() => { vi.spyOn(console, 'error').mockImplementation(() => undefined); });

const six = '2027-05-14T04:00:00Z';
const hook = (name: string): string => `http://127.0.0.1:9/${name}`;
const subscribers = [
  { id: 'ana', sites: ['north', 'south'], urls: [hook('ana')], dueIso: six },
  { id: 'ben', sites: ['south'], urls: [hook('ben')], dueIso: six },
];

/** One morning with one fault: the platform goes on calling, and forgets calls that failed, as the harsher of the two does. */
async function morningWith(faults: Faults): Promise<House> {
  const house = await newHouse({ nowIso: six });
  await house.seed(subscribers);
  house.options = { ...house.options, faults };
  for (let minute = 0; minute < 10; minute += 1) {
    const isWell = await house.minute().then(() => true, () => false);
    // A tick that fails is a tick that the platform reports; the next one comes anyway.
    if (!isWell) await house.answerAll().catch(() => undefined);
    house.nowMs += 60_000;
    const states = (await house.outbox()).map(({ state }) => state);
    if (isWell && states.length === subscribers.length && !states.includes('pending')) break;
  }
  return house;
}

async function wrongAfter(house: House, faults: Faults): Promise<string[]> {
  // One fault has at most what was side by side in flight: two messages, which may come once more each.
  const wrong = await oracles(house, { told: { ana: 5, ben: 5 }, dueIso: six, verdict: 'within', repeats: 2, books: { sent: 2 } });
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
  expect(cases).toBeGreaterThanOrEqual({ db: 30, fetch: 2, queue: 3 }[kind]);
});
