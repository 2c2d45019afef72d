// Every page in the real browser: both widths, both themes, scripts on and off; axe; nothing loaded from elsewhere.
import { readFileSync } from 'node:fs';
import path from 'node:path';
import { gzipSync } from 'node:zlib';
import type { Browser } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { CLOSING } from '../../lib/brief/words/index.ts';
import { DAYS, fixturePages, fixtureServices } from '../support/page-fixtures.ts';
import { axeFindings } from './support/axe.ts';
import { launch, open } from './support/chromium.ts';
import { serve, type Served } from './support/server.ts';

let browser: Browser;
let site: Served;

beforeAll(async () => {
  [browser, site] = await Promise.all([launch(), serve(fixturePages(fixtureServices()))]);
});

afterAll(async () => {
  await browser.close();
  await site.close();
});

const paths = ['/', '/sites/kestrel-edge', '/sites/quillmoor', '/sites/tern-meadow', '/sites/kestrel-edge/what-if?wind=6', '/sites/nowhere'];
const looks = [{ width: 390, colorScheme: 'light' }, { width: 390, colorScheme: 'dark' }, { width: 1280, colorScheme: 'light' }, { width: 1280, colorScheme: 'dark' }] as const;

describe.each(paths)('%s', (where) => {
  test('at both widths in both themes: no axe violation, no overflow, no foreign request, no complaint', async () => {
    const { page, requests, complaints, close } = await open(browser, site.origin + where, { width: 390 });
    // Everything that is folded is open, so that axe sees it.
    await page.evaluate(() => { for (const details of document.querySelectorAll('details')) details.open = true; });
    for (const { width, colorScheme } of looks) {
      await page.setViewportSize({ width, height: 844 });
      // The dark colours are the same at every width.
      if (width === 390 || colorScheme === 'light') expect(await axeFindings(page, colorScheme)).toEqual([]);
      expect(await page.evaluate(() => document.documentElement.scrollWidth)).toBeLessThanOrEqual(width);
    }
    expect(requests.filter((url) => !url.startsWith(site.origin))).toEqual([]);
    expect(complaints.filter((text) => !text.includes('404'))).toEqual([]);
    await close();
  });

  test('says the same with scripts off', async () => {
    const [on, off] = [await open(browser, site.origin + where, { width: 390 }), await open(browser, site.origin + where, { width: 390, scripts: false })];
    const text = (watched: typeof on) => watched.page.locator('body').innerText();
    expect(await text(off)).toBe(await text(on));
    expect(await text(off)).toContain(CLOSING);
    await on.close();
    await off.close();
  });
});

test('first view at most 14 kB and whole page at most 60 kB, gzip', async () => {
  const size = async (where: string) => gzipSync(Buffer.from(await (await fetch(site.origin + where)).arrayBuffer()), { level: 6 }).length;
  const css = await size('/dawnmargin.css');
  for (const where of paths) {
    const html = await size(where);
    const whole = html + css + (await size('/expiry.js')) + (await size('/icon.svg'));
    console.log(`${where}: first view ${html + css} bytes, whole page ${whole} bytes, gzip`);
    expect(html + css).toBeLessThanOrEqual(14_336);
    expect(whole).toBeLessThanOrEqual(61_440);
  }
});

test('hostile names run nothing and move nothing', async () => {
  const name = '</title><img src=x onerror=alert(1)>\u202E<svg onload=alert(2)>';
  const day = { ...DAYS['kestrel-edge']!, siteName: name, wingName: name, sheetName: name, localRules: name };
  const hostile = await serve(fixturePages(fixtureServices({ 'kestrel-edge': day })));
  for (const where of ['/', '/sites/kestrel-edge', `/sites/kestrel-edge/what-if?wind=${encodeURIComponent(name)}`]) {
    const { page, complaints, close } = await open(browser, hostile.origin + where, { width: 390 });
    expect(complaints.filter((text) => !text.includes('400'))).toEqual([]);
    expect(await page.evaluate(() => [...document.querySelectorAll('*')].filter((element) => element.getAttributeNames().some((attribute) => attribute.startsWith('on'))).length)).toBe(0);
    expect(await page.evaluate(() => document.querySelectorAll('img').length)).toBe(0);
    expect(await page.evaluate(() => document.documentElement.scrollWidth)).toBeLessThanOrEqual(390);
    await close();
  }
  await hostile.close();
});

test('the keyboard reaches every hour and opens a working, and the focus is seen', async () => {
  const { page, close } = await open(browser, `${site.origin}/sites/kestrel-edge`, { width: 1280 });
  await page.keyboard.press('Tab');
  expect(await page.evaluate(() => document.activeElement?.textContent)).toBe('To the content');
  const reached = new Set<string>();
  for (let presses = 0; presses < 120; presses += 1) {
    await page.keyboard.press('Tab');
    const focus = await page.evaluate(() => ({
      name: document.activeElement?.getAttribute('aria-label') ?? document.activeElement?.textContent ?? '',
      outline: document.activeElement === null ? '' : getComputedStyle(document.activeElement).outlineStyle,
      summary: document.activeElement?.matches('.margins summary') === true && document.activeElement.closest('details')?.open === false,
    }));
    if (focus.name === '' || focus.name.length > 400) continue;
    expect(focus.outline).not.toBe('none');
    reached.add(focus.name);
    if (focus.summary && focus.name.includes('Forward speed at launch')) {
      await page.keyboard.press('Enter');
      break;
    }
  }
  expect(reached).toContain('6 h, within limits');
  expect(reached).toContain('15 h, beyond a limit');
  expect(await page.locator('.margins details[open]').innerText()).toContain('trim airspeed at launch');
  await close();
});

test('an hour is chosen without a script', async () => {
  const { page, close } = await open(browser, `${site.origin}/sites/kestrel-edge`, { width: 390, scripts: false });
  await page.getByRole('link', { name: '9 h, within limits', exact: true }).click();
  expect(await page.locator('#hour-h').innerText()).toBe('Within limits at 9 h');
  await close();
});

test('a page left open past its time says that it expired', async () => {
  const { page, close } = await open(browser, `${site.origin}/sites/kestrel-edge`, { width: 390 });
  // The page's own clock stands years before the fixture's day; now it stands after it.
  await page.clock.install({ time: new Date('2027-05-15T06:00:00Z') });
  await page.reload();
  await page.clock.runFor(31_000);
  const text = await page.locator('body').innerText();
  expect(text).toContain('Expired');
  expect(text).not.toMatch(/within limits|close to a limit|beyond a limit|cannot say/i);
  expect(await page.title()).toContain('Expired');
  await close();
});

test('print shows the day and the margins, not the forms', async () => {
  const { page, close } = await open(browser, `${site.origin}/sites/kestrel-edge`, { width: 1280 });
  await page.emulateMedia({ media: 'print' });
  expect(await page.locator('.site .day').first().isVisible()).toBe(true);
  for (const form of await page.locator('form').all()) expect(await form.isVisible()).toBe(false);
  expect(readFileSync(path.resolve(import.meta.dirname, '../../worker/assets/dawnmargin.css'), 'utf8')).toContain('print-color-adjust: exact');
  await close();
});
