// The demo as npm start serves it, in the real browser: the worker, its assets and its tables behind the pages.
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import type { Browser } from 'playwright-core';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { CLOSING } from '../../lib/brief/words/index.ts';
import { freePort, startDemo, type OwnDemo } from '../../worker/local/own-demo.ts';
import { launch, open } from './support/chromium.ts';

let browser: Browser;
let demo: OwnDemo;
let origin: string;
const folder = mkdtempSync(path.join(tmpdir(), 'dawnmargin-browser-'));

interface SiteDay {
  readonly siteId: string;
  readonly sentence: string;
  readonly hours: readonly { readonly validAt: string; readonly margins: readonly unknown[]; readonly airspeed: unknown }[];
  readonly localDate: string;
}

beforeAll(async () => {
  demo = startDemo(await freePort(), folder);
  [browser, origin] = await Promise.all([launch(), demo.origin]);
}, 120_000);

afterAll(async () => {
  await browser.close();
  await demo.stop();
  rmSync(folder, { recursive: true, force: true });
});

async function siteIds(): Promise<string[]> {
  const collection = (await (await fetch(`${origin}/api/v1/sites`)).json()) as { features: { id: string }[] };
  return collection.features.map(({ id }) => id);
}

test('every site of the demo is on the board, with all four verdicts among them, and nothing fails to load', async () => {
  const { page, requests, complaints, close } = await open(browser, `${origin}/`, { width: 390 });
  const text = await page.locator('body').innerText();
  const names = await page.locator('.entry h2').allInnerTexts();
  expect(names).toHaveLength((await siteIds()).length);
  for (const phrase of ['within limits', 'close to a limit', 'beyond a limit', 'cannot say']) expect(text.toLowerCase()).toContain(phrase);
  expect(text).toContain(CLOSING);
  expect(text.match(/Invented weather\./g)?.length).toBeGreaterThan(names.length);
  expect(requests.every((url) => url.startsWith(origin))).toBe(true);
  expect(complaints).toEqual([]);
  // The style sheet arrived: the paper has its colour.
  expect(await page.evaluate(() => getComputedStyle(document.documentElement).backgroundColor)).toBe('rgb(247, 242, 230)');
  await close();
});

async function dayOfSite(id: string): Promise<SiteDay> {
  const board = await (await fetch(`${origin}/`)).text();
  const date = new RegExp(`/sites/${id}\\?date=([0-9-]+)`).exec(board)?.[1] ?? '';
  return (await (await fetch(`${origin}/api/v1/sites/${id}/days/${date}`)).json()) as SiteDay;
}

test('the day page of every site says the sentence of the API, and shows every margin of every hour', async () => {
  for (const id of await siteIds()) {
    const day = await dayOfSite(id);
    for (const hour of day.hours) {
      const markup = await (await fetch(`${origin}/sites/${id}?date=${day.localDate}&hour=${hour.validAt}`)).text();
      const said = (/<p class="day">(.*?)<\/p>/s.exec(markup)?.[1] ?? '').replace(/<[^>]*>/g, '').replaceAll('\u00A0', ' ').replace('Invented weather. ', '').replaceAll('&#39;', "'");
      // The API's sentence begins with the name of the site, and without a capital after it.
      expect(said.length).toBeGreaterThan(20);
      expect(day.sentence.toLowerCase()).toContain(said.toLowerCase());
      expect(markup.match(/<span class="what">/g) ?? []).toHaveLength(hour.margins.length);
    }
  }
}, 120_000);

test('"what if" answers what the API answers for the same numbers', async () => {
  const days = await Promise.all((await siteIds()).map(dayOfSite));
  const id = days.find((day) => day.hours.some(({ airspeed }) => airspeed !== null))?.siteId ?? '';
  const { page, close } = await open(browser, `${origin}/sites/${id}`, { width: 1280, scripts: false });
  await page.fill('input[name=wind]', '19');
  await page.fill('input[name=gust]', '25');
  await page.locator('form[action$="/what-if"] button').click();
  const text = await page.locator('.day').first().innerText();
  expect(text).toMatch(/^Invented weather\.\s+Beyond a limit at \d+ h, with your numbers\./);
  expect(await page.locator('.margins > li').count()).toBeGreaterThan(10);
  await close();
});
