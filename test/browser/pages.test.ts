// Every page in the real browser: both widths, both themes, scripts on and off; axe; nothing loaded from elsewhere.
import { readFileSync } from 'node:fs';
import path from 'node:path';
import AxeBuilder from '@axe-core/playwright';
import type { Browser } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { CLOSING } from '../../lib/brief/words/index.ts';
import { pages } from '../../worker/routes/pages.ts';
import { fixtureServices } from '../support/page-fixtures.ts';
import { launch, open } from './support/chromium.ts';
import { serve, type Served } from './support/server.ts';

let browser: Browser;
let site: Served;

beforeAll(async () => {
  [browser, site] = await Promise.all([launch(), serve(pages(fixtureServices()))]);
});

afterAll(async () => {
  await browser.close();
  await site.close();
});

const paths = ['/', '/sites/kestrel-edge', '/sites/quillmoor', '/sites/tern-meadow', '/sites/kestrel-edge?speed=kmh&height=ft', '/sites/nowhere'];
const looks = [390, 1280].flatMap((width) => (['light', 'dark'] as const).map((colorScheme) => ({ width, colorScheme })));

describe.each(paths)('%s', (where) => {
  test('at both widths in both themes: no axe violation, no overflow, no foreign request, no complaint', async () => {
    const { page, requests, complaints, close } = await open(browser, site.origin + where, { width: 390 });
    // Everything that is folded is open, so that axe sees it.
    await page.evaluate(() => { for (const details of document.querySelectorAll('details')) details.open = true; });
    for (const { width, colorScheme } of looks) {
      await page.setViewportSize({ width, height: 844 });
      await page.emulateMedia({ colorScheme });
      // Only colours change with the theme.
      const rules = colorScheme === 'dark' ? { runOnly: ['color-contrast'] } : { rules: { 'target-size': { enabled: true } } };
      const { violations } = await new AxeBuilder({ page }).options(rules).analyze();
      expect(violations.map(({ id, nodes }) => `${id} at ${width} ${colorScheme}: ${nodes.map(({ html }) => html).join(' ')}`)).toEqual([]);
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
  expect(await page.locator('.choose').isVisible()).toBe(false);
  expect(readFileSync(path.resolve(import.meta.dirname, '../../worker/assets/dawnmargin.css'), 'utf8')).toContain('print-color-adjust: exact');
  await close();
});
