// A law is a statement of the trade that holds for every case. Each is tried on LAW_RUNS random cases (1,000) from LAW_SEED;
// fast-check repeats the seed, and the path to the smallest case, when one breaks.
import fc from 'fast-check';
import { afterAll, test } from 'vitest';

export const RUNS = Number(process.env['LAW_RUNS'] ?? 1000);
const SEED = Number(process.env['LAW_SEED'] ?? 20_270_514);

/** Two busy cores are slow: what a law may take grows with the cases asked for. */
const LIMIT_MS = 60_000 + 60 * RUNS;

export function law<Case extends readonly unknown[]>(
  statement: string, given: { [K in keyof Case]: fc.Arbitrary<Case[K]> }, holds: (...each: Case) => void,
): void {
  const property = fc.property(fc.tuple(...given), (each) => {
    holds(...(each as unknown as Case));
  });
  test(statement, { timeout: LIMIT_MS }, () => fc.assert(property, { numRuns: RUNS, seed: SEED }));
}

/** Says after a file of laws on how many cases they were tried, and from which seed to try the same again. */
export function tellSeed(): void {
  afterAll(() => console.log(`laws tried on ${RUNS} cases each, LAW_SEED=${SEED}`));
}

/** Any number of a range, the ends included. */
export function from(min: number, max: number): fc.Arbitrary<number> {
  return fc.double({ min, max, noNaN: true });
}

export const direction = from(0, 360);
