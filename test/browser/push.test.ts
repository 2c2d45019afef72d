// Pushes delivered to the real service worker through the DevTools protocol: old, late, out of order, twice, unreadable.
import type { Browser, BrowserContext, Page } from 'playwright-core';
import { afterAll, beforeAll, beforeEach, afterEach, expect, test } from 'vitest';
import { pages } from '../../worker/routes/pages.ts';
import { dayOf } from '../support/days.ts';
import { fixtureServices } from '../support/page-fixtures.ts';
import { launch } from './support/chromium.ts';
import { toldBrowser, type ToldBrowser } from './support/push.ts';
import { serve, type Served } from './support/server.ts';

let browser: Browser;
let site: Served;
let context: BrowserContext;
let page: Page;
let push: ToldBrowser['deliver'];
let settled: ToldBrowser['settled'];

const at = (minutes: number) => new Date(Date.now() + minutes * 60_000).toISOString();
const brief = (part: Record<string, unknown>) => ({ id: 'm1', kind: 'brief', title: 'Beyond a limit all day, Kestrel Edge', body: 'Beyond a limit all day.', url: `${site.origin}/sites/kestrel-edge`, issuedAt: at(-5), validUntil: at(600), thread: 't', ...part });

beforeAll(async () => {
  const hours = dayOf('wwbb');
  const day = { ...hours, siteId: 'kestrel-edge', demo: false, issuedAt: at(-10), validUntil: at(600) };
  [browser, site] = await Promise.all([launch(), serve(pages(fixtureServices({ 'kestrel-edge': day }, new Date())))]);
});

afterAll(async () => {
  await browser.close();
  await site.close();
});

beforeEach(async () => {
  ({ context, page, deliver: push, settled } = await toldBrowser(browser, `${site.origin}/sites/kestrel-edge`));
});

afterEach(() => context.close());

test('a push is shown with its times; a newer one of its thread takes its place, and turns the open page into expired', async () => {
  await push(brief({}));
  await settled((list) => { expect(list).toHaveLength(1); expect(list[0]?.title).toBe('Beyond a limit all day, Kestrel Edge'); expect(list[0]?.body).toMatch(/^As of .*, until .*\. Beyond a limit all day\.$/); });
  await push(brief({ id: 'm2', issuedAt: at(-1), title: 'Cannot say all day, Kestrel Edge', body: 'Cannot say.' }));
  await settled((list) => expect(list.map(({ title }) => title)).toEqual(['Cannot say all day, Kestrel Edge']));
  await expect.poll(() => page.locator('main').innerText()).toContain('Expired: a newer brief has come');
  expect(await page.locator('body').innerText()).not.toMatch(/within limits|close to a limit|beyond a limit|cannot say/i);
  expect(await page.title()).toMatch(/^Expired/);
});

test('an older one that comes after a newer one is not shown, even when the newer was wiped away', async () => {
  await push(brief({ id: 'new', issuedAt: at(-1), title: 'Cannot say all day, Kestrel Edge' }));
  await settled((list) => expect(list).toHaveLength(1));
  await page.evaluate(async () => { for (const notification of await (await navigator.serviceWorker.ready).getNotifications()) notification.close(); });
  await settled((list) => expect(list).toHaveLength(0));
  await push(brief({ id: 'old', issuedAt: at(-50), title: 'Within limits, Kestrel Edge', body: 'Within limits.' }));
  await settled((list) => expect(list).toMatchObject([{ title: 'Cannot say all day, Kestrel Edge', silent: true }]));
});

test('two subscriptions on one device keep their own newest: of each thread the newest stands, whatever order they come in', async () => {
  const one = (minutes: number, title: string) => brief({ id: `one${minutes}`, thread: 'one', issuedAt: at(minutes), title });
  const two = (minutes: number, title: string) => brief({ id: `two${minutes}`, thread: 'two', issuedAt: at(minutes), title });
  for (const message of [one(-1, 'Beyond a limit at 1 site'), two(-30, 'Cannot say at 1 site'), one(-40, 'Within limits at 1 site'), two(-2, 'Close to a limit at 1 site'), two(-35, 'Within limits at 1 site')]) await push(message);
  await settled((list) => expect(list.map(({ title }) => title).sort()).toEqual(['Beyond a limit at 1 site', 'Close to a limit at 1 site']));
});

test('T36 a page left open overnight says expired, and keeps no verdict', async () => {
  const left = await context.newPage();
  await left.clock.install();
  await left.goto(`${site.origin}/sites/kestrel-edge`);
  expect((await left.locator('body').innerText()).toLowerCase()).toMatch(/within limits|beyond a limit/);
  await left.clock.fastForward('11:00:00');
  await expect.poll(() => left.locator('main').innerText()).toContain('Expired');
  expect(await left.locator('body').innerText()).not.toMatch(/within limits|close to a limit|beyond a limit|cannot say/i);
  expect(await left.title()).toMatch(/^Expired/);
});

test('a duplicate is one notification, and a quiet one', async () => {
  const same = brief({});
  await push(same);
  await push(same);
  await settled((list) => expect(list).toMatchObject([{ title: same.title, silent: true }]));
});

test('one that comes after its time says expired, without a verdict', async () => {
  await push(brief({ title: 'Within limits, Kestrel Edge', issuedAt: at(-900), validUntil: at(-300) }));
  await settled((list) => { expect(list).toMatchObject([{ title: 'Expired' }]); expect(list[0]?.body).not.toMatch(/within|close to|beyond/i); });
});

test('one without times, or that cannot be read, shows no verdict', async () => {
  await push('not JSON');
  await push(brief({ thread: 'u', validUntil: null, title: 'Within limits, Kestrel Edge' }));
  await settled((list) => { expect(list.map(({ title }) => title).sort()).toEqual(['Cannot say: a message came that cannot be read', 'Expired']); });
});

test('a notification goes at its valid-until with the next event', async () => {
  const untilMs = Date.now() + 7000;
  await push(brief({ validUntil: new Date(untilMs).toISOString() }));
  await settled((list) => expect(list).toHaveLength(1));
  await page.waitForTimeout(Math.max(0, untilMs - Date.now() + 100));
  await page.evaluate(() => { navigator.serviceWorker.controller?.postMessage('expire'); });
  await settled((list) => expect(list).toHaveLength(0));
});

test('without a connection there is a page that says so, and no old verdict', async () => {
  await expect.poll(() => page.evaluate(() => navigator.serviceWorker.controller !== null)).toBe(true);
  await context.setOffline(true);
  await page.goto(`${site.origin}/`).catch(() => undefined);
  const text = await page.locator('body').innerText();
  expect(text).toContain('No connection');
  expect(text).not.toMatch(/within limits|close to a limit|beyond a limit/i);
});
