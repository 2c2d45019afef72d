import { rmSync } from 'node:fs';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { killAgainAndAgain } from './kills.ts';
import { buildBundle, type Bundle } from './plant/bundle.ts';

let bundle: Bundle;
beforeAll(async () => { bundle = await buildBundle(); });
afterAll(() => rmSync(bundle.folder, { recursive: true, force: true }));

test('F41: twenty SIGKILLs lose nothing, and repeat no more than what was in flight', { timeout: 400_000 }, async () => {
  const seed = Date.now() % 100_000;
  const report = await killAgainAndAgain({ bundle, kills: 20, seed });
  expect(report, `seed ${seed}`).toMatchObject({ kills: 20, lost: 0, shownTwice: 0, wrong: [] });
  expect(report.mostRepeatsOfAKill, `seed ${seed}`).toBeLessThanOrEqual(6);
  expect(report.deliveries - report.repeats).toBe(21 * 24);
});
