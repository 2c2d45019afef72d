// What an outbox has to outlive, by its numbers in the fault catalogue, each with the six oracles: calls that end at the worst
// moment, queues that lose, repeat or give up, a database that dawdles or remembers an older day.
import { env } from 'cloudflare:workers';
import { beforeEach, describe, expect, test, vi } from 'vitest';
import { compose } from '../../worker/morning/compose.ts';
import { answerCalls, recordDeadLetters } from '../../worker/morning/queue.ts';
import { LEASE_MS } from '../../worker/morning/times.ts';
import { tick } from '../../worker/morning/tick.ts';
import { tidy } from '../../worker/morning/sweep.ts';
import type { D1 } from '../../worker/store/database.ts';
import { Faults, type Kind, type Mode } from './support/faults.ts';
import { callOf, newHouse, type House } from './support/house.ts';
import { oracles } from './support/oracles.ts';

vi.setConfig({ testTimeout: 120_000 });
beforeEach(() => { vi.spyOn(console, 'error').mockImplementation(() => undefined); });

const six = '2027-05-14T04:00:00Z';
const DAY_MS = 24 * 3_600_000;
const hook = (name: string): string => `http://127.0.0.1:9/${name}`;
const named = (count: number): string[] => Array.from({ length: count }, (_, index) => `s${index}`);
const people = (names: readonly string[]) => names.map((id) => ({ id, sites: ['north'], urls: [hook(id)], dueIso: six }));
const within = (names: readonly string[], minutes: number): Record<string, number> => Object.fromEntries(names.map((name) => [name, minutes]));

/** A day planned and judged, with nothing sent yet. */
async function readyHouse(names: readonly string[]): Promise<House> {
  const house = await newHouse({ nowIso: six });
  await house.seed(people(names));
  await tick(house.services(), house.nowMs);
  await house.answer('fetch');
  await house.answer('assess');
  house.queue.length = 0;
  return house;
}

/** D1 of which the statements that are meant answer in their own way. */
function bent(how: (sql: string, run: () => Promise<D1Result>) => Promise<D1Result>): (d1: D1) => D1 {
  return (d1) => {
    const texts = new WeakMap<object, { sql: string; inner: D1PreparedStatement }>();
    const wrap = (inner: D1PreparedStatement, sql: string): D1PreparedStatement => {
      const wrapped = { bind: (...values: unknown[]) => wrap(inner.bind(...values), sql), all: () => how(sql, () => inner.all()), run: () => how(sql, () => inner.run()) } as unknown as D1PreparedStatement;
      texts.set(wrapped, { sql, inner });
      return wrapped;
    };
    return {
      prepare: (sql) => wrap(d1.prepare(sql), sql),
      batch: async (statements) => {
        const known = statements.map((statement) => texts.get(statement)!);
        const answers = await d1.batch(known.map(({ inner }) => inner));
        return Promise.all(answers.map((answer, index) => how(known[index]!.sql, () => Promise.resolve(answer)))) as never;
      },
    };
  };
}

describe('a call that ends at the worst moment', () => {
  test.each<[string, Kind, Mode]>([
    ['F42: the process ends between a send and its mark', 'fetch', 'end after'],
    ['F64, F72: the receiver has it, the answer is lost', 'fetch', 'after'],
  ])('%s: one repeat under the same id', async (_, kind, mode) => {
    const names = named(4);
    const house = await readyHouse(names);
    house.options = { ...house.options, faults: new Faults(kind, 2, mode) };
    await house.answer('deliver').catch(() => undefined);
    house.nowMs += LEASE_MS;
    await house.minutes(3);
    expect(await oracles(house, { told: within(names, 4), dueIso: six, verdict: 'within', repeats: 4, books: { sent: 4 } })).toEqual([]);
  });

  test('F43: the process ends between planning and the first wake-up call: the sweep finds the rows', async () => {
    const names = named(3);
    const house = await newHouse({ nowIso: six });
    await house.seed(people(names));
    house.options = { ...house.options, faults: new Faults('queue', 1, 'end before') };
    await tick(house.services(), house.nowMs).catch(() => undefined);
    expect((await house.outbox()).map((row) => row.state)).toEqual(['pending', 'pending', 'pending']);
    expect(house.queue).toEqual([]);
    house.nowMs += 60_000;
    await house.minutes(4);
    expect(await oracles(house, { told: within(names, 5), dueIso: six, verdict: 'within', books: { sent: 3 } })).toEqual([]);
  });
});

describe('a queue', () => {
  test('F44: that loses every message: the sweep alone delivers', async () => {
    const names = named(25);
    const house = await newHouse({ nowIso: six });
    await house.seed(people(names));
    for (let minute = 0; minute < 8; minute += 1) {
      await tick(house.services(), house.nowMs);
      // The sweep's own calls of this minute are all that arrives; what a step sends after it is lost.
      const calls = house.queue.splice(0);
      for (const step of calls) {
        await house.answer(step);
        house.queue.length = 0;
      }
      house.nowMs += 60_000;
    }
    expect(await oracles(house, { told: within(names, 8), dueIso: six, verdict: 'within', books: { sent: 25 } })).toEqual([]);
  });

  test('F45: that brings the same message twice to each of two consumers side by side: one send each', async () => {
    const names = named(30);
    const house = await readyHouse(names);
    const twice = (): Promise<void> => answerCalls(house.services(), [callOf({ v: 1, step: 'deliver' }), callOf({ v: 1, step: 'deliver' })]);
    await Promise.all([twice(), twice()]);
    await house.answerAll();
    expect(house.posts).toHaveLength(30);
    expect(await oracles(house, { told: within(names, 0), dueIso: six, verdict: 'within', books: { sent: 30 } })).toEqual([]);
  });

  test('F48: with garbage and messages of a later version in the batch: written down, their batch mates work', async () => {
    const names = named(3);
    const house = await readyHouse(names);
    const calls = [{ v: 2, step: 'deliver' }, 'deliver', null, { v: 1, step: 'send' }, { v: 1, step: 'deliver' }].map((body) => callOf(body));
    await answerCalls(house.services(), calls);
    expect(calls.map((call) => call.fate())).toEqual(['acked', 'acked', 'acked', 'acked', 'acked']);
    expect(await oracles(house, { told: within(names, 0), dueIso: six, verdict: 'within', books: { sent: 3 }, seen: /"event":"unknown-call"/ })).toEqual([]);
  });

  test('F49: that gives a message up: the dead letter is written down, and the row is delivered all the same', async () => {
    const names = named(3);
    const house = await readyHouse(names);
    await recordDeadLetters(house.services(), [callOf({ v: 1, step: 'deliver' }, 4)]);
    house.nowMs += 60_000;
    await house.minute();
    expect(await oracles(house, { told: within(names, 1), dueIso: six, verdict: 'within', books: { sent: 3 }, seen: /"event":"dead-letter"/ })).toEqual([]);
  });

  test('F49: a message whose attempts are exhausted is dead, and goes on by the channel of the next rank', async () => {
    const house = await newHouse({ nowIso: six, answer: (post) => new Response(null, { status: post.url === hook('first') ? 500 : 204 }) });
    await house.seed([{ id: 'ana', sites: ['north'], urls: [hook('first'), hook('second')], dueIso: six }]);
    await house.minutes(100);
    const taken = house.posts.filter((post) => post.url === hook('second'));
    expect(taken).toHaveLength(1);
    const rows = await house.outbox();
    expect(rows.map((row) => [row.state, row.attempts])).toEqual([['dead', 7], ['sent', 1]]);
    expect(rows[0]!.reason).toBe('given up after 7 attempts; last: the receiver answered 500');
    expect(await oracles(house, { told: { second: 100 }, dueIso: six, verdict: 'within', books: { dead: 1, sent: 1 }, seen: /1 messages could not be delivered/ })).toEqual([]);
  });
});

describe('a database', () => {
  test.each([['takes the rows', /UPDATE outbox SET lease_until/], ['looks up the channels', /FROM channel AS c/], ['marks what is sent', /UPDATE outbox SET state/]])(
    'F37: that dawdles longer than anyone waits when it %s: the step is given up, and goes on where it stood', async (_, slow) => {
      const names = named(30);
      const house = await readyHouse(names);
      let isSlow = true;
      // The faults never come: with them, the house waits 25 ms for its database.
      const dawdling = bent(async (sql, run) => {
        const answer = await run();
        if (isSlow && slow.test(sql)) await new Promise((resolve) => setTimeout(resolve, 60));
        return answer;
      });
      house.options = { ...house.options, faults: new Faults('db', Infinity, 'before'), around: dawdling };
      await house.answer('deliver');
      isSlow = false;
      house.nowMs += LEASE_MS;
      await house.minutes(3);
      // A mark that came late is a mark: what was in flight may come once more.
      expect(await oracles(house, { told: within(names, 4), dueIso: six, verdict: 'within', repeats: 6, books: { sent: 30 } })).toEqual([]);
    });

  test('F38: that answers with an older sheet: the brief names the version it was held to, and is judged anew by the newer one', async () => {
    const house = await newHouse({ nowIso: six });
    await house.seed(people(['ana']));
    const sheetOf = (version: number, maxMeanMps: number) => JSON.stringify({ id: 'hill', name: 'Hill', kind: 'launch', version, limits: { maxMeanMps } });
    await env.DB.batch([
      env.DB.prepare('UPDATE sheet SET body = ? WHERE version = 1').bind(sheetOf(1, 6)),
      env.DB.prepare(`INSERT INTO sheet (id, version, body, stored_at) VALUES ('hill', 2, ?, 0)`).bind(sheetOf(2, 5)),
    ]);
    let isStale = true;
    const stale = bent(async (sql, run) => {
      const answer = await run();
      return isStale && /FROM sheet AS s/.test(sql) ? { ...answer, results: [{ id: 'hill', version: 1, body: sheetOf(1, 6) }] } : answer;
    });
    house.options = { ...house.options, around: stale };
    await house.minute();
    const versions = async () => (await env.DB.prepare('SELECT sheet_version AS version FROM brief ORDER BY issued_at').all<{ version: number }>()).results.map(({ version }) => version);
    expect(await versions()).toEqual([1]);
    isStale = false;
    for (let minute = 0; minute < 75; minute += 1) {
      house.nowMs += 60_000;
      await house.minute();
    }
    expect((await versions()).at(-1)).toBe(2);
    // Every read goes to the primary: the door to D1 opens no session, which is what replicas are read by.
    expect(Object.keys(stale(env.DB)).sort()).toEqual(['batch', 'prepare']);
    expect(await oracles(house, { told: { ana: 0 }, dueIso: six, verdict: 'within', books: { sent: 1 } })).toEqual([]);
  });
});

describe('fifty calls an invocation', () => {
  test.each([['that have proven that they want to be told', 'active'], ['that have yet to echo a challenge', 'unverified']])('F56: are enough for receivers %s: nobody is cut off between a send and its mark', async (_, state) => {
    const names = named(70);
    const house = await newHouse({ nowIso: six, answer: (post) => Response.json({ challenge: (JSON.parse(post.body) as { data: { challenge?: string } }).data.challenge ?? '' }) });
    await house.seed(people(names).map((one, index) => ({ ...one, urls: [`http://127.0.0.1:${1000 + index}/${one.id}`] })));
    await env.DB.prepare('UPDATE channel SET state = ?').bind(state).run();
    let most = 0;
    let refused = 0;
    const allowed = (): void => {
      const used = house.calls.db + house.calls.fetch + house.calls.queue;
      most = Math.max(most, used);
      if (used < 50) return;
      refused += 1;
      throw new Error('Too many subrequests.');
    };
    const { answer } = house.options;
    house.options = { ...house.options, answer: (post) => { allowed(); return answer!(post); }, around: bent((_sql, run) => { allowed(); return run(); }) };
    for (let minute = 0; minute < 3; minute += 1) {
      house.calls = { db: 0, fetch: 0, queue: 0 };
      await house.minute();
      house.nowMs += 60_000;
    }
    expect(refused).toBe(0);
    expect(most).toBeGreaterThan(30);
    expect(await oracles(house, { told: within(names, 1), dueIso: six, verdict: 'within', books: { sent: 70 } })).toEqual([]);
  });
});

test('F68: everything of one day has one thread and a time of its own, by which a service worker tells an older message from a newer', async () => {
  const house = await readyHouse(['ana']);
  const { stores } = house.services();
  const [brief] = await stores.outbox.claim({ nowMs: house.nowMs, leaseMs: LEASE_MS, by: 'x', limit: 1 });
  const [first] = (await compose(house.services(), [brief!])).composed;
  house.nowMs += 60_000;
  const rows = [{ ...brief!, kind: 'missed' as const, seq: 2 }, { ...brief!, dueLocalDate: '2027-05-15' }];
  const [later, next] = (await compose(house.services(), rows)).composed;
  expect(first!.message.thread).toBeDefined();
  expect(later!.message.thread).toBe(first!.message.thread);
  expect(later!.message.issuedAtMs).toBeGreaterThan(first!.message.issuedAtMs);
  expect(next!.message.thread).not.toBe(first!.message.thread);
});

test('what was delivered is kept for fourteen days, and what is open for ever', async () => {
  const house = await newHouse({ nowIso: six });
  await house.seed(people(['ana', 'ben']));
  await house.minute();
  await env.DB.prepare(`UPDATE outbox SET state = 'pending', reason = NULL, settled_at = NULL, next_attempt_at = ?1, valid_until = ?1 WHERE subscription_id = 'ben'`).bind(Date.parse('2030-01-01T00:00:00Z')).run();
  const kept = async (daysLater: number): Promise<string[]> => {
    await tidy(house.services(), Date.parse(six) + daysLater * DAY_MS, 0);
    return (await house.outbox()).map((row) => row.state).sort();
  };
  expect(await kept(13.9)).toEqual(['pending', 'sent']);
  expect(await kept(14.1)).toEqual(['pending']);
});
