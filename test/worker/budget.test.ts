// What a club's morning costs: calls an invocation and queue operations a day, against what a free plan gives.
import { env } from 'cloudflare:workers';
import { expect, test } from 'vitest';
import { planDue } from '../../worker/morning/due.ts';
import { clubDay } from './support/club-day.ts';
import { newHouse } from './support/house.ts';

test('20 sites and 500 subscribers, 50 of them with a wing of their own: at most 50 calls an invocation, under 10,000 queue operations a day', { timeout: 300_000 }, async () => {
  const { count, house } = await clubDay({ sites: 20, subscribers: 500, personalWings: 50 });
  const rows = await env.DB.prepare(`SELECT state, COUNT(*) AS n FROM outbox WHERE due_local_date >= '2027-05-14' GROUP BY state`).all<{ state: string; n: number }>();
  expect(rows.results).toEqual([{ state: 'sent', n: 500 }]);
  expect(house.posts).toHaveLength(500);
  console.log(`${count.invocations} invocations, at most ${count.most.calls} calls in one (${count.most.where}); ${count.messages} messages, ${count.messages * 3} queue operations; the last of each half hour handed over within ${count.lateMin} min`);
  expect(count.most.calls).toBeLessThanOrEqual(50);
  expect(count.messages * 3).toBeLessThan(10_000);
  expect(count.lateMin).toBeLessThanOrEqual(5);
});

test('a hundred thousand messages are planned in one go', { timeout: 180_000 }, async () => {
  const house = await newHouse({ nowIso: '2027-05-14T04:00:00Z' });
  await house.seed([{ id: 'first', sites: ['north'], urls: ['http://127.0.0.1:9/x'], dueIso: '2027-05-14T04:00:00Z' }]);
  const numbers = 'WITH RECURSIVE n(i) AS (SELECT 1 UNION ALL SELECT i + 1 FROM n WHERE i < 99999)';
  const columns = async (table: string): Promise<string> => {
    const rows = await env.DB.prepare('SELECT name FROM pragma_table_info(?)').bind(table).all<{ name: string }>();
    return rows.results.map(({ name }) => name).join(', ');
  };
  // Each as the first one, under its own id.
  for (const [table, id, own] of [['subscription', 'id', `'s' || i`], ['channel', 'subscription_id', `'s' || i`], ['subscription_site', 'subscription_id', `'s' || i`]] as const) {
    const all = await columns(table);
    const values = all.split(', ').map((name) => (name === id ? own : table === 'channel' && name === 'id' ? `'c' || i` : name)).join(', ');
    await env.DB.prepare(`INSERT INTO ${table} (${all}) ${numbers} SELECT ${values} FROM n, ${table} AS one WHERE one.${id} = 'first'`).run();
  }
  const begunMs = Date.now();
  const planned = await planDue(house.services(), house.nowMs);
  const tookMs = Date.now() - begunMs;
  expect(planned).toMatchObject({ groups: 1, assessments: 1 });
  expect((await env.DB.prepare(`SELECT COUNT(*) AS n FROM outbox WHERE state = 'pending'`).first<{ n: number }>())!.n).toBe(100_000);
  console.log(`100,000 messages planned in ${tookMs} ms`);
  // One second on a machine with nothing else to do; this only tells a statement from a loop.
  expect(tookMs).toBeLessThan(20_000);
});
