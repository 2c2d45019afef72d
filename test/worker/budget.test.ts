// What a club's morning costs: calls an invocation and queue operations a day, against what a free plan gives.
import { env } from 'cloudflare:workers';
import { expect, test } from 'vitest';
import { planDue } from '../../worker/morning/due.ts';
import { tick } from '../../worker/morning/tick.ts';
import { newHouse } from './support/house.ts';
import { judgedAs } from './support/stand-ins.ts';

test('20 sites and 500 subscribers, 50 of them with a wing of their own: at most 50 calls an invocation, under 10,000 queue operations a day', { timeout: 180_000 }, async () => {
  const house = await newHouse({ nowIso: '2027-05-14T02:00:00Z', judge: (input) => judgedAs(input, 'close') });
  const sites = Array.from({ length: 20 }, (_, index) => `site-${index}`);
  const subscribers = Array.from({ length: 500 }, (_, index) => ({
    id: `s${index}`,
    sites: [sites[index % 20]!, sites[(index * 7 + 3) % 20]!],
    urls: [`http://127.0.0.1:${9000 + index}/hook`],
    // Chosen times cluster on the hour and the half hour.
    deliverMinute: 300 + (index % 5) * 30,
    dueIso: new Date(Date.parse('2027-05-14T03:00:00Z') + (index % 5) * 30 * 60_000).toISOString(),
    ...(index < 50 ? { wing: `own-${index}` } : {}),
  }));
  await house.seed(subscribers, sites);
  const { stores } = house.services();
  await stores.db.together(stores.published.replaceAll(sites.map((siteId) => ({ siteId, wingKey: 'EN B', sheetId: 'hill' }))));

  let most = { calls: 0, where: '' };
  let messages = 0;
  let invocations = 0;
  const counted = async (where: string, work: () => Promise<void>): Promise<void> => {
    house.calls = { db: 0, fetch: 0, queue: 0 };
    const before = house.queue.length;
    await work();
    invocations += 1;
    const calls = house.calls.db + house.calls.fetch + house.calls.queue;
    if (calls > most.calls) most = { calls, where };
    messages += Math.max(0, house.queue.length - before);
  };
  // Four hours of minutes around the morning, then the rest of the day at the board's own pace.
  for (let minute = 0; minute < 4 * 60; minute += 1) {
    const services = house.services();
    await counted('tick', () => tick(services, house.nowMs));
    for (let step = house.queue.shift(); step !== undefined; step = house.queue.shift()) {
      const next = step;
      await counted(next, () => house.answer(next));
    }
    house.nowMs += 60_000;
  }
  for (let hour = 0; hour < 20; hour += 1) {
    house.nowMs = Date.parse('2027-05-14T06:07:00Z') + hour * 3_600_000;
    const services = house.services();
    await counted('tick', () => tick(services, house.nowMs));
    for (let step = house.queue.shift(); step !== undefined; step = house.queue.shift()) {
      const next = step;
      await counted(next, () => house.answer(next));
    }
  }
  const rows = await env.DB.prepare('SELECT state, COUNT(*) AS n FROM outbox GROUP BY state').all<{ state: string; n: number }>();
  expect(rows.results).toEqual([{ state: 'sent', n: 500 }]);
  expect(house.posts).toHaveLength(500);
  const lateMin = Math.max(...house.posts.map((post) => (post.atMs % 1_800_000) / 60_000));
  console.log(`${invocations} invocations, at most ${most.calls} calls in one (${most.where}); ${messages} messages, ${messages * 3} queue operations; the last of each half hour handed over within ${lateMin} min`);
  expect(most.calls).toBeLessThanOrEqual(50);
  expect(messages * 3).toBeLessThan(10_000);
  expect(lateMin).toBeLessThanOrEqual(5);
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
