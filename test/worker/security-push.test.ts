// Browsers that are told by push: the nonce that shows that they asked, and moving to another address (T12, T21-T24, C49-C53).
import { env } from 'cloudflare:workers';
import { Webhook } from 'standardwebhooks';
import { beforeEach, describe, expect, test, vi } from 'vitest';
import { base64Url, base64UrlBytes, linkToken } from '../../worker/secrets.ts';
import { LINK_KEY } from './support/house.ts';
import { everyRow, newPostHouse, wish, type PostHouse } from './support/post-house.ts';
import { newBrowser, type TestBrowser } from './support/browser.ts';

let house: PostHouse;
const POST = '/api/v1/subscriptions';
const CONFIRM = `${POST}/confirm-push`;
const RENEW = '/api/v1/push/renew';

beforeEach(async () => {
  house = await newPostHouse({ nowIso: '2027-05-13T20:00:00Z' });
  await house.withPush();
});

const state = async (): Promise<unknown> => (await env.DB.prepare('SELECT state FROM channel').all()).results.map((row) => row['state']);
const pushesTo = (browser: TestBrowser) => house.pushes.filter(({ url }) => url === browser.subscription.endpoint);

async function signedUp(browser: TestBrowser): Promise<string> {
  const response = await house.ask('POST', POST, wish({ channels: [{ kind: 'push', ...browser.subscription }] }));
  expect(response.status).toBe(202);
  await house.answerAll();
  return new URL(((await response.json()) as { links: { manage: string } }).links.manage).pathname;
}

/** The nonce of the newest push, as only this browser can read it. */
async function nonceFor(browser: TestBrowser): Promise<string> {
  const read = (await browser.read(pushesTo(browser).at(-1)!.body)) as { kind: string; nonce: string };
  expect(read.kind).toBe('confirm');
  return read.nonce;
}

async function confirmed(browser: TestBrowser): Promise<string> {
  const manage = await signedUp(browser);
  expect((await house.ask('POST', CONFIRM, { nonce: await nonceFor(browser) })).status).toBe(200);
  return manage;
}

async function morning(iso = '2027-05-14T04:00:00Z'): Promise<void> {
  house.nowMs = Date.parse(iso);
  await house.minute();
}

describe('the first yes', () => {
  test('T24 a browser is sent a nonce, echoes it, and is told from then on; the nonce is kept as a hash, for one use', async () => {
    const browser = await newBrowser();
    await signedUp(browser);
    expect(await state()).toEqual(['unverified']);
    const nonce = await nonceFor(browser);
    expect(await everyRow()).not.toContain(nonce);
    const first = await house.ask('POST', CONFIRM, { nonce });
    expect([first.status, await first.json()]).toEqual([200, { state: 'active' }]);
    expect((await house.ask('POST', CONFIRM, { nonce })).status).toBe(404);
    await morning();
    expect(await browser.read(pushesTo(browser).at(-1)!.body)).toMatchObject({ kind: 'brief' });
    expect(pushesTo(browser).length).toBe(2);
  });

  test('T24 somebody else\'s address with keys of one\'s own: the nonce cannot be read, no brief goes there, and after 48 hours nothing is kept', async () => {
    const victim = await newBrowser();
    const stranger = await newBrowser();
    await house.ask('POST', POST, wish({ channels: [{ kind: 'push', endpoint: victim.subscription.endpoint, keys: stranger.subscription.keys }] }));
    await house.answerAll();
    await expect(victim.read(pushesTo(victim)[0]!.body)).rejects.toThrow();
    await morning();
    for (let index = 0; index < 6; index += 1) {
      house.nowMs += 5 * 60_000;
      await house.minute();
    }
    expect(pushesTo(victim).length).toBe(1);
    house.nowMs = Date.parse('2027-05-15T20:00:00Z');
    await house.minute();
    expect(await everyRow()).toContain(victim.subscription.endpoint);
    house.nowMs += 60_000;
    await house.minute();
    expect(await everyRow()).not.toContain(victim.subscription.endpoint);
  });

  test('T24 however often somebody signs up with it, a browser is asked five times a day at most', async () => {
    const browser = await newBrowser();
    for (let index = 0; index < 9; index += 1) await signedUp(browser);
    expect(pushesTo(browser).length).toBe(5);
  });

  test('T12 a nonce is for this alone, for 48 hours, and every wrong one gets one answer', async () => {
    const browser = await newBrowser();
    await signedUp(browser);
    const nonce = await nonceFor(browser);
    expect((await house.form(`/confirm/${nonce}`, { confirm: '1' })).status).toBe(404);
    const answers = new Set<string>();
    for (const wrong of ['', 'x', nonce.slice(0, -1), `${nonce}x`, nonce.toUpperCase(), '\u0000', 'ä'.repeat(32)]) {
      const response = await house.ask('POST', CONFIRM, { nonce: wrong });
      answers.add(`${response.status} ${await response.text()}`);
    }
    house.nowMs += 48 * 3_600_000 + 1;
    const late = await house.ask('POST', CONFIRM, { nonce });
    answers.add(`${late.status} ${await late.text()}`);
    expect([...answers]).toHaveLength(1);
    expect([...answers][0]).toMatch(/^404 /);
  });

  test('one that asks for a test before it has answered is asked once more', async () => {
    const browser = await newBrowser();
    const manage = await signedUp(browser);
    expect(await (await house.ask('POST', `/api/v1${manage}`, { action: 'test' })).json()).toMatchObject({ tests: [{ kind: 'push', state: 'asked', id: null }] });
    await house.answerAll();
    expect(pushesTo(browser).length).toBe(2);
    expect((await house.ask('POST', CONFIRM, { nonce: await nonceFor(browser) })).status).toBe(200);
  });

  test('a push service that is away for a while is asked again, one that knows no such browser is not', async () => {
    const browser = await newBrowser();
    house.pushStatus = 503;
    await signedUp(browser);
    house.pushStatus = 201;
    for (let index = 0; index < 12; index += 1) await house.minutes(1);
    expect((await house.ask('POST', CONFIRM, { nonce: await nonceFor(browser) })).status).toBe(200);
    const gone = await newBrowser();
    house.pushStatus = 410;
    await signedUp(gone);
    expect(await state()).toEqual(expect.arrayContaining(['active', 'dead']));
  });
});

describe('moving', () => {
  test('who knows the old address with its secret moves it; the new one shows by a nonce that it asked', async () => {
    const [old, fresh] = [await newBrowser(), await newBrowser()];
    await confirmed(old);
    const response = await house.ask('POST', RENEW, { old: { ...old.subscription, expirationTime: null }, fresh: { ...fresh.subscription, expirationTime: null } });
    expect([response.status, await response.json()]).toEqual([200, { state: 'unverified' }]);
    await house.answerAll();
    expect(await everyRow()).not.toContain(old.subscription.endpoint);
    expect((await house.ask('POST', CONFIRM, { nonce: await nonceFor(fresh) })).status).toBe(200);
    await morning();
    expect(await fresh.read(pushesTo(fresh).at(-1)!.body)).toMatchObject({ kind: 'brief' });
    const same = await house.ask('POST', RENEW, { old: fresh.subscription, fresh: fresh.subscription });
    expect(await same.json()).toEqual({ state: 'active' });
    expect((await house.ask('POST', RENEW, { old: old.subscription, fresh: fresh.subscription })).status).toBe(410);
  });

  test('a brief that falls between the move and the answer waits for it', async () => {
    const [old, fresh] = [await newBrowser(), await newBrowser()];
    await confirmed(old);
    await house.ask('POST', RENEW, { old: old.subscription, fresh: fresh.subscription });
    await morning();
    expect(pushesTo(old).length).toBe(1);
    expect((await house.ask('POST', CONFIRM, { nonce: await nonceFor(fresh) })).status).toBe(200);
    await house.minutes(3);
    expect(await fresh.read(pushesTo(fresh).at(-1)!.body)).toMatchObject({ kind: 'brief' });
  });

  test('T24 a stranger moves nothing: not by the address alone, not with keys of one\'s own, not by a link that is none', async () => {
    const [browser, stranger] = [await newBrowser(), await newBrowser()];
    const manage = await confirmed(browser);
    const before = await everyRow();
    const bodies = [
      { old: { ...browser.subscription, keys: stranger.subscription.keys }, fresh: stranger.subscription }, { old: stranger.subscription, fresh: browser.subscription },
      { fresh: stranger.subscription }, { token: `${manage.split('/').at(-1)}x`, fresh: stranger.subscription }, { token: '', old: browser.subscription, fresh: stranger.subscription },
    ];
    const answers = new Set<string>();
    for (const body of bodies) {
      const response = await house.ask('POST', RENEW, body);
      answers.add(`${response.status} ${await response.text()}`);
    }
    expect([...answers]).toHaveLength(1);
    expect([...answers][0]).toMatch(/^410 /);
    expect(await everyRow()).toBe(before);
  });

  test('the manage link moves its own browser', async () => {
    const [old, fresh] = [await newBrowser(), await newBrowser()];
    const manage = await confirmed(old);
    expect(await (await house.ask('POST', RENEW, { token: manage.split('/').at(-1), fresh: fresh.subscription })).json()).toEqual({ state: 'unverified' });
    await house.answerAll();
    expect((await house.ask('POST', CONFIRM, { nonce: await nonceFor(fresh) })).status).toBe(200);
    expect(await (await house.ask('GET', `/api/v1${manage}`)).json()).toMatchObject({ channels: [{ kind: 'push', state: 'active' }] });
  });

  test('C53 the same address with new keys: taken over once they are proven, and by every subscription of that browser', async () => {
    const browser = await newBrowser();
    await confirmed(browser);
    const again = await newBrowser(browser.subscription.endpoint);
    await signedUp(again);
    await morning();
    await expect(again.read(pushesTo(browser).at(-1)!.body)).rejects.toThrow();
    house.nowMs = Date.parse('2027-05-14T05:00:00Z');
    const asked = await Promise.all(pushesTo(browser).map(({ body }) => again.read(body).catch(() => null)));
    const { nonce } = asked.find((one) => one !== null) as { nonce: string };
    expect((await house.ask('POST', CONFIRM, { nonce })).status).toBe(200);
    const { results } = await env.DB.prepare(`SELECT DISTINCT target FROM channel`).all<{ target: string }>();
    expect(results.map(({ target }) => (JSON.parse(target) as { p256dh: string }).p256dh)).toEqual([again.subscription.keys.p256dh]);
  });

  test('T23 C51 C52 C49 C50 what is no browser is refused with its place, and moves nothing', async () => {
    const browser = await newBrowser();
    await confirmed(browser);
    const before = await everyRow();
    const { endpoint, keys } = browser.subscription;
    const point = base64UrlBytes(keys.p256dh);
    const bytes = (length: number): string => base64Url(crypto.getRandomValues(new Uint8Array(length)));
    const wrong: readonly [string, unknown][] = [
      ...[point.subarray(0, 64), Uint8Array.from([...point, 0]), Uint8Array.from(point, (byte, at) => (at === 64 ? byte ^ 1 : byte)), Uint8Array.from([2, ...point.subarray(1, 33)]), new Uint8Array(65)]
        .map((p256dh) => ['C51', { endpoint, keys: { ...keys, p256dh: base64Url(p256dh) } }] as [string, unknown]),
      ['C51', { endpoint, keys: { ...keys, p256dh: '*'.repeat(87) } }],
      ...[bytes(15), bytes(17), ''].map((auth) => ['C52', { endpoint, keys: { ...keys, auth } }] as [string, unknown]),
      ['C49', { endpoint: 'https://evil.example/fcm.googleapis.com?x=fcm.googleapis.com', keys }],
      ...['http://fcm.googleapis.com/x', 'https://fcm.googleapis.com:8443/x', 'https://fcm.googleapis.com.evil.example/x'].map((address) => ['C50', { endpoint: address, keys }] as [string, unknown]),
    ];
    for (const [id, subscription] of wrong) {
      const renewed = await house.ask('POST', RENEW, { old: browser.subscription, fresh: subscription });
      expect([renewed.status, await renewed.text()], `${id} ${JSON.stringify(subscription)}`).toEqual([400, expect.stringContaining('$.fresh')]);
      const asked = await house.ask('POST', POST, wish({ channels: [{ kind: 'push', ...(subscription as object) }] }));
      expect([asked.status, await asked.text()], `${id} ${JSON.stringify(subscription)}`).toEqual([400, expect.stringContaining('$.channels[0]')]);
    }
    expect(await everyRow()).toBe(before);
    const padded = { endpoint, keys: { p256dh: `${keys.p256dh}=`, auth: `${keys.auth}==` } };
    expect(await (await house.ask('POST', RENEW, { old: padded, fresh: padded })).json()).toEqual({ state: 'active' });
  });
});

describe('T34 another key of ours', () => {
  /** A push service as RFC 8292, section 4.2, has it: of a browser that signed up under a key it takes no other. */
  function pushService(): { signUp(browser: TestBrowser, publicKey: string): void; readonly refused: string[] } {
    const keys = new Map<string, string>();
    const refused: string[] = [];
    house.pushAnswer = ({ url, headers }) => {
      const under = /k=([\w-]+)$/.exec(headers.get('authorization') ?? '')?.[1];
      if (under === keys.get(url)) return 201;
      refused.push(url);
      return 403;
    };
    return { signUp: (browser, publicKey) => { keys.set(browser.subscription.endpoint, publicKey); }, refused };
  }
  const outbox = async () => (await env.DB.prepare('SELECT state, COUNT(*) AS n FROM outbox GROUP BY state').all()).results;
  const keyOf = (browser: TestBrowser) => env.DB.prepare(`SELECT push_key FROM channel WHERE target ->> 'endpoint' = ?`).bind(browser.subscription.endpoint).first('push_key');

  test('T34 keys changed while a morning is being sent: no send fails, each browser is told under the key that it signed up under', async () => {
    const service = pushService();
    const old = house.vapid!;
    const [first, waits, late] = [await newBrowser(), await newBrowser(), await newBrowser()];
    for (const browser of [first, waits]) {
      service.signUp(browser, old.publicKey);
      await confirmed(browser);
    }
    const answer = house.pushAnswer;
    house.pushAnswer = (push) => (push.url === waits.subscription.endpoint ? 503 : answer(push));
    await morning();
    expect(await outbox()).toEqual([{ state: 'pending', n: 1 }, { state: 'sent', n: 1 }]);
    // In the middle of it.
    house.vapidBefore = old;
    await house.withPush();
    house.pushAnswer = answer;
    expect(await (await house.ask('GET', '/api/v1/push/key')).json()).toEqual({ publicKey: house.vapid!.publicKey });
    await house.minutes(5);
    expect(await outbox()).toEqual([{ state: 'sent', n: 2 }]);
    // One that signs up now does so under the new key; one whose page was open before the change, under the old.
    const fresh = await newBrowser();
    service.signUp(fresh, house.vapid!.publicKey);
    service.signUp(late, old.publicKey);
    for (const browser of [fresh, late]) await confirmed(browser);
    expect(service.refused).toEqual([late.subscription.endpoint]);
    await morning('2027-05-15T04:00:00Z');
    expect(await outbox()).toEqual([{ state: 'sent', n: 6 }]);
    expect(service.refused).toHaveLength(1);
    const ids = await Promise.all([first, waits, late, fresh].map(keyOf));
    expect(new Set(ids.slice(0, 3)).size).toBe(1);
    expect(new Set(ids).size).toBe(2);
    // Its next visit brings a browser under the new key; the old one is given up, and who has not been here since has to.
    const again = await newBrowser();
    service.signUp(again, house.vapid!.publicKey);
    expect((await house.ask('POST', RENEW, { old: first.subscription, fresh: again.subscription })).status).toBe(200);
    await house.answerAll();
    expect((await house.ask('POST', CONFIRM, { nonce: await nonceFor(again) })).status).toBe(200);
    expect(await keyOf(again)).toBe(ids[3]);
    house.vapidBefore = null;
    await morning('2027-05-16T04:00:00Z');
    expect((await env.DB.prepare(`SELECT reason, COUNT(*) AS n FROM outbox WHERE due_local_date = '2027-05-16' GROUP BY reason ORDER BY n, reason`).all()).results).toEqual([
      { reason: 'taken by the receiver', n: 2 }, { reason: 'this browser signed up under a key that is given up: it signs up again at its next visit', n: 2 },
    ]);
    // That quarrels with nobody: the others at the same push service are told.
    expect(service.refused).toHaveLength(1);
    expect(await state()).toEqual(['active', 'active', 'active', 'active']);
  });

  test('T34 a browser of before keys were written down is told under the key before, and its key is written down', async () => {
    const service = pushService();
    const browser = await newBrowser();
    service.signUp(browser, house.vapid!.publicKey);
    await confirmed(browser);
    const id = await keyOf(browser);
    await env.DB.prepare('UPDATE channel SET push_key = NULL').run();
    house.vapidBefore = house.vapid;
    await house.withPush();
    await morning();
    expect([await outbox(), await keyOf(browser), service.refused]).toEqual([[{ state: 'sent', n: 1 }], id, []]);
  });
});

test('T34 another key of links: what webhooks are sent is signed under both, and links of the one before lead nowhere', async () => {
  const before = 'the-link-key-of-before-for-tests-0123456789';
  house.options = { ...house.options, env: { LINK_KEY: before }, answer: (post) => (post.id.startsWith('chl_') ? new Response(JSON.stringify({ challenge: (JSON.parse(post.body) as { data: { challenge: string } }).data.challenge })) : new Response(null, { status: 204 })) };
  const made = (await (await house.ask('POST', POST, wish({ channels: [{ kind: 'webhook', url: 'http://127.0.0.1:9/hook' }] }))).json()) as { links: { manage: string }; webhookSecret: string };
  await morning();
  const verified = (secret: string) => new Webhook(secret).verify(house.posts.at(-1)!.body, Object.fromEntries(house.posts.at(-1)!.headers));
  vi.setSystemTime(house.nowMs);
  expect(verified(made.webhookSecret)).toMatchObject({ type: 'brief.issued' });
  house.options = { ...house.options, env: { LINK_KEY_BEFORE: before } };
  await morning('2027-05-15T04:00:00Z');
  vi.setSystemTime(house.nowMs);
  expect(verified(made.webhookSecret)).toMatchObject({ type: 'brief.issued' });
  const { id } = (await env.DB.prepare('SELECT id FROM subscription').first<{ id: string }>())!;
  const page = await house.ask('GET', `/manage/${await linkToken(LINK_KEY, { purpose: 'manage', id, version: 1 })}`);
  const anew = /whsec_[\w+/=]+/.exec(await page.text())?.[0] ?? '';
  expect(anew).not.toBe(made.webhookSecret);
  expect(verified(anew)).toMatchObject({ type: 'brief.issued' });
  expect((await house.ask('GET', new URL(made.links.manage).pathname)).status).toBe(404);
  vi.useRealTimers();
});

test('without keys of its own a service says that it sends no push', async () => {
  house.vapid = null;
  expect((await house.ask('GET', '/api/v1/push/key')).status).toBe(404);
  expect((await house.ask('POST', POST, wish({ channels: [{ kind: 'push', ...(await newBrowser()).subscription }] }))).status).toBe(400);
  await house.withPush();
  expect(await (await house.ask('GET', '/api/v1/push/key')).json()).toEqual({ publicKey: house.vapid!.publicKey });
});
