// What `npm run plan` says of a small club, held against a day of one that is counted here.
import { expect, test } from 'vitest';
import figures from '../../config/running-costs.json' with { type: 'json' };
import { needsOf } from '../../worker/local/running-costs/model.ts';
import { clubDay } from './support/club-day.ts';

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
