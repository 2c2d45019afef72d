// Subscribing in the real browser: three steps with and without scripts, what was typed kept, and this browser itself told by
// push, from the press of the button to the test that it showed. What goes to it is decrypted by http_ece on the way.
import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { launch, open } from './support/chromium.ts';
import { startHouse, type DeskHouse } from './support/house.ts';
import { expectInOrder, expectKeyboard, LOOKS, lookName } from './support/journey.ts';
import { toldBrowser } from './support/push.ts';
import { Webhook } from 'standardwebhooks';
import { startWebhookSink, type Received, type WebhookSink } from '../support/sinks/webhook-sink.ts';

let browser: Browser;
let house: DeskHouse;
let hooks: WebhookSink;

beforeAll(async () => {
  [browser, house, hooks] = await Promise.all([launch(), startHouse({ sites: true }), startWebhookSink()]);
});

afterAll(async () => {
  await browser.close();
  await house.close();
  await hooks.close();
});

const on = (page: Page, name: string) => page.getByRole('button', { name, exact: true }).click();
const step = (page: Page) => page.locator('.steps-line [aria-current]').innerText();

test.each(LOOKS.map((look) => [lookName(look), look] as const))('by mail in three steps, at %s: nothing that was typed is lost, and the mail confirms what was looked over', async (name, look) => {
  const address = `ana.${look.width}.${look.scripts}@example.org`;
  const { page, complaints, close } = await open(browser, `${house.origin}/subscribe`, look);
  await page.selectOption('#wing', 'EN A');
  await page.fill('#mass', 'ninety');
  await on(page, 'On: when, and how');
  // Nothing is chosen and the mass is no number: both are said beside their fields, and stand as they were typed.
  expect(await step(page)).toContain('Where');
  expect(await page.locator('#sites-wrong').innerText()).toContain('Too few');
  expect(await page.locator('#mass-wrong').innerText()).toMatch(/a text where a number is needed/i);
  expect(await page.inputValue('#mass')).toBe('ninety');
  expect(await page.inputValue('#wing')).toBe('EN A');
  await expectInOrder(page, look);
  await page.getByLabel('Wennet Meadow', { exact: true }).check();
  await page.getByLabel('Limit sheet at Wennet Meadow').selectOption('first-hops');
  await page.fill('#mass', '92,5');
  await on(page, 'On: when, and how');
  expect(await step(page)).toContain('When');
  await page.fill('#zone', 'Europe/Nowhere');
  await page.fill('#at', '05:45');
  await page.getByLabel('Sunday').uncheck();
  await page.selectOption('#speed', 'kt');
  await on(page, 'On: look over');
  expect(await page.locator('#zone-wrong').innerText()).not.toBe('');
  expect(await page.locator('#address-wrong').innerText()).toContain('There is no way to reach you; allowed: a mail address');
  expect(await page.inputValue('#zone')).toBe('Europe/Nowhere');
  expect(await page.getByLabel('Sunday').isChecked()).toBe(false);
  await page.fill('#zone', 'Europe/Vienna');
  await page.fill('#address', address);
  await expectInOrder(page, look);
  // Back and forth: what the first step holds is still there.
  await on(page, 'Back');
  expect(await page.inputValue('#mass')).toBe('92,5');
  expect(await page.getByLabel('Limit sheet at Wennet Meadow').inputValue()).toBe('first-hops');
  await on(page, 'On: when, and how');
  expect(await page.inputValue('#address')).toBe(address);
  await on(page, 'On: look over');
  expect(await page.locator('.gist').innerText()).toMatch(new RegExp(`^A brief for Wennet Meadow \\(First hops\\), on Monday, .* and Saturday at 5:45 in Europe/Vienna, for an EN A wing at 92.5 kg; speeds in kt, heights in m\\.\\s+By mail to ${address}\\.$`));
  await on(page, 'Subscribe');
  expect(new URL(page.url()).pathname).toBe('/subscribe/sent');
  await expect.poll(() => house.letters.some(({ to }) => to === address)).toBe(true);
  const link = /\/confirm\/\S+/.exec(house.letters.find(({ to }) => to === address)?.text ?? '')?.[0] ?? '';
  await page.goto(house.origin + link);
  await on(page, 'Confirm');
  expect(new URL(page.url()).pathname).toMatch(/^\/manage\//);
  const [kept] = house.ask<{ days: number; minute: number; unit: string; sheet: string }>(
    `SELECT s.days, s.deliver_minute AS minute, s.speed_unit AS unit, p.sheet_id AS sheet FROM subscription AS s JOIN subscription_site AS p ON p.subscription_id = s.id
      JOIN channel AS c ON c.subscription_id = s.id WHERE c.target ->> 'address' = ?`, address);
  expect(kept).toEqual({ days: 63, minute: 345, unit: 'kt', sheet: 'first-hops' });
  expect(complaints.filter((text) => !text.includes('400'))).toEqual([]);
  await close();
});

/** What a program does that takes part: it echoes its challenge, and says yes to the rest. */
const echoed = ({ id, body }: Received) => (id.startsWith('chl_') ? { status: 200, body: JSON.stringify({ challenge: (JSON.parse(body) as { data: { challenge: string } }).data.challenge }) } : 204);

test.each([LOOKS[1], LOOKS[2]].map((look) => [lookName(look), look] as const))('by webhook, at %s: refused beside its field, shown its secret until it has echoed its challenge, tested and given another secret', async (_, look) => {
  const path = `/hook-${look.width}`;
  const got = () => hooks.received.filter((one) => one.path === path);
  const { page, complaints, close } = await open(browser, `${house.origin}/subscribe`, look);
  await page.getByLabel('Wennet Meadow', { exact: true }).check();
  await on(page, 'On: when, and how');
  for (const [typed, why] of [['http://hook.example.org/x', 'Not https'], ['https://10.0.0.1/x', 'An IP address instead of a name'], [`https://hook.example.com/${'x'.repeat(2060)}`, 'Longer than 2048 characters']] as const) {
    await page.fill('#hook', typed);
    await on(page, 'On: look over');
    expect(await page.locator('#hook-wrong').innerText()).toContain(why);
    expect(await page.inputValue('#hook')).toBe(typed);
    expect(await page.locator('#address-wrong').count()).toBe(0);
  }
  await expectInOrder(page, look);
  await page.fill('#hook', hooks.origin + path);
  await page.getByLabel('the webhook first').check();
  await on(page, 'On: look over');
  expect(await page.locator('.gist').innerText()).toContain(`By a webhook at ${new URL(hooks.origin).host}.`);
  await on(page, 'Subscribe');
  expect(await page.locator('.said').innerText()).toContain('Keep the address of this page');
  expect(await page.locator('.way').innerText()).toContain('It has not answered its challenge yet: no brief goes there.');
  const secret = await page.locator('.way code').innerText();
  await expectInOrder(page, look);
  const test = async (outcome: string): Promise<void> => {
    await page.getByRole('button', { name: /^Send a test/ }).click();
    await page.waitForURL(/said=test/);
    await house.settle();
    await page.goto(page.url().split('?')[0] ?? '');
    expect(await page.locator('.outcome').innerText()).toContain(outcome);
  };
  // It says yes to anything and echoes nothing: nothing but the challenge goes there.
  await test('Last test: waits: the receiver has not echoed the challenge.');
  expect(got().map(({ id }) => id.slice(0, 4))).toEqual(['chl_']);
  hooks.behave(echoed);
  await test('Last test: accepted at');
  expect(await page.locator('.way').innerText()).not.toContain('challenge');
  expect(await page.locator('.way code').count()).toBe(0);
  const sent = got().at(-1)!;
  expect(new Webhook(secret).verify(sent.body, sent.headers as Record<string, string>)).toMatchObject({ type: 'service.test' });
  // Another secret: both sign until the old one is given up.
  await page.getByRole('button', { name: /^Make a new secret/ }).click();
  const anew = await page.locator('.way code').innerText();
  await test('Last test: accepted at');
  const both = got().at(-1)!;
  for (const key of [secret, anew]) expect(new Webhook(key).verify(both.body, both.headers as Record<string, string>)).toMatchObject({ type: 'service.test' });
  await page.getByRole('button', { name: /^Give up the old secret/ }).click();
  await test('Last test: accepted at');
  const last = got().at(-1)!;
  expect(new Webhook(anew).verify(last.body, last.headers as Record<string, string>)).toMatchObject({ type: 'service.test' });
  expect(() => new Webhook(secret).verify(last.body, last.headers as Record<string, string>)).toThrow('No matching signature found');
  // A second one beside it, and not twice the same.
  for (const [typed, why] of [['https://nas.local/x', 'A name that is not public'], [hooks.origin + path, 'This webhook is there already']] as const) {
    await page.fill('#hook', typed);
    await page.getByRole('button', { name: 'Tell this webhook too' }).click();
    expect(await page.locator('#hook-wrong').innerText()).toContain(why);
    expect(await page.inputValue('#hook')).toBe(typed);
  }
  await page.fill('#hook', `${hooks.origin}${path}-too`);
  await page.getByRole('button', { name: 'Tell this webhook too' }).click();
  expect(await page.locator('.way').nth(1).locator('code').innerText()).toMatch(/^whsec_/);
  hooks.behave(() => 204);
  expect(complaints.filter((text) => !text.includes('400'))).toEqual([]);
  await close();
});

test('the three steps by keyboard alone', async () => {
  const { page, close } = await open(browser, `${house.origin}/subscribe`, { width: 1280 });
  await expectKeyboard(page);
  await page.getByLabel('Tivvern Strip', { exact: true }).focus();
  await page.keyboard.press('Space');
  // The return key goes on, never back.
  await page.locator('#mass').focus();
  await page.keyboard.press('Enter');
  await expect.poll(() => step(page)).toContain('When');
  await page.locator('#address').focus();
  await page.keyboard.type('keys@example.org');
  await page.keyboard.press('Enter');
  await expect.poll(() => step(page)).toContain('Look over');
  await close();
});

test('this browser is told: asked on a press, confirmed by the echo of its nonce, and a test counts as shown when it showed it', async () => {
  const device = house.sink.newBrowser();
  const before = house.sink.pushed.length;
  const { page, context, deliver, settled } = await toldBrowser(browser, `${house.origin}/subscribe`, { address: device.target });
  await page.getByLabel('Wennet Meadow', { exact: true }).check();
  await on(page, 'On: when, and how');
  expect(await page.inputValue('[name=endpoint]')).toBe('');
  await on(page, 'Tell this browser');
  await expect.poll(() => page.locator('.browser [role=status]').innerText()).toBe('This browser is chosen.');
  await on(page, 'On: look over');
  expect(await page.locator('.gist').innerText()).toContain('By this browser.');
  await on(page, 'Subscribe');
  expect(await page.locator('.said').innerText()).toContain('Keep the address of this page');
  expect(await page.locator('.way').innerText()).toContain('has not confirmed yet');
  // The nonce, as the push service got it.
  await expect.poll(() => house.sink.pushed.length).toBe(before + 1);
  const asked = house.sink.decrypt(house.sink.pushed[before]!) as { kind: string; nonce: string };
  expect(asked).toMatchObject({ kind: 'confirm', nonce: expect.stringMatching(/^[\w-]{32}$/) as string });
  await deliver({ ...asked, nonce: 'somebody-elses-nonce-0000000000000' });
  await settled((list) => expect(list.map(({ title }) => title)).toEqual(['Not confirmed: this browser is not told']));
  await deliver(asked);
  await settled((list) => expect(list.map(({ title }) => title)).toEqual(['This browser is told from now on']));
  // The page that stands open says so by itself.
  await expect.poll(() => page.locator('.way').innerText()).not.toContain('has not confirmed yet');
  expect(house.ask('SELECT state FROM channel WHERE target ->> \'endpoint\' = ?', device.target.endpoint)).toEqual([{ state: 'active' }]);
  // A test: taken is not shown.
  await page.getByRole('button', { name: /^Send a test/ }).click();
  await expect.poll(() => house.sink.pushed.length).toBe(before + 2);
  await page.reload();
  expect(await page.locator('.outcome').innerText()).toMatch(/^Last test: accepted at \d+:\d\d, not shown so far\.$/);
  const test = house.sink.decrypt(house.sink.pushed[before + 1]!) as { kind: string; title: string };
  expect(test).toMatchObject({ kind: 'test', title: 'Test: cannot say anything about any day' });
  await deliver(test);
  await settled((list) => expect(list.map(({ title }) => title)).toContain(test.title));
  await expect.poll(() => page.locator('.outcome').innerText()).toMatch(/^Last test: shown at \d+:\d\d\.$/);
  await expect.poll(() => page.locator('#log table').innerText()).toMatch(/test\s+Browser, 127\.0\.0\.1:\d+\s+shown at/);
  await context.close();
});

test('a browser whose push address has changed says so at its next visit, and is told at the new one once that has confirmed', async () => {
  const [was, now] = [house.sink.newBrowser().target, house.sink.newBrowser().target];
  const wish = { sites: [{ id: 'wennet-meadow' }], wing: { class: 'EN B' }, deliver: { at: '05:30', timeZone: 'Europe/Vienna' }, channels: [{ kind: 'push', endpoint: was.endpoint, keys: { p256dh: was.p256dh, auth: was.auth } }] };
  expect((await fetch(`${house.origin}/api/v1/subscriptions`, { method: 'POST', headers: { 'content-type': 'application/json' }, body: JSON.stringify(wish) })).status).toBe(202);
  await expect.poll(() => house.sink.pushed.some(({ path }) => was.endpoint.endsWith(path))).toBe(true);
  house.ask('UPDATE channel SET state = \'active\', ask_at = NULL WHERE target ->> \'endpoint\' = ? RETURNING id', was.endpoint);
  const { page, context, deliver, settled } = await toldBrowser(browser, `${house.origin}/`);
  // As the service worker keeps it when the browser tells it of the change and nobody can be reached.
  await page.evaluate(async ({ old, fresh }) => {
    const json = ({ endpoint, p256dh, auth }: typeof old) => ({ endpoint, expirationTime: null, keys: { p256dh, auth } });
    await (await caches.open('dawnmargin-pushes')).put('/push-state/renew', new Response(JSON.stringify({ old: json(old), fresh: json(fresh) })));
  }, { old: was, fresh: now });
  await page.reload();
  await expect.poll(() => house.sink.pushed.some(({ path }) => now.endpoint.endsWith(path))).toBe(true);
  expect(house.ask('SELECT target ->> \'endpoint\' AS endpoint, state FROM channel WHERE target ->> \'endpoint\' IN (?, ?)', was.endpoint, now.endpoint)).toEqual([{ endpoint: now.endpoint, state: 'unverified' }]);
  expect(await page.evaluate(async () => (await (await caches.open('dawnmargin-pushes')).match('/push-state/renew')) === undefined)).toBe(true);
  await deliver(house.sink.decrypt(house.sink.pushed.find(({ path }) => now.endpoint.endsWith(path))!));
  await settled((list) => expect(list.map(({ title }) => title)).toEqual(['This browser is told from now on']));
  expect(house.ask('SELECT state FROM channel WHERE target ->> \'endpoint\' = ?', now.endpoint)).toEqual([{ state: 'active' }]);
  await context.close();
});

test('a browser that signed up under a key that is no longer ours asks for another address at its next visit, and is told there', async () => {
  const [was, now] = [house.sink.newBrowser().target, house.sink.newBrowser().target];
  const json = ({ endpoint, p256dh, auth }: typeof was) => ({ endpoint, expirationTime: null, keys: { p256dh, auth } });
  const wish = { sites: [{ id: 'wennet-meadow' }], wing: { class: 'EN B' }, deliver: { at: '05:30', timeZone: 'Europe/Vienna' }, channels: [{ kind: 'push', endpoint: was.endpoint, keys: json(was).keys }] };
  expect((await fetch(`${house.origin}/api/v1/subscriptions`, { method: 'POST', headers: { 'content-type': 'application/json' }, body: JSON.stringify(wish) })).status).toBe(202);
  house.ask('UPDATE channel SET state = \'active\', ask_at = NULL, push_key = \'another-key-\' WHERE target ->> \'endpoint\' = ? RETURNING id', was.endpoint);
  const { page, context, deliver, settled } = await toldBrowser(browser, `${house.origin}/`);
  // As the service worker kept it when it confirmed, two days ago; and the browser's own push service, as this page's stand-in.
  await page.evaluate(async (old) => {
    await (await caches.open('dawnmargin-pushes')).put('/push-state/told', new Response(JSON.stringify({ at: Date.now() - 2 * 86_400_000, ...old })));
  }, json(was));
  const [worker] = context.serviceWorkers();
  await worker?.evaluate(({ old, fresh }) => {
    const asked: string[] = [];
    Object.assign(globalThis, { asked });
    const given = (value: typeof old) => value as unknown as PushSubscription;
    PushManager.prototype.getSubscription = () => Promise.resolve({
      options: { applicationServerKey: new Uint8Array(65).fill(4).buffer, userVisibleOnly: true }, unsubscribe: () => { asked.push('unsubscribe'); return Promise.resolve(true); }, toJSON: () => given(old),
    } as unknown as PushSubscription);
    PushManager.prototype.subscribe = (options) => {
      asked.push(btoa(String.fromCharCode(...(options?.applicationServerKey as Uint8Array))).replaceAll('+', '-').replaceAll('/', '_').replaceAll('=', ''));
      return Promise.resolve({ toJSON: () => given(fresh) } as unknown as PushSubscription);
    };
  }, { old: json(was), fresh: json(now) });
  await page.reload();
  await expect.poll(() => house.sink.pushed.some(({ path }) => now.endpoint.endsWith(path))).toBe(true);
  const { publicKey } = (await (await fetch(`${house.origin}/api/v1/push/key`)).json()) as { publicKey: string };
  expect(await worker?.evaluate(() => (globalThis as unknown as { asked: string[] }).asked)).toEqual(['unsubscribe', publicKey]);
  expect(house.ask('SELECT target ->> \'endpoint\' AS endpoint, state, push_key AS pushKey FROM channel WHERE target ->> \'endpoint\' IN (?, ?)', was.endpoint, now.endpoint)).toEqual([{ endpoint: now.endpoint, state: 'unverified', pushKey: publicKey.slice(1, 13) }]);
  await deliver(house.sink.decrypt(house.sink.pushed.find(({ path }) => now.endpoint.endsWith(path))!));
  await settled((list) => expect(list.map(({ title }) => title)).toEqual(['This browser is told from now on']));
  expect(house.ask('SELECT state FROM channel WHERE target ->> \'endpoint\' = ?', now.endpoint)).toEqual([{ state: 'active' }]);
  await context.close();
});
