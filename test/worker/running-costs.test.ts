// What `npm run plan` says of a small club, held against a day of one that is counted here.
import { expect, test } from 'vitest';
import figures from '../../config/running-costs.json' with { type: 'json' };
import { needsOf } from '../../worker/local/running-costs/model.ts';
import { tick } from '../../worker/morning/tick.ts';
import { clubDay, Meter } from './support/club-day.ts';
import { newHouse } from './support/house.ts';

test('the needs of 5 sites and 100 subscribers are those that a counted day has, within a quarter', { timeout: 180_000 }, async () => {
  const { count } = await clubDay({ sites: 5, subscribers: 100, personalWings: 0 });
  const needs = needsOf(figures.counts, { sites: 5, subscribers: 100, ownWings: 0, pageViewsPerSubscriber: 0 });
  const shares = {
    invocations: needs.invocations / count.invocations,
    queueOperations: needs.queueOperations / (count.messages * 3),
    rowsRead: needs.rowsRead / count.rowsRead,
    rowsWritten: needs.rowsWritten / count.rowsWritten,
    storedBytes: needs.storedBytes / count.storedBytes,
    refreshes: figures.counts.refreshesADay / (count.siteFetches / 5),
  };
  console.log(`said against counted: ${Object.entries(shares).map(([name, share]) => `${name} ${share.toFixed(2)}`).join(', ')}`);
  for (const [name, share] of Object.entries(shares)) expect(Math.abs(share - 1), name).toBeLessThan(0.25);
  expect(count.most.calls).toBeLessThanOrEqual(figures.counts.mostCalls);
});

/** Rows that the database says it has read for the first fetch, judged site-day and handful of messages of a morning, while all other sites still wait. */
async function rowsOfFirstSteps(sites: number): Promise<Readonly<Record<'fetch' | 'assess' | 'deliver', number>>> {
  const meter = new Meter();
  const house = await newHouse({ nowIso: '2027-05-14T04:00:00Z', around: (d1) => meter.around(d1) });
  const names = Array.from({ length: sites }, (_, index) => `site-${index}`);
  await house.seed(names.flatMap((site) => ['a', 'b', 'c'].map((who) => ({ id: `${site}-${who}`, sites: [site], urls: [`http://127.0.0.1:9/${site}-${who}`], dueIso: '2027-05-14T04:00:00Z' }))));
  await tick(house.services(), house.nowMs);
  const readBy = async (step: 'fetch' | 'assess' | 'deliver'): Promise<number> => {
    const before = meter.rowsRead;
    await house.answer(step);
    return meter.rowsRead - before;
  };
  const counts = { fetch: await readBy('fetch'), assess: await readBy('assess'), deliver: await readBy('deliver') };
  expect(house.posts).toHaveLength(3);
  return counts;
}

test('a step of the morning reads as many rows among 80 sites as among 10', { timeout: 120_000 }, async () => {
  const few = await rowsOfFirstSteps(10);
  const many = await rowsOfFirstSteps(80);
  console.log(`rows read by the first fetch, assessment and delivery: ${Object.values(few).join(', ')} of 10 sites; ${Object.values(many).join(', ')} of 80`);
  expect(many).toEqual(few);
});
