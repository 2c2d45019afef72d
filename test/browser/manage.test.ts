// The page of a subscription in the real browser: what it says, what its forms change, and what they refuse without losing a letter.
import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { launch, open } from './support/chromium.ts';
import { startHouse, type DeskHouse } from './support/house.ts';
import { expectInOrder, expectKeyboard, LOOKS, lookName } from './support/journey.ts';

let browser: Browser;
let house: DeskHouse;

beforeAll(async () => {
  [browser, house] = await Promise.all([launch(), startHouse({ sites: true })]);
});

afterAll(async () => {
  await browser.close();
  await house.close();
});

/** A confirmed subscription by mail; the path of its page. */
async function subscription(address: string, over: Readonly<Record<string, unknown>> = {}): Promise<string> {
  const wish = {
    sites: [{ id: 'wennet-meadow', sheet: 'first-hops' }, { id: 'tivvern-strip' }], wing: { class: 'EN A', allUpMassKg: 92 }, deliver: { at: '05:30', timeZone: 'Europe/Vienna' },
    channels: [{ kind: 'mail', address }], ...over,
  };
  const answer = await fetch(`${house.origin}/api/v1/subscriptions`, { method: 'POST', headers: { 'content-type': 'application/json' }, body: JSON.stringify(wish) });
  expect(answer.status).toBe(202);
  const { links } = (await answer.json()) as { links?: { manage: string } };
  if (links !== undefined) return new URL(links.manage).pathname;
  await expect.poll(() => house.letters.some(({ to }) => to === address)).toBe(true);
  const confirm = /\/confirm\/\S+/.exec(house.letters.find(({ to }) => to === address)?.text ?? '')?.[0] ?? '';
  const confirmed = await fetch(house.origin + confirm, { method: 'POST', redirect: 'manual', headers: { 'content-type': 'application/x-www-form-urlencoded' }, body: 'confirm=1' });
  expect(confirmed.status).toBe(303);
  return (confirmed.headers.get('location') ?? '').split('?')[0] ?? '';
}

const said = (page: Page) => page.locator('.said').innerText();
const press = (page: Page, name: string | RegExp) => page.getByRole('button', { name }).click();

test.each(LOOKS.map((look) => [lookName(look), look] as const))('changed, tested, paused, resumed and left, at %s', async (_, look) => {
  const address = `ben.${look.width}.${look.scripts}@example.org`;
  const path = await subscription(address);
  const { page, complaints, close } = await open(browser, house.origin + path, look);
  expect(await page.locator('.gist').innerText()).toMatch(/^A brief for Tivvern Strip \(Solo tow\) and Wennet Meadow \(First hops\), every day at 5:30 in Europe\/Vienna, for an EN A wing at 92 kg; speeds in m\/s, heights in m\.\s+By mail \(b…@example\.org\)\. The next one comes on /);
  await expectInOrder(page, look);

  // A test is honest: handed over, and no more is claimed of a mail.
  await press(page, /^Send a test/);
  await expect.poll(() => house.letters.filter(({ to }) => to === address).length).toBe(2);
  expect(house.letters.findLast(({ to }) => to === address)?.text).toContain('asked for on the page of your subscription');
  await page.goto(house.origin + path);
  expect(await page.locator('.outcome').innerText()).toMatch(/^Last test: accepted at \d+:\d\d\.$/);
  expect(await page.locator('.way').innerText()).toContain('Whether it was read is not known here.');
  expect(await page.locator('#log table').innerText()).toMatch(/test\s+Mail, b…@example\.org\s+accepted at/);

  // What cannot be is said beside its field, and what was typed stands there still.
  await page.getByLabel('Wennet Meadow', { exact: true }).uncheck();
  await page.getByLabel('Limit sheet at Tivvern Strip').selectOption('tandem-tow');
  await page.fill('#mass', '4000');
  await page.fill('#at', '06:10');
  await press(page, 'Use these from the next brief on');
  expect(await page.locator('[role=alert]').innerText()).toContain('Nothing was changed');
  expect(await page.locator('#mass-wrong').innerText()).toContain('20 to 500 kg');
  expect([await page.inputValue('#mass'), await page.inputValue('#at'), await page.getByLabel('Limit sheet at Tivvern Strip').inputValue()]).toEqual(['4000', '06:10', 'tandem-tow']);
  expect(await page.locator('.gist').innerText()).toContain('every day at 5:30');
  await page.fill('#mass', '104');
  await press(page, 'Use these from the next brief on');
  expect(await said(page)).toContain('From the next brief on this counts.');
  expect(await page.locator('.gist').innerText()).toMatch(/^A brief for Tivvern Strip \(Tandem tow\), every day at 6:10 .* at 104 kg/);

  // Quiet hours of the channel, and how they are refused.
  await page.getByLabel('Quiet from').fill('22:00');
  await press(page, /^Keep quiet then/);
  expect(await page.locator('.way .wrong').innerText()).toContain('need a beginning and an end');
  expect(await page.getByLabel('Quiet from').inputValue()).toBe('22:00');
  await page.locator('.way [name=to]').fill('05:00');
  await press(page, /^Keep quiet then/);
  expect(await said(page)).toBe('Quiet hours are kept from now on.');
  expect(house.ask('SELECT quiet_from, quiet_to FROM channel WHERE target ->> \'address\' = ?', address)).toEqual([{ quiet_from: 1320, quiet_to: 300 }]);

  // A pause until a day, and no day that has been.
  await page.fill('[name=until]', '2020-01-01');
  await press(page, 'Pause');
  expect(await page.locator('#until-wrong').innerText()).toContain('Not a day to come');
  await page.fill('[name=until]', '2099-01-01');
  await press(page, 'Pause');
  expect(await page.locator('.gist').innerText()).toContain('Paused: no brief comes before Thursday 1 January 2099.');
  await press(page, 'Resume now');
  expect(await page.locator('.gist').innerText()).toContain('The next one comes on');

  // New links end the old; then everything goes.
  await press(page, 'Make new links');
  const anew = new URL(page.url()).pathname;
  expect(anew).not.toBe(path);
  expect((await fetch(house.origin + path)).status).toBe(404);
  await press(page, 'End the subscription');
  expect(await page.locator('h1').innerText()).toBe('The subscription has ended');
  expect((await fetch(house.origin + anew)).status).toBe(404);
  expect(JSON.stringify(house.ask('SELECT * FROM channel'))).not.toContain(address);
  expect(complaints.filter((text) => !text.includes('400'))).toEqual([]);
  await close();
});

test('looking changes nothing, and a page loaded again does nothing twice', async () => {
  const path = await subscription('gaze@example.org');
  const tables = (): string => JSON.stringify(['subscription', 'subscription_site', 'channel', 'outbox', 'token', 'rate'].map((table) => house.ask(`SELECT * FROM ${table}`)));
  const before = tables();
  for (const query of ['', '?said=test', '?said=<b>x</b>', '?action=end', '?action=test']) {
    for (const method of ['GET', 'HEAD']) expect((await fetch(`${house.origin}${path}${query}`, { method })).status).toBe(200);
  }
  expect(tables()).toBe(before);
  const { page, close } = await open(browser, house.origin + path, { width: 1280 });
  await press(page, /^Send a test/);
  await expect.poll(() => house.letters.filter(({ to }) => to === 'gaze@example.org').length).toBe(2);
  await page.waitForURL(/said=test/);
  await page.waitForLoadState('networkidle');
  await page.reload();
  await page.waitForLoadState('networkidle');
  await page.reload();
  await house.settle();
  expect(house.letters.filter(({ to }) => to === 'gaze@example.org')).toHaveLength(2);
  await close();
});

test('a way that fails says why; the order is its owner’s; the last way is only taken away with the subscription', async () => {
  const gone = house.sink.newBrowser();
  house.sink.answer((pushed) => ({ status: gone.target.endpoint.endsWith(pushed.path) ? 410 : 201 }));
  const { endpoint, p256dh, auth } = gone.target;
  const path = await subscription('both@example.org', { channels: [{ kind: 'push', endpoint, keys: { p256dh, auth } }, { kind: 'mail', address: 'both@example.org' }] });
  // As if it had confirmed before its push service forgot it.
  house.ask('UPDATE channel SET state = \'active\' WHERE target ->> \'endpoint\' = ? RETURNING id', endpoint);
  const { page, close } = await open(browser, house.origin + path, { width: 390 });
  expect(await page.locator('.way h3').allInnerTexts()).toEqual([expect.stringMatching(/^1\. Browser/), '2. Mail, b…@example.org']);
  await press(page, /^Send a test: Browser/);
  await page.waitForURL(/said=test/);
  await house.settle();
  await page.waitForLoadState('networkidle');
  await page.reload();
  expect(await page.locator('.way').first().innerText()).toContain('Ended: the push service answered 410: the subscription has ended.');
  expect(await page.locator('#log table').innerText()).toMatch(/failed: the push service answered 410/);
  await press(page, /^Try this way earlier/);
  await expect.poll(() => page.locator('.way h3').allInnerTexts()).toEqual(['1. Mail, b…@example.org', expect.stringMatching(/^2\. Browser/)]);
  await press(page, /^Take it away: Browser/);
  await expect.poll(() => page.locator('.way').count()).toBe(1);
  expect(await page.getByRole('button', { name: /^Take it away/ }).count()).toBe(0);
  await expectKeyboard(page);
  house.sink.answer(() => ({ status: 201 }));
  await close();
});

test('every token that is none gets one page, and ten tests a day are sent', async () => {
  const bodies = new Set<string>();
  for (const token of ['x', 'a.1.abc', `${'a'.repeat(24)}.1.${'b'.repeat(32)}`, '%00', 'x'.repeat(5000)]) {
    const answer = await fetch(`${house.origin}/manage/${token}`);
    expect(answer.status).toBe(404);
    bodies.add(await answer.text());
  }
  expect(bodies.size).toBe(1);
  const path = await subscription('often@example.org');
  const [{ id } = { id: '' }] = house.ask<{ id: string }>('SELECT id FROM channel WHERE target ->> \'address\' = ?', 'often@example.org');
  const ask = () => fetch(house.origin + path, { method: 'POST', redirect: 'manual', headers: { 'content-type': 'application/x-www-form-urlencoded' }, body: new URLSearchParams({ action: 'test', channel: id }).toString() });
  for (let nth = 0; nth < 10; nth += 1) expect((await ask()).status).toBe(303);
  const refused = await ask();
  expect(refused.status).toBe(429);
  expect(await refused.text()).toContain('Ten tests a day are sent');
});
