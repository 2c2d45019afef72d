// The statements of change notices on a real D1; what they are for is told in test/faults/time/change.test.ts.
import { env } from 'cloudflare:workers';
import { expect, test } from 'vitest';
import { newHouse } from './support/house.ts';
import { judgedAs } from './support/stand-ins.ts';

test('what was told within and is judged beyond an hour later is told anew, once', { timeout: 60_000 }, async () => {
  const house = await newHouse({ nowIso: '2027-05-14T04:00:00Z', judge: (input) => judgedAs(input, input.issuedAt < '2027-05-14T05:00:00Z' ? 'within' : 'beyond') });
  await house.seed([{ id: 'ana', sites: ['north', 'south'], urls: ['http://127.0.0.1:9/ana'], dueIso: '2027-05-14T04:00:00Z' }]);
  await house.minute();
  for (const at of ['05:10', '05:11', '05:12', '06:10', '06:11']) {
    house.nowMs = Date.parse(`2027-05-14T${at}:00Z`);
    await house.minute();
  }
  const said = house.posts.map((post) => JSON.parse(post.body) as { type: string; data: { title: string } });
  expect(said.map(({ type }) => type)).toEqual(['brief.issued', 'brief.changed']);
  expect(said[1]!.data.title).toMatch(/^Worse: beyond a limit at 2 sites/);
  const rows = await env.DB.prepare('SELECT kind, seq, state FROM outbox ORDER BY seq').all();
  expect(rows.results).toEqual([{ kind: 'brief', seq: 1, state: 'sent' }, { kind: 'change', seq: 2, state: 'sent' }]);
});
