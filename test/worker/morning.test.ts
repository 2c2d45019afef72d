import { env } from 'cloudflare:workers';
import { Webhook } from 'standardwebhooks';
import { afterEach, describe, expect, test, vi } from 'vitest';
import { digestOf } from '../../worker/morning/digest.ts';
import { answerCalls, recordDeadLetters } from '../../worker/morning/queue.ts';
import { tick } from '../../worker/morning/tick.ts';
import { derivedKey } from '../../worker/secrets.ts';
import { webhookSecretText } from '../../worker/channels/webhook.ts';
import { briefText } from '../../lib/brief/words/index.ts';
import { READER } from '../../worker/morning/message.ts';
import { callOf, failing, LINK_KEY, newHouse } from './support/house.ts';
import { judgedAs } from './support/stand-ins.ts';

// A machine that has other things to do is no fault of ours.
vi.setConfig({ testTimeout: 30_000, hookTimeout: 30_000 });

const hook = (name: string): string => `http://127.0.0.1:9/${name}`;
const six = '2027-05-14T04:00:00Z';
const ana = { id: 'ana', sites: ['north', 'south'], urls: [hook('ana')], dueIso: six };

afterEach(() => { vi.useRealTimers(); });

async function counts(): Promise<Record<string, number>> {
  const rows = await env.DB.prepare('SELECT state, COUNT(*) AS n FROM outbox GROUP BY state').all<{ state: string; n: number }>();
  return Object.fromEntries(rows.results.map((row) => [row.state, row.n]));
}

describe('a morning', () => {
  test('one tick leads to one signed message a subscriber for all their sites', async () => {
    const house = await newHouse({ nowIso: six, judge: (input) => judgedAs(input, input.site.id === 'north' ? 'beyond' : 'within') });
    await house.seed([ana]);
    await house.minute();
    expect(house.posts).toHaveLength(1);
    const [post] = house.posts;
    const key = await derivedKey(LINK_KEY, { purpose: 'webhook', id: 'ana-0', version: 1 });
    const headers = { 'webhook-id': post!.id, 'webhook-timestamp': post!.headers.get('webhook-timestamp')!, 'webhook-signature': post!.headers.get('webhook-signature')! };
    vi.useFakeTimers({ now: house.nowMs, toFake: ['Date'] });
    const receiver = new Webhook(webhookSecretText(key));
    const body = receiver.verify(post!.body, headers);
    expect(() => receiver.verify(post!.body.replace('within', 'beyond'), headers)).toThrow();
    vi.useRealTimers();
    expect(body).toMatchObject({ type: 'brief.issued', data: { id: post!.id, inventedWeather: false, days: [{ siteId: 'north', verdict: 'beyond' }, { siteId: 'south', verdict: 'within' }] } });
    expect(JSON.parse(post!.body).data.text).toMatch(/^Site north: beyond a limit/);
    expect(await house.outbox()).toMatchObject([{ state: 'sent', attempts: 1, id: post!.id }]);
    expect(house.asked).toHaveLength(1);
    expect(house.asked[0]).toMatchObject({ fromUtc: '2027-05-13T21:00:00Z', toUtc: '2027-05-14T23:00:00Z' });
  });

  test('nothing happens before the minute has come, and once only after it', async () => {
    const house = await newHouse({ nowIso: '2027-05-14T03:59:00Z' });
    await house.seed([ana]);
    await house.minute();
    expect(house.posts).toHaveLength(0);
    house.nowMs += 60_000;
    await house.minutes(5);
    expect(house.posts).toHaveLength(1);
    house.nowMs = Date.parse('2027-05-15T04:00:00Z');
    await house.minute();
    expect(house.posts.map((post) => JSON.parse(post.body).data.days[0].localDate)).toEqual(['2027-05-14', '2027-05-15']);
  });

  test('T28 a tick that fires twice, one after the other or at once, sends once', async () => {
    const house = await newHouse({ nowIso: six });
    await house.seed([ana]);
    await Promise.all([1, 2, 3, 4, 5].map(() => tick(house.services(), house.nowMs)));
    await tick(house.services(), house.nowMs);
    await house.answerAll();
    expect(house.posts).toHaveLength(1);
    expect(await counts()).toEqual({ sent: 1 });
  });

  test('every message of every queue lost: the sweep alone delivers', async () => {
    const house = await newHouse({ nowIso: six });
    await house.seed([ana]);
    for (let minute = 0; minute < 6 && house.posts.length === 0; minute += 1) {
      await tick(house.services(), house.nowMs);
      const steps = [...new Set(house.queue)];
      for (const step of steps) {
        await house.answer(step);
        house.queue = [];
      }
      house.nowMs += 60_000;
    }
    expect(house.posts).toHaveLength(1);
    expect(house.nowMs - Date.parse(six)).toBeLessThanOrEqual(5 * 60_000);
  });

  test('in the evening the brief is about tomorrow', async () => {
    const house = await newHouse({ nowIso: '2027-05-14T20:00:00Z' });
    await house.seed([{ ...ana, deliverMinute: 22 * 60, dueIso: '2027-05-14T20:00:00Z' }]);
    await house.minute();
    expect(JSON.parse(house.posts[0]!.body).data.days[0].localDate).toBe('2027-05-15');
  });

  test('a tick twenty minutes late still sends, with honest times; one seven hours late owns up', async () => {
    const house = await newHouse({ nowIso: '2027-05-14T04:20:00Z' });
    await house.seed([ana]);
    await house.minute();
    expect(JSON.parse(house.posts[0]!.body).data).toMatchObject({ issuedAt: '2027-05-14T04:20:00.000Z' });
    const late = await newHouse({ nowIso: '2027-05-14T11:00:00Z' });
    await late.seed([ana]);
    await late.minute();
    expect(late.posts).toHaveLength(1);
    expect(JSON.parse(late.posts[0]!.body)).toMatchObject({ type: 'brief.missed', data: { days: [] } });
    expect(JSON.parse(late.posts[0]!.body).data.text).toMatch(/^Cannot say: /);
  });
});

describe('the board', () => {
  const pair = { siteId: 'north', wingKey: 'EN B', sheetId: 'hill' };
  const revisions = async (): Promise<number[]> => (await env.DB.prepare('SELECT revision FROM brief ORDER BY revision').all<{ revision: number }>()).results.map((row) => row.revision);

  test('has briefs without any subscriber, made anew every three hours', async () => {
    const house = await newHouse({ nowIso: '2027-05-14T02:07:00Z' });
    await house.seed([], ['north']);
    await house.services().stores.db.together(house.services().stores.published.replaceAll([pair]));
    for (let hour = 0; hour < 7; hour += 1) {
      await house.minute();
      house.nowMs += 3_600_000;
    }
    // 4:07 local, then every third hour.
    expect(await revisions()).toEqual([1, 2, 3]);
    expect(house.asked).toHaveLength(3);
  });

  test('rests at night, and is not asked for between its minutes', async () => {
    const house = await newHouse({ nowIso: '2027-05-13T23:07:00Z' });
    await house.seed([], ['north']);
    await house.services().stores.db.together(house.services().stores.published.replaceAll([pair]));
    await house.minute();
    house.nowMs = Date.parse('2027-05-14T05:30:00Z');
    await house.minutes(10);
    expect(await revisions()).toEqual([]);
  });
});

test('an outage that ends in the evening owes one subscriber today and the other tomorrow', async () => {
  const house = await newHouse({ nowIso: '2027-05-14T20:00:00Z' });
  await house.seed([
    { ...ana, sites: ['north'], deliverMinute: 17 * 60, dueIso: '2027-05-14T15:00:00Z' },
    { ...ana, id: 'ben', sites: ['north'], urls: [hook('ben')], deliverMinute: 22 * 60, dueIso: '2027-05-14T20:00:00Z' },
  ]);
  await house.minute();
  expect(house.posts.map((post) => JSON.parse(post.body).data.days[0].localDate).toSorted((a: string, b: string) => a.localeCompare(b))).toEqual(['2027-05-14', '2027-05-15']);
});

describe('when something fails', () => {
  test('a source without an answer gives "cannot say" with the cause, on time', async () => {
    const house = await newHouse({ nowIso: six, source: async (request) => failing(request, { kind: 'server-error', status: 503 }) });
    await house.seed([ana]);
    await house.minute();
    const { data } = JSON.parse(house.posts[0]!.body);
    expect(data.days.map((day: { verdict: string }) => day.verdict)).toEqual(['unknown', 'unknown']);
    expect(data.title).toMatch(/^Cannot say/);
  });

  test('a source that throws is a source without an answer', async () => {
    const house = await newHouse({ nowIso: six, source: async () => { throw new Error('a fault of ours'); } });
    await house.seed([ana]);
    await house.minute();
    expect(JSON.parse(house.posts[0]!.body).data.days[0].verdict).toBe('unknown');
  });

  test('a site that cannot be judged holds up nobody, and its own subscribers are told after ten minutes', async () => {
    const house = await newHouse({
      nowIso: six,
      judge: (input) => { if (input.site.id === 'north') throw new RangeError('a fault of ours'); return judgedAs(input, 'within'); },
    });
    await house.seed([ana, { ...ana, id: 'ben', sites: ['south'], urls: [hook('ben')] }]);
    await house.minute();
    expect(house.posts.map((post) => post.url)).toEqual([hook('ben')]);
    house.nowMs += 60_000;
    await house.minutes(10);
    expect(house.posts.map((post) => post.url)).toEqual([hook('ben'), hook('ana')]);
    expect(JSON.parse(house.posts[1]!.body).data.text).toMatch(/^Site north: cannot say: the brief was not computed in time/);
    expect(house.nowMs - Date.parse(six)).toBeLessThan(12 * 60_000);
  });

  test('an unreadable site, sheet row or channel address stops at its own subscriber', async () => {
    const house = await newHouse({ nowIso: six });
    await house.seed([ana, { ...ana, id: 'ben', sites: ['west'], urls: [hook('ben')] }, { ...ana, id: 'cid', sites: ['south'], urls: ['https://10.0.0.1/x'] }]);
    await env.DB.prepare(`UPDATE site SET feature = '{"type":"Feature"}' WHERE id = 'west'`).run();
    await house.minutes(12);
    const outbox = await house.outbox();
    expect(outbox.map(({ channel_id, state }) => [channel_id, state])).toEqual([['ana-0', 'sent'], ['ben-0', 'suppressed'], ['cid-0', 'dead']]);
  });

  test('retries with the same id and body until the receiver takes it', async () => {
    let left = 3;
    const house = await newHouse({ nowIso: six, answer: () => new Response(null, { status: (left -= 1) < 0 ? 200 : 500 }) });
    await house.seed([ana]);
    await house.minutes(8);
    expect(house.posts).toHaveLength(4);
    expect(new Set(house.posts.map((post) => post.id)).size).toBe(1);
    expect(new Set(house.posts.map((post) => post.body)).size).toBe(1);
    expect(await house.outbox()).toMatchObject([{ state: 'sent', attempts: 4 }]);
  });

  test('two messages pinned to different revisions of one brief each repeat their own', async () => {
    let isDown = true;
    let rules = 'the first';
    const house = await newHouse({
      nowIso: six, judge: (input) => ({ ...judgedAs(input, 'within'), localRules: rules }), answer: () => new Response(null, isDown ? { status: 503, headers: { 'retry-after': '7200' } } : { status: 200 }),
    });
    await house.seed([{ ...ana, sites: ['north'] }, { ...ana, id: 'ben', sites: ['north'], urls: [hook('ben')], deliverMinute: 420, dueIso: '2027-05-14T05:00:00Z' }]);
    await house.minute();
    rules = 'the second';
    await env.DB.prepare(`UPDATE run SET finished_at = 0 WHERE step = 'fetch'`).run();
    house.nowMs = Date.parse('2027-05-14T05:00:00Z');
    await house.minute();
    isDown = false;
    house.nowMs = Date.parse('2027-05-14T07:30:00Z');
    await house.minute();
    const bodies = (name: string): string[] => house.posts.filter((post) => post.url === hook(name)).map((post) => post.body);
    for (const name of ['ana', 'ben']) {
      expect(bodies(name)).toHaveLength(2);
      expect(new Set(bodies(name)).size).toBe(1);
    }
    expect(bodies('ana')[0]).toContain('the first');
    expect(bodies('ben')[0]).toContain('the second');
  });

  test.each([
    ['seven failures', 500, {}, 'dead', /^given up after 7 attempts; last: the receiver answered 500$/],
    ['410', 410, {}, 'dead', /410/],
    ['a Retry-After beyond the validity', 429, { 'retry-after': '86400' }, 'expired', /429/],
  ])('%s end the row with a reason', async (_, status, headers, state, reason) => {
    const house = await newHouse({ nowIso: six, answer: () => new Response(null, { status, headers }) });
    await house.seed([ana]);
    for (let look = 0; look < 10; look += 1) {
      await house.minute();
      house.nowMs += 10 * 60_000;
    }
    const [row] = await house.outbox();
    expect(row).toMatchObject({ state });
    expect(row!.reason).toMatch(reason);
  });

  test('a dead channel hands its message to the next in rank', async () => {
    const house = await newHouse({ nowIso: six, answer: (post) => new Response(null, { status: post.url.endsWith('first') ? 410 : 200 }) });
    await house.seed([{ ...ana, urls: [hook('first'), hook('second')] }]);
    await house.minutes(2);
    expect(await house.outbox()).toMatchObject([{ channel_id: 'ana-0', state: 'dead' }, { channel_id: 'ana-1', state: 'sent' }]);
    house.nowMs = Date.parse('2027-05-15T04:00:00Z');
    await house.minute();
    expect(house.posts.map((post) => post.url)).toEqual([hook('first'), hook('second'), hook('second')]);
  });

  test('what is not delivered in time expires; nothing is sent after that', async () => {
    const house = await newHouse({ nowIso: six, answer: () => new Response(null, { status: 503, headers: { 'retry-after': '21000' } }) });
    await house.seed([ana]);
    await house.minute();
    house.nowMs += 7 * 3_600_000;
    await house.minute();
    expect(house.posts).toHaveLength(1);
    expect(await house.outbox()).toMatchObject([{ state: 'expired' }]);
  });

  test('a subscription that ended is suppressed', async () => {
    const house = await newHouse({ nowIso: six, answer: () => new Response(null, { status: 500 }) });
    await house.seed([ana]);
    await house.minute();
    await env.DB.prepare(`UPDATE subscription SET state = 'ended'`).run();
    house.nowMs += 60_000;
    await house.minute();
    expect(await house.outbox()).toMatchObject([{ state: 'suppressed' }]);
    expect(house.posts).toHaveLength(1);
  });
});

describe('a webhook', () => {
  const unverified = async (): Promise<void> => { await env.DB.prepare(`UPDATE channel SET state = 'unverified'`).run(); };
  const stateOf = async (): Promise<unknown> => (await env.DB.prepare('SELECT state FROM channel').first<{ state: string }>())!.state;

  test('gets no brief before it has echoed the challenge, and all of them after', async () => {
    const house = await newHouse({
      nowIso: six,
      answer: ({ body }) => {
        const { type, data } = JSON.parse(body) as { type: string; data: { challenge?: string } };
        return type === 'endpoint.challenge' ? Response.json({ challenge: data.challenge }) : new Response(null, { status: 200 });
      },
    });
    await house.seed([ana]);
    await unverified();
    await house.minute();
    expect(house.posts.map((post) => JSON.parse(post.body).type)).toEqual(['endpoint.challenge', 'brief.issued']);
    expect(await stateOf()).toBe('active');
    house.nowMs = Date.parse('2027-05-15T04:00:00Z');
    await house.minute();
    expect(house.posts.map((post) => JSON.parse(post.body).type)).toEqual(['endpoint.challenge', 'brief.issued', 'brief.issued']);
  });

  test.each([
    ['200 without the echo', () => new Response('thanks', { status: 200 })], ['another echo', () => Response.json({ challenge: 'x' })],
    ['an endless answer', () => new Response('{"challenge":"'.padEnd(5000, 'x'))], ['500', () => new Response(null, { status: 500 })],
  ])('that answers %s is asked three times, gets nothing and stays unverified', async (_, answer) => {
    const house = await newHouse({ nowIso: six, answer });
    await house.seed([ana]);
    await unverified();
    for (let look = 0; look < 4; look += 1) {
      await house.minute();
      house.nowMs += 4 * 60_000;
    }
    expect(house.posts.map((post) => JSON.parse(post.body).type)).toEqual(Array.from({ length: 3 }, () => 'endpoint.challenge'));
    expect(await house.outbox()).toMatchObject([{ state: 'dead', reason: 'the receiver has not echoed the challenge' }]);
    expect(await stateOf()).toBe('unverified');
  });

  test('T18 T34 is signed with two secrets while one is being changed, and with none that was given up', async () => {
    const house = await newHouse({ nowIso: six });
    await house.seed([ana]);
    await env.DB.prepare('UPDATE channel SET secret_version = 3, oldest_secret_version = 2').run();
    await house.minute();
    const [post] = house.posts;
    const headers = Object.fromEntries(['id', 'timestamp', 'signature'].map((name) => [`webhook-${name}`, post!.headers.get(`webhook-${name}`)!]));
    expect(headers['webhook-signature']!.split(' ')).toHaveLength(2);
    vi.useFakeTimers({ now: house.nowMs, toFake: ['Date'] });
    for (const [version, isGood] of [[1, false], [2, true], [3, true]] as const) {
      const receiver = new Webhook(webhookSecretText(await derivedKey(LINK_KEY, { purpose: 'webhook', id: 'ana-0', version })));
      if (isGood) expect(receiver.verify(post!.body, headers)).toBeTruthy();
      else expect(() => receiver.verify(post!.body, headers)).toThrow();
    }
  });

  test('with a target that is no target is dead and breaks nobody else', async () => {
    const house = await newHouse({ nowIso: six });
    await house.seed([ana, { ...ana, id: 'ben', urls: [hook('ben')] }, { ...ana, id: 'cid', urls: [hook('cid')] }]);
    await env.DB.prepare(`UPDATE channel SET target = '{' WHERE id = 'ana-0'`).run();
    await env.DB.prepare(`UPDATE channel SET kind = 'push', target = 'null' WHERE id = 'ben-0'`).run();
    await house.minute();
    expect((await house.outbox()).map(({ channel_id, state }) => [channel_id, state])).toEqual([['ana-0', 'dead'], ['ben-0', 'dead'], ['cid-0', 'sent']]);
  });
});

describe('the queue', () => {
  test('garbage is written down and acked; its batch mates do their work', async () => {
    const house = await newHouse({ nowIso: six });
    await house.seed([ana]);
    await tick(house.services(), house.nowMs);
    const calls = [callOf(null), callOf({ v: 9, step: 'fetch' }), callOf('deliver'), callOf({ v: 1, step: 'fetch' })];
    await answerCalls(house.services(), calls);
    expect(calls.map((call) => call.fate())).toEqual(['acked', 'acked', 'acked', 'acked']);
    expect(house.asked).toHaveLength(1);
    await recordDeadLetters(house.services(), [callOf({ v: 1, step: 'fetch' })]);
    const log = await env.DB.prepare('SELECT event FROM log ORDER BY id').all<{ event: string }>();
    expect(log.results.map((row) => row.event)).toEqual(['unknown-call', 'unknown-call', 'unknown-call', 'dead-letter']);
  });

  test('the same call twice in parallel sends once', async () => {
    const house = await newHouse({ nowIso: six });
    await house.seed([ana, ...['b', 'c', 'd'].map((id) => ({ ...ana, id, urls: [hook(id)] }))]);
    await tick(house.services(), house.nowMs);
    await house.answer('fetch');
    await house.answer('assess');
    await Promise.all([1, 2, 3].map(() => house.answer('deliver')));
    await house.answerAll();
    expect(house.posts.map((post) => post.url).sort()).toEqual(['ana', 'b', 'c', 'd'].map(hook));
  });

  test('no invocation makes more than fifty calls', async () => {
    const house = await newHouse({ nowIso: six });
    const sites = ['north', 'south', 'east', 'west'];
    await house.seed(Array.from({ length: 45 }, (_, index) => ({ ...ana, id: `s${index}`, sites, urls: [`${hook('x')}${index}`], wing: `own-${index % 5}` })));
    let most = 0;
    house.calls = { db: 0, fetch: 0, queue: 0 };
    await tick(house.services(), house.nowMs);
    most = Math.max(most, house.calls.db + house.calls.fetch + house.calls.queue);
    for (let step = house.queue.shift(); step !== undefined; step = house.queue.shift()) {
      await house.answer(step);
      most = Math.max(most, house.calls.db + house.calls.fetch + house.calls.queue);
    }
    expect(house.posts).toHaveLength(45);
    expect(most).toBeLessThanOrEqual(50);
  });
});

test('a digest says the same as the whole day', async () => {
  const house = await newHouse({ nowIso: six });
  await house.seed([ana]);
  await house.minute();
  const row = await env.DB.prepare('SELECT body, digest FROM brief LIMIT 1').first<{ body: string; digest: string }>();
  const day = JSON.parse(row!.body);
  expect(JSON.parse(row!.digest)).toEqual(digestOf(day));
  expect(briefText([JSON.parse(row!.digest)], READER)).toBe(briefText([day], READER));
});
