// Browsers that are told by push: the nonce that shows that they asked, and moving to another address (T12, T21-T24, C49-C53).
import { env } from 'cloudflare:workers';
import { beforeEach, describe, expect, test } from 'vitest';
import { base64Url, base64UrlBytes } from '../../worker/secrets.ts';
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
    expect(await (await house.ask('POST', `/api/v1${manage}`, { action: 'test' })).json()).toMatchObject({ tests: [{ kind: 'push', reached: false }] });
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

test('without keys of its own a service says that it sends no push', async () => {
  house.vapid = null;
  expect((await house.ask('GET', '/api/v1/push/key')).status).toBe(404);
  expect((await house.ask('POST', POST, wish({ channels: [{ kind: 'push', ...(await newBrowser()).subscription }] }))).status).toBe(400);
  await house.withPush();
  expect(await (await house.ask('GET', '/api/v1/push/key')).json()).toEqual({ publicKey: house.vapid!.publicKey });
});
