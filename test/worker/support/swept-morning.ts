// A morning of two people in which one call fails: what the sweeps on D1 itself and in Node have in common.
import type { Faults } from './faults.ts';

const SIX = '2027-05-14T04:00:00Z';
const hook = (name: string): string => `http://127.0.0.1:9/${name}`;

export const MORNING_AT = SIX;
const PEOPLE = [
  { id: 'ana', sites: ['north', 'south'], urls: [hook('ana')], dueIso: SIX },
  { id: 'ben', sites: ['south'], urls: [hook('ben')], dueIso: SIX },
];
/** One fault has at most what was side by side in flight: two messages, which may come once more each. */
export const EXPECTED = { told: { ana: 5, ben: 5 }, dueIso: SIX, verdict: 'within', repeats: 2, books: { sent: PEOPLE.length } } as const;
/** So many calls of each kind a morning has at least: a sweep that finds fewer has swept nothing. */
export const LEAST_CALLS = { db: 30, fetch: 2, queue: 3 } as const;

interface SweptHouse<Options> {
  options: Options;
  nowMs: number;
  seed(people: typeof PEOPLE): Promise<unknown>;
  minute(): Promise<unknown>;
  answerAll(): Promise<unknown>;
}

/** The platform goes on calling, and forgets calls that failed, as the harsher of the two does. */
export async function morningUnder<Options>(house: SweptHouse<Options>, faults: Faults, states: () => Promise<readonly string[]>): Promise<void> {
  await house.seed(PEOPLE);
  house.options = { ...house.options, faults };
  for (let minute = 0; minute < 10; minute += 1) {
    const isWell = await house.minute().then(() => true, () => false);
    // A tick that fails is a tick that the platform reports; the next one comes anyway.
    if (!isWell) await house.answerAll().catch(() => undefined);
    house.nowMs += 60_000;
    const now = await states();
    if (isWell && now.length === PEOPLE.length && !now.includes('pending')) break;
  }
}
