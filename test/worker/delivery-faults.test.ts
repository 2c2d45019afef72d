// Faults of database, platform and receivers over time, by their numbers in the fault catalogue. What fails once is swept
// in delivery-sweep; what happens on the wire is in test/faults/delivery; late and doubled ticks are in morning.
import { env } from 'cloudflare:workers';
import { beforeEach, describe, expect, test, vi } from 'vitest';
import { answerCalls } from '../../worker/morning/queue.ts';
import { LEASE_MS, SEND_TIMEOUT_MS } from '../../worker/morning/times.ts';
import { tick } from '../../worker/morning/tick.ts';
import { app } from '../../worker/routes/app.ts';
import type { D1 } from '../../worker/store/database.ts';
import { callOf, newHouse, type House } from './support/house.ts';
import { oracles } from './support/oracles.ts';

vi.setConfig({ testTimeout: 60_000 });
beforeEach(() => { vi.spyOn(console, 'error').mockImplementation(() => undefined); });

const six = '2027-05-14T04:00:00Z';
const hook = (name: string): string => `http://127.0.0.1:9/${name}`;
const ana = { id: 'ana', sites: ['north'], urls: [hook('ana')], dueIso: six };
const ben = { ...ana, id: 'ben', sites: ['south'], urls: [hook('ben')] };

/** A database of which some statements fail, told by their text. */
function failing(when: (sql: string) => boolean): (d1: D1) => D1 {
  return (d1) => {
    const texts = new WeakMap<object, string>();
    const wrap = (statement: D1PreparedStatement, sql: string): D1PreparedStatement => {
      const guarded = <T>(work: () => Promise<T>): Promise<T> => (when(sql) ? Promise.reject(new Error('D1_ERROR: storage operation exceeded timeout which caused object to be reset')) : work());
      const wrapped = { bind: (...values: unknown[]) => wrap(statement.bind(...values), sql), all: () => guarded(() => statement.all()), run: () => guarded(() => statement.run()), statement } as unknown as D1PreparedStatement;
      texts.set(wrapped, sql);
      return wrapped;
    };
    return {
      prepare: (sql) => wrap(d1.prepare(sql), sql),
      batch: (statements) => {
        if (statements.some((statement) => when(texts.get(statement) ?? ''))) return Promise.reject(new Error('D1_ERROR: storage caused object to be reset'));
        return d1.batch(statements.map((statement) => (statement as unknown as { statement: D1PreparedStatement }).statement));
      },
    };
  };
}

async function minuteOrNot(house: House): Promise<void> {
  await house.minute().catch(() => undefined);
  await house.answerAll().catch(() => undefined);
}

const WATCHDOG = 'https://watchdog.example.org/ping';

describe('the database', () => {
  test('F33: lost three times, then fine: it is asked again after waits that grow, and nobody notices', async () => {
    let left = 3;
    const house = await newHouse({ nowIso: six });
    await house.seed([ana]);
    house.options = { ...house.options, around: failing(() => (left -= 1) >= 0) };
    await house.minute();
    // The waits of the door to the database, at the middle of their jitter.
    expect(house.slept.slice(0, 3)).toEqual([50, 200, 600]);
    expect(await oracles(house, { told: { ana: 0 }, dueIso: six, verdict: 'within', books: { sent: 1 } })).toEqual([]);
  });

  test('F33: a claim whose answer was lost is not made again: only what may be done twice is', async () => {
    let claims = 0;
    const house = await newHouse({ nowIso: six });
    await house.seed([ana]);
    house.options = { ...house.options, around: failing((sql) => /UPDATE outbox SET lease_until = \?1 \+/.test(sql) && (claims += 1) === 1) };
    await house.minute();
    expect(claims).toBe(1);
    house.nowMs += 60_000;
    await house.minute();
    expect(await oracles(house, { told: { ana: 1 }, dueIso: six, verdict: 'within', books: { sent: 1 } })).toEqual([]);
  });

  test('F34: a reset in a batch leaves the whole batch undone, and it is done later', async () => {
    let isDown = true;
    const house = await newHouse({ nowIso: six });
    await house.seed([ana]);
    house.options = { ...house.options, around: failing((sql) => isDown && /INSERT INTO outbox/.test(sql)) };
    await minuteOrNot(house);
    const planned = await env.DB.prepare(`SELECT (SELECT COUNT(*) FROM run WHERE step <> 'tick') AS runs, (SELECT COUNT(*) FROM outbox) AS rows_, (SELECT next_due_at FROM subscription) AS due`).first<{ runs: number; rows_: number; due: number }>();
    expect(planned).toEqual({ runs: 0, rows_: 0, due: Date.parse(six) });
    isDown = false;
    house.nowMs += 60_000;
    await house.minute();
    expect(await oracles(house, { told: { ana: 1 }, dueIso: six, verdict: 'within', books: { sent: 1 } })).toEqual([]);
  });

  test('F35: down for the whole morning: nothing is sent from memory, health says so, no watchdog is told, and the morning is made up for', async () => {
    let isDown = true;
    const house = await newHouse({ nowIso: six, env: { HEARTBEAT_URL: WATCHDOG } });
    await house.seed([ana]);
    house.options = { ...house.options, around: failing(() => isDown) };
    for (let minute = 0; minute < 20; minute += 1) {
      await minuteOrNot(house);
      house.nowMs += 60_000;
    }
    expect(house.posts).toEqual([]);
    expect((await app(house.services()).request('/healthz')).status).toBe(503);
    expect(await oracles(house, { told: {}, dueIso: six, verdict: 'within', books: {}, seen: /the database does not answer/ })).toEqual([]);
    isDown = false;
    await house.minute();
    expect((await app(house.services()).request('/healthz')).status).toBe(200);
    expect(house.posts.map(({ url }) => url).toSorted((one, other) => one.localeCompare(other))).toEqual([hook('ana'), WATCHDOG]);
    expect(await oracles(house, { told: { ana: 20 }, dueIso: six, verdict: 'within', books: { sent: 1 } })).toEqual([]);
  });

  test('F36: read-only: nothing is sent without a row that says so', async () => {
    let isReadOnly = true;
    const house = await newHouse({ nowIso: six });
    await house.seed([ana, ben]);
    const around = failing((sql) => isReadOnly && /^\s*(INSERT|UPDATE|DELETE)/i.test(sql));
    house.options = { ...house.options, around };
    await minuteOrNot(house);
    await answerCalls(house.services(), [callOf({ v: 1, step: 'deliver' })]);
    expect(await oracles(house, { told: {}, dueIso: six, verdict: 'within', books: {}, seen: /no tick for more than five minutes/ })).toEqual([]);
    // And where the rows of the morning had been written before it began.
    isReadOnly = false;
    house.nowMs += 60_000;
    await tick(house.services(), house.nowMs);
    isReadOnly = true;
    await minuteOrNot(house);
    expect(house.posts).toEqual([]);
    isReadOnly = false;
    house.nowMs += 60_000;
    await house.minute();
    expect(await oracles(house, { told: { ana: 2, ben: 2 }, dueIso: six, verdict: 'within', books: { sent: 2 } })).toEqual([]);
  });

  test('F39: a schema that is not the one of this code: nothing runs, nothing is sent, health is red', async () => {
    const house = await newHouse({ nowIso: six });
    await house.seed([ana]);
    const schema = await env.DB.prepare(`SELECT value FROM meta WHERE key = 'schema'`).first<{ value: string }>();
    await env.DB.prepare(`UPDATE meta SET value = '0' WHERE key = 'schema'`).run();
    await expect(tick(house.services(), house.nowMs)).rejects.toThrow('apply the migrations');
    expect((await app(house.services()).request('/healthz')).status).toBe(503);
    expect(await oracles(house, { told: {}, dueIso: six, verdict: 'within', books: {}, seen: /apply the migrations/ })).toEqual([]);
    await env.DB.prepare(`UPDATE meta SET value = ?1 WHERE key = 'schema'`).bind(schema!.value).run();
    house.nowMs += 60_000;
    await house.minute();
    expect(await oracles(house, { told: { ana: 1 }, dueIso: six, verdict: 'within', books: { sent: 1 } })).toEqual([]);
  });

  test.each([['null', '{"id":"hill","name":"Hill","kind":"launch","limits":{"maxMeanMps":null}}'], ['a text', '{"id":"hill","name":"Hill","kind":"launch","limits":{"maxMeanMps":"6"}}'], ['no JSON', '{']])(
    'F40: a sheet whose limit is %s: its subscribers are told that nothing can be said, others are not touched', async (_, body) => {
      const house = await newHouse({ nowIso: six });
      await house.seed([ana, ben]);
      await env.DB.batch([
        env.DB.prepare(`INSERT INTO sheet (id, version, body, stored_at) VALUES ('broken', 1, ?, 0)`).bind(body),
        env.DB.prepare(`UPDATE subscription_site SET sheet_id = 'broken' WHERE subscription_id = 'ana'`),
      ]);
      await house.minutes(12);
      expect(await oracles(house, { told: { ana: 11, ben: 0 }, dueIso: six, verdict: { ana: 'unknown', ben: 'within' }, books: { sent: 2 }, seen: /the sheet is gone or cannot be read/ })).toEqual([]);
    });
});

describe('the platform', () => {
  test('T29 F46: a wake-up call of three days ago finds nothing to do, and what is that old has expired', async () => {
    let isUp = false;
    const house = await newHouse({ nowIso: six, answer: () => new Response(null, { status: isUp ? 204 : 500 }) });
    await house.seed([ana]);
    await house.minute();
    isUp = true;
    house.posts.length = 0;
    house.nowMs += 3 * 24 * 3_600_000;
    const calls = ['fetch', 'assess', 'deliver'].map((step) => callOf({ v: 1, step }));
    await answerCalls(house.services(), calls);
    expect(calls.map((call) => call.fate())).toEqual(['acked', 'acked', 'acked']);
    expect(house.posts).toHaveLength(0);
    await house.minute();
    expect((await house.outbox()).filter((row) => row.state === 'expired')).toMatchObject([{ kind: 'brief', reason: 'not delivered before it ceased to be valid; last: the receiver answered 500' }]);
    // The two mornings between are owned up to, today's brief is a brief.
    expect(house.posts.map(({ body }) => (JSON.parse(body) as { type: string }).type).toSorted((one, other) => one.localeCompare(other))).toEqual(['brief.issued', 'brief.missed', 'brief.missed']);
    house.posts.splice(0, house.posts.length, ...house.posts.filter(({ body }) => body.includes('brief.issued')));
    expect(await oracles(house, { told: { ana: 0 }, dueIso: '2027-05-17T04:00:00Z', verdict: 'within', books: { expired: 1, sent: 3 }, seen: /"event":"ticks-absent"/ })).toEqual([]);
  });

  test('F47: a subscriber who is gone is suppressed, and the message acked', async () => {
    const house = await newHouse({ nowIso: six });
    await house.seed([ana, ben]);
    await tick(house.services(), house.nowMs);
    await house.answer('fetch');
    await house.answer('assess');
    await house.answer('assess');
    await env.DB.batch(['subscription', 'subscription_site', 'channel'].map((table) => env.DB.prepare(`DELETE FROM ${table} WHERE ${table === 'subscription' ? 'id' : 'subscription_id'} = 'ana'`)));
    const call = callOf({ v: 1, step: 'deliver' });
    await answerCalls(house.services(), [call]);
    expect(call.fate()).toBe('acked');
    await house.answerAll();
    expect(house.posts.map((post) => post.url)).toEqual([hook('ben')]);
    expect(await oracles(house, { told: { ben: 0 }, dueIso: six, verdict: 'within', books: { sent: 1, suppressed: 1 } })).toEqual([]);
  });

  test('F53: a row of a newer format is left to newer code', async () => {
    const house = await newHouse({ nowIso: six });
    await house.seed([ana, ben]);
    await tick(house.services(), house.nowMs);
    await env.DB.prepare(`UPDATE outbox SET format = format + 1 WHERE subscription_id = 'ana'`).run();
    await house.answerAll();
    house.nowMs += 60_000;
    await house.minute();
    expect(await oracles(house, { told: { ben: 0 }, dueIso: six, verdict: 'within', books: { pending: 1, sent: 1 } })).toEqual([]);
    expect(house.posts).toHaveLength(1);
    // The newer code comes.
    await env.DB.prepare('UPDATE outbox SET format = 1').run();
    await house.minute(house.nowMs + 60_000);
    expect(await oracles(house, { told: { ana: 1, ben: 0 }, dueIso: six, verdict: 'within', books: { sent: 2 } })).toEqual([]);
  });

  test('F54: what dies in the middle of a chunk comes back when its lease ends, and only what had not been marked', async () => {
    const house = await newHouse({ nowIso: six });
    const names = Array.from({ length: 10 }, (_, index) => `s${index}`);
    await house.seed(names.map((id) => ({ ...ana, id, urls: [hook(id)] })));
    await tick(house.services(), house.nowMs);
    await house.answer('fetch');
    await house.answer('assess');
    let sends = 0;
    const isOver = (): boolean => sends >= 4;
    house.options = { ...house.options, answer: () => { sends += 1; return new Response(null, { status: 204 }); }, around: failing(isOver) };
    await house.answer('deliver');
    const first = house.posts.length;
    const { around: _, ...whole } = house.options;
    house.options = whole;
    await house.minute();
    expect(house.posts.length).toBe(first);
    house.nowMs += LEASE_MS;
    await house.minute();
    expect(await oracles(house, { told: Object.fromEntries(names.map((name) => [name, 1])), dueIso: six, verdict: 'within', repeats: 6, books: { sent: 10 } })).toEqual([]);
  });

  test('F55: a lease outlasts a send, which is looked at when the code is loaded', () => {
    expect(LEASE_MS).toBeGreaterThanOrEqual(SEND_TIMEOUT_MS + 5000);
  });

  test('F55: a send that takes so long that the lease would end is not begun; it goes back for another', async () => {
    const house: House = await newHouse({ nowIso: six, answer: () => { house.nowMs += 14_000; return new Response(null, { status: 204 }); } });
    const names = Array.from({ length: 6 }, (_, index) => `s${index}`);
    await house.seed(names.map((id) => ({ ...ana, id, urls: [hook(id)] })));
    await tick(house.services(), house.nowMs);
    await house.answer('fetch');
    await house.answer('assess');
    await house.answer('deliver');
    expect(house.posts).toHaveLength(3);
    const rows = await house.outbox();
    expect(rows.filter((row) => row.state === 'pending').map((row) => row.attempts)).toEqual([0, 0, 0]);
    await house.answerAll();
    expect(await oracles(house, { told: Object.fromEntries(names.map((name) => [name, 2])), dueIso: six, verdict: 'within', books: { sent: 6 } })).toEqual([]);
  });

  test('T20: one receiver that never answers holds up nobody else', async () => {
    const house = await newHouse({
      nowIso: six,
      answer: (post) => { if (post.url.includes(':7/')) throw new DOMException('The operation timed out', 'TimeoutError'); return new Response(null, { status: 204 }); },
    });
    const names = Array.from({ length: 60 }, (_, index) => `s${index}`);
    await house.seed(names.map((id, index) => ({ ...ana, id, urls: [`http://127.0.0.1:${index === 10 ? 7 : 100 + index}/${id}`] })));
    await house.minute();
    const others = names.filter((name) => name !== 's10');
    expect(await oracles(house, { told: Object.fromEntries(others.map((name) => [name, 0])), dueIso: six, verdict: 'within', books: { sent: 59, pending: 1 } })).toEqual([]);
  });
});
