// Subscribing, changing and leaving over HTTP, by the ids of assurance.md (C and T).
import { env } from 'cloudflare:workers';
import { Webhook } from 'standardwebhooks';
import { beforeEach, describe, expect, test, vi } from 'vitest';
import { CLOSING } from '../../lib/brief/words/index.ts';
import { linkToken } from '../../worker/secrets.ts';
import { LINK_KEY } from './support/house.ts';
import { everyRow, newPostHouse, wish, type PostHouse } from './support/post-house.ts';

let house: PostHouse;

beforeEach(async () => {
  house = await newPostHouse({ nowIso: '2027-05-13T20:00:00Z' });
});

const POST = '/api/v1/subscriptions';

async function subscribed(over: Readonly<Record<string, unknown>> = {}): Promise<string> {
  expect((await house.ask('POST', POST, wish(over))).status).toBe(202);
  await house.answerAll();
  const response = await house.form(house.pathIn('confirm'), { confirm: '1' });
  expect(response.status).toBe(303);
  return response.headers.get('location')!.split('?')[0]!;
}

async function count(table: string): Promise<number> {
  return (await env.DB.prepare(`SELECT COUNT(*) AS n FROM ${table}`).first<{ n: number }>())!.n;
}

describe('a whole life', () => {
  test('subscribe, confirm, brief, change, pause, resume, one click, no trace', async () => {
    const manage = await subscribed();
    expect(await count('signup')).toBe(0);
    house.nowMs = Date.parse('2027-05-14T04:00:00Z');
    await house.minute();
    const brief = house.letters.at(-1)!;
    expect(brief.to).toBe('ana@mail.example.org');
    expect(brief.subject).toBe('Within limits, with 1 window, Site north, Fri 14 May'.replace(', with 1 window', ''));
    expect(brief.text).toContain(CLOSING);
    expect(brief.headers['List-Unsubscribe-Post']).toBe('List-Unsubscribe=One-Click');
    const wishes = { site: 'north', 'sheet.north': 'easy', wing: 'EN B', at: '06:00', zone: 'Europe/Vienna', speed: 'm/s', height: 'm' };
    const everyDay = ['mon', 'tue', 'wed', 'thu', 'fri', 'sat', 'sun'].map((day): [string, string] => ['day', day]);
    expect((await house.form(manage, [['action', 'change'], ...Object.entries(wishes), ...everyDay])).status).toBe(303);
    house.nowMs = Date.parse('2027-05-15T04:00:00Z');
    await house.minute();
    expect(house.letters.at(-1)!.text).toContain('sheet Easy');
    const before = house.letters.length;
    expect((await house.form(manage, { action: 'pause', until: '2027-05-18' })).status).toBe(303);
    for (const day of ['16', '17']) {
      house.nowMs = Date.parse(`2027-05-${day}T04:00:00Z`);
      await house.minutes(2);
    }
    expect(house.letters.length).toBe(before);
    house.nowMs = Date.parse('2027-05-17T20:00:00Z');
    await house.minute();
    house.nowMs = Date.parse('2027-05-18T04:00:00Z');
    await house.minute();
    expect(house.letters.length).toBe(before + 1);
    expect((await house.form(manage, { action: 'pause' })).status).toBe(303);
    expect((await house.form(manage, { action: 'resume' })).status).toBe(303);
    house.nowMs = Date.parse('2027-05-19T04:00:00Z');
    await house.minute();
    expect(house.letters.length).toBe(before + 2);
    const id = (await env.DB.prepare('SELECT id FROM subscription').first<{ id: string }>())!.id;
    const leave = new URL(house.letters.at(-1)!.headers['List-Unsubscribe']!.slice(1, -1)).pathname;
    expect((await house.form(leave, { 'List-Unsubscribe': 'One-Click' })).status).toBe(200);
    const rows = await everyRow();
    expect(rows).not.toContain('ana@');
    expect(rows).not.toContain(id);
    for (const path of [manage, leave]) expect((await house.ask('GET', path)).status).toBe(404);
    house.nowMs = Date.parse('2027-05-20T04:00:00Z');
    await house.minute();
    expect(house.letters.length).toBe(before + 2);
  });
});

test('its page lists the training days that it is told about, and says nothing of one any more when asked', async () => {
  const manage = await subscribed();
  const { stores } = house.services();
  const [{ id } = { id: '' }] = (await env.DB.prepare('SELECT id FROM subscription').all<{ id: string }>()).results;
  const row = (plan: string, localDate: string) => [...stores.plan.put({ id: plan, revision: 1, localDate, request: '{}', body: '{}' }, house.nowMs), stores.plan.tell(plan, plan === 'other' ? 'somebody-else' : id)];
  await stores.db.together([...row('course', '2027-05-15'), ...row('past', '2027-05-12'), ...row('other', '2027-05-15')]);
  const page = await (await house.ask('GET', manage)).text();
  expect([...page.matchAll(/href="(\/plan\/[^"]+)">([^<]+)</g)].map(([, path, words]) => [path, words])).toEqual([[`/plan/${await linkToken(LINK_KEY, { purpose: 'plan', id: 'course', version: 1 })}`, 'Training day of Saturday 15 May 2027']]);
  for (const plan of ['course', 'other']) expect((await house.form(manage, { action: 'leave-plan', plan })).status).toBe(303);
  expect(await (await house.ask('GET', manage)).text()).not.toContain('Training day of');
  expect((await env.DB.prepare('SELECT id, subscription_id AS who FROM plan ORDER BY id').all()).results).toEqual([{ id: 'course', who: null }, { id: 'other', who: 'somebody-else' }, { id: 'past', who: id }]);
});

describe('what a stranger can learn or change', () => {
  test('T9 C16 C17 new, pending, confirmed and suppressed get the same answer; one row, one mail', async () => {
    const answers: string[] = [];
    const post = async (): Promise<void> => {
      const response = await house.ask('POST', POST, wish());
      answers.push(`${response.status} ${JSON.stringify([...response.headers])} ${await response.text()}`);
    };
    await Promise.all([post(), post(), post()]);
    expect(await count('signup')).toBe(1);
    await house.answerAll();
    await post();
    await house.answerAll();
    expect(house.letters.length).toBe(1);
    await house.form(house.pathIn('confirm'), { confirm: '1' });
    await post();
    await house.answerAll();
    expect(house.letters.at(-1)!.subject).toBe('This address has a subscription already');
    await post();
    await house.answerAll();
    expect(house.letters.length).toBe(2);
    const { stores } = house.services();
    const { owner } = (await env.DB.prepare('SELECT owner FROM subscription').first<{ owner: string }>())!;
    await stores.db.together([...stores.subscription.erase((await stores.subscription.idOfOwner(owner))!), stores.suppression.add(owner, 'bounced', house.nowMs)]);
    await post();
    await house.answerAll();
    expect(house.letters.length).toBe(2);
    expect(new Set(answers).size).toBe(1);
    expect(answers[0]).toContain('202');
  });

  test('T8 sixty sign-ups for one mailbox in any spelling: one mail', async () => {
    house.isLocal = false;
    for (let index = 0; index < 60; index += 1) {
      const address = index % 2 === 0 ? 'ANA@Mail.Example.ORG' : 'ana@mail.example.org';
      const response = await house.ask('POST', POST, wish({ channels: [{ kind: 'mail', address }] }), { 'cf-connecting-ip': `198.51.${index % 250}.7` });
      if (response.status !== 202) throw new Error(`${index}: ${response.status}`);
    }
    await house.answerAll();
    expect(house.letters.length).toBe(1);
    expect(house.letters[0]!.text).not.toMatch(/ana/i);
  }, 60_000);

  test('C54 T10 the hundred and first from one network is told to wait', async () => {
    house.isLocal = false;
    const statuses: number[] = [];
    for (let index = 0; index < 103; index += 1) statuses.push((await house.ask('POST', POST, {}, { 'cf-connecting-ip': index % 2 === 0 ? '2001:db8:1:2::1' : '2001:db8:1:2:ffff::9' })).status);
    expect(new Set(statuses.slice(0, 100))).toEqual(new Set([400]));
    expect(statuses.slice(100)).toEqual([429, 429, 429]);
    expect(await everyRow()).not.toContain('2001:db8');
  }, 60_000);

  test('T11 looking at a link changes nothing', async () => {
    await house.ask('POST', POST, wish());
    await house.answerAll();
    const confirm = house.pathIn('confirm');
    const look = async (path: string): Promise<void> => {
      const before = await everyRow();
      for (const method of ['GET', 'HEAD', 'OPTIONS', 'PROPFIND']) await house.ask(method, path, undefined, { purpose: 'prefetch' });
      expect(await everyRow()).toBe(before);
    };
    await look(confirm);
    const manage = (await house.form(confirm, { confirm: '1' })).headers.get('location')!;
    house.nowMs = Date.parse('2027-05-14T04:00:00Z');
    await house.minute();
    for (const path of [manage, house.pathIn('unsubscribe'), `/api/v1${manage}`]) await look(path);
  });

  test('T12 C55 a token is for one purpose, once, for 48 hours, and every other gets one answer', async () => {
    const manage = await subscribed();
    const used = house.pathIn('confirm');
    const secret = manage.split('/').at(-1)!;
    const bodies = new Set<string>();
    const wrong = ['x', secret.slice(0, -1), `${secret}x`, 'x'.repeat(10_000), '%00', '%C3%A4', secret.replace('.1.', '.2.'), used.split('/').at(-1)!, ' '];
    for (const token of wrong) for (const kind of ['confirm', 'manage', 'unsubscribe']) {
      for (const response of [await house.ask('GET', `/${kind}/${token}`), await house.form(`/${kind}/${token}`, { confirm: '1', action: 'end', 'List-Unsubscribe': 'One-Click' })]) {
        expect(response.status).toBe(404);
        bodies.add(await response.text());
      }
    }
    expect((await house.form(`/unsubscribe/${secret}`, { confirm: '1' })).status).toBe(404);
    expect((await house.ask('GET', `/feeds/${secret}.atom`)).status).toBe(404);
    expect(bodies.size).toBe(1);
    expect(await count('subscription')).toBe(1);
  });

  test('T12 unconfirmed after 48 hours: forgotten, with its token', async () => {
    await house.ask('POST', POST, wish());
    await house.answerAll();
    house.nowMs += 48 * 3_600_000 + 1;
    expect((await house.form(house.pathIn('confirm'), { confirm: '1' })).status).toBe(404);
    await house.minute();
    expect(await everyRow()).not.toMatch(/ana@/);
    expect([await count('signup'), await count('token')]).toEqual([0, 0]);
  });

  test('T13 C56 nobody leaves for another; one click needs the words of RFC 8058', async () => {
    await subscribed();
    house.nowMs = Date.parse('2027-05-14T04:00:00Z');
    await house.minute();
    const leave = house.pathIn('unsubscribe');
    expect((await house.form('/unsubscribe/ana@mail.example.org', { 'List-Unsubscribe': 'One-Click' })).status).toBe(404);
    for (const body of ['', 'List-Unsubscribe=Other', '{"List-Unsubscribe":"One-Click"}']) {
      expect((await house.hono().request(leave, { method: 'POST', body, headers: { 'content-type': 'application/x-www-form-urlencoded' } })).status).toBe(400);
    }
    expect((await house.ask('GET', leave)).status).toBe(200);
    expect(await count('subscription')).toBe(1);
    const form = new FormData();
    form.set('List-Unsubscribe', 'One-Click');
    expect((await house.hono().request(leave, { method: 'POST', body: form, headers: { cookie: 'a=b' } })).status).toBe(200);
    expect(await count('subscription')).toBe(0);
  });

  test('T35 C4 more than may be given is refused, and nothing is stored', async () => {
    const manage = `/api/v1${await subscribed()}`;
    const before = await everyRow();
    for (const extra of [{ confirmed: true }, { admin: true }, { id: 'x' }, { owner: 'x' }, { state: 'active' }]) {
      expect((await house.ask('POST', POST, wish(extra))).status).toBe(400);
      expect((await house.ask('PUT', manage, { ...wish(extra), channels: undefined })).status).toBe(400);
      expect((await house.ask('POST', manage, { action: 'pause', ...extra })).status).toBe(400);
    }
    expect(await everyRow()).toBe(before);
  });

  test.each([
    ['C1 nothing', '', 'application/json', 400], ['C1 text', JSON.stringify(wish()), 'text/plain', 415], ['C1 a form', 'a=b', 'application/x-www-form-urlencoded', 415], ['C2 8 KiB and a byte', `"${'x'.repeat(8191)}"`, 'application/json', 413],
    ['C3 deep', `${'['.repeat(30)}${']'.repeat(30)}`, 'application/json', 400], ['C3 twice', '{"sites":[],"sites":[]}', 'application/json', 400], ['C3 proto', '{"__proto__":{"x":1}}', 'application/json', 400],
  ])('%s', async (_, body, type, status) => {
    expect((await house.ask('POST', POST, body, { 'content-type': type })).status).toBe(status);
    expect(await count('signup')).toBe(0);
  });

  test.each(['GET', 'PUT', 'DELETE', 'PATCH'])('C5 %s is told which method there is', async (method) => {
    const response = await house.ask(method, POST);
    expect([response.status, response.headers.get('allow')]).toEqual([405, 'POST']);
  });

  test('T22 T25 secret pages are not kept, framed, indexed or told to others; logs hold no secret', async () => {
    const manage = await subscribed();
    const { headers } = await house.ask('GET', manage);
    expect(Object.fromEntries(headers)).toMatchObject({ 'cache-control': 'no-store', 'referrer-policy': 'no-referrer', 'x-robots-tag': 'noindex', 'x-content-type-options': 'nosniff' });
    expect(headers.get('content-security-policy')).toContain("frame-ancestors 'none'");
    expect(headers.get('set-cookie')).toBeNull();
    const page = await (await house.ask('GET', manage)).text();
    expect(page).not.toContain('ana@');
    expect(JSON.stringify((await env.DB.prepare('SELECT * FROM log').all()).results)).not.toMatch(/ana|manage|confirm/);
  });
});

describe('a webhook instead of mail', () => {
  const hook = wish({ channels: [{ kind: 'webhook', url: 'http://127.0.0.1:9/hook' }] });
  const echo = (body: string) => new Response(JSON.stringify({ challenge: (JSON.parse(body) as { data: { challenge: string } }).data.challenge }));

  test('T17 C48 a receiver that never answers the challenge gets no brief, and is forgotten', async () => {
    expect((await house.ask('POST', POST, hook)).status).toBe(202);
    house.nowMs = Date.parse('2027-05-14T04:00:00Z');
    await house.minutes(30);
    expect(house.posts.length).toBeGreaterThan(0);
    expect(house.posts.every(({ id }) => id.startsWith('chl_'))).toBe(true);
    house.nowMs += 72 * 3_600_000;
    await house.minute();
    expect(await count('subscription')).toBe(0);
  });

  test('one that answers is verified by a test, signed with the secret it was given, and told', async () => {
    const made = (await (await house.ask('POST', POST, hook)).json()) as { links: { manage: string }; webhookSecret: string };
    expect(made.webhookSecret).toMatch(/^whsec_/);
    house.options = { ...house.options, answer: (post) => (post.id.startsWith('chl_') ? echo(post.body) : new Response(null, { status: 204 })) };
    const manage = `/api/v1${new URL(made.links.manage).pathname}`;
    const { tests: [asked] } = (await (await house.ask('POST', manage, { action: 'test' })).json()) as { tests: [{ id: string }] };
    expect(asked).toEqual({ kind: 'webhook', state: 'planned', id: expect.stringMatching(/^msg_/) as string });
    expect(await (await house.ask('GET', manage)).json()).toMatchObject({ channels: [{ state: 'unverified' }], deliveries: [{ id: asked.id, state: 'pending', settledAt: null }] });
    await house.answerAll();
    expect(await (await house.ask('GET', manage)).json()).toMatchObject({ channels: [{ state: 'active' }], deliveries: [{ id: asked.id, kind: 'test', state: 'sent', reason: 'taken by the receiver', settledAt: '2027-05-13T20:00:00Z', shownAt: null }] });
    const taken = house.posts.at(-1)!;
    vi.setSystemTime(house.nowMs);
    expect(new Webhook(made.webhookSecret).verify(taken.body, Object.fromEntries(taken.headers))).toMatchObject({ type: 'service.test', data: { id: asked.id } });
    vi.useRealTimers();
    const renewed = (await (await house.ask('POST', manage, { action: 'renew-links' })).json()) as { links: { manage: string } };
    expect((await house.ask('GET', manage)).status).toBe(404);
    expect((await house.ask('DELETE', `/api/v1${new URL(renewed.links.manage).pathname}`)).status).toBe(200);
    expect(await count('channel')).toBe(0);
  });
});

test('a test is of the way it was asked for: one that fails says so, and is not answered by another way', async () => {
  house.options = { ...house.options, answer: (post) => (post.id.startsWith('chl_') ? new Response(JSON.stringify({ challenge: (JSON.parse(post.body) as { data: { challenge: string } }).data.challenge })) : new Response(null, { status: 410 })) };
  const manage = await subscribed({ channels: [{ kind: 'webhook', url: 'http://127.0.0.1:9/hook' }, { kind: 'mail', address: 'ana@mail.example.org' }] });
  const letters = house.letters.length;
  const { id } = (await env.DB.prepare(`SELECT id FROM channel WHERE kind = 'webhook'`).first<{ id: string }>())!;
  expect((await house.form(manage, { action: 'test', channel: id })).status).toBe(303);
  await house.answerAll();
  const { results } = await env.DB.prepare(`SELECT c.kind AS way, o.state FROM outbox AS o JOIN channel AS c ON c.id = o.channel_id WHERE o.kind = 'test'`).all();
  expect(results).toEqual([{ way: 'webhook', state: 'dead' }]);
  expect(house.letters.length).toBe(letters);
});

const ZONES = ['Europe/Vienna', 'Europe/London', 'America/New_York', 'America/Los_Angeles', 'America/St_Johns', 'America/Santiago', 'Africa/Casablanca', 'Asia/Kathmandu', 'Asia/Tokyo', 'Australia/Lord_Howe', 'Australia/Adelaide', 'Pacific/Auckland'];

// test/e2e/journey.test.ts goes the whole way at each zone's own changes; here the runtime's own clocks and database count.
test('zones and clock changes in workerd: one brief a wanted day, none in quiet hours, then no trace', async () => {
  // Not one zone changes its clocks on all of these days; each does on some, or never.
  const spans = ['2027-03-13T00:00:00Z', '2027-03-27T00:00:00Z', '2027-04-03T00:00:00Z', '2027-09-04T00:00:00Z', '2027-09-25T00:00:00Z', '2027-10-02T00:00:00Z', '2027-10-30T00:00:00Z', '2027-11-06T00:00:00Z'];
  const isWhole = process.env['PROVE'] !== undefined;
  const stepMinutes = isWhole ? 15 : 30;
  const zones = isWhole ? ZONES : ['Europe/Vienna', 'America/St_Johns', 'Asia/Kathmandu', 'Australia/Lord_Howe'];
  for (const from of isWhole ? spans : [spans[1]!]) {
    house = await newPostHouse({ nowIso: from });
    for (const [at, timeZone] of zones.entries()) {
      const address = `p${at}@mail.example.org`;
      await house.ask('POST', POST, wish({ deliver: { at: '02:30', timeZone }, channels: [{ kind: 'mail', address, ...(at % 3 === 0 ? { quiet: { from: '22:00', to: '04:15' } } : {}) }] }));
      await house.answerAll();
      await house.form(house.pathIn('confirm', address), { confirm: '1' });
    }
    house.letters = [];
    const times: { to: string; atMs: number }[] = [];
    house.mailOutcome = (letter) => { times.push({ to: letter.to, atMs: house.nowMs }); return { state: 'sent' }; };
    for (let minutes = 0; minutes < 72 * 60; minutes += stepMinutes) {
      await house.minute();
      house.nowMs += stepMinutes * 60_000;
    }
    for (const [at, timeZone] of zones.entries()) {
      const local = times.filter(({ to }) => to.startsWith(`p${at}@`)).map(({ atMs }) => new Intl.DateTimeFormat('sv', { timeZone, dateStyle: 'short', timeStyle: 'short' }).format(atMs));
      expect(new Set(local.map((text) => text.slice(0, 10))).size, `${timeZone} ${from} ${local}`).toBe(local.length);
      expect(local.length, `${timeZone} ${from} ${local}`).toBe(3);
      for (const text of local) expect(text.slice(11) >= (at % 3 === 0 ? '04:15' : '02:30') && text.slice(11) < '05:00', `${timeZone} ${text}`).toBe(true);
      const leave = new URL(house.letters.findLast(({ to }) => to.startsWith(`p${at}@`))!.headers['List-Unsubscribe']!.slice(1, -1)).pathname;
      expect((await house.form(leave, { 'List-Unsubscribe': 'One-Click' })).status).toBe(200);
    }
    expect(await everyRow()).not.toContain('@mail.example.org');
  }
}, 300_000);
