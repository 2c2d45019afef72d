// The training day in the real browser: enter a day, read the plan, lose an hour, plan again, print to one page, download; and without scripts.
import { readFileSync } from 'node:fs';
import { Hono } from 'hono';
import ICAL from 'ical.js';
import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import demoPlan from '../../config/plan-demo.json' with { type: 'json' };
import type { JudgedDay } from '../../lib/brief/day.ts';
import { judgeDay } from '../../lib/brief/judge-day.ts';
import { CLOSING } from '../../lib/brief/words/index.ts';
import { dayKey, pairsOf } from '../../lib/plan/request.ts';
import { planPages } from '../../worker/routes/plan.ts';
import type { KeptPlan, PlanServices } from '../../worker/web/plan/plan-services.ts';
import { DEMO_SITES, demoInput, SHEETS } from '../support/demo-days.ts';
import { axeFindings } from './support/axe.ts';
import { launch, open } from './support/chromium.ts';
import { serve, type Served } from './support/server.ts';

const DATE = '2027-05-14';

/** The demo's valley judged on this machine; plans kept in a map, the token of one is its id. */
function valley(): PlanServices {
  const kept = new Map<string, KeptPlan>();
  const judged = new Map<string, JudgedDay>();
  return {
    now: () => new Date(`${DATE}T04:00:00Z`),
    wait: () => 0,
    known: () => Promise.resolve({ sites: DEMO_SITES, sheets: SHEETS, dateAt: () => DATE }),
    example: () => demoPlan,
    async judge(request) {
      for (const pair of pairsOf(request)) {
        const key = `${dayKey(pair)} ${request.date}`;
        const [site, sheet] = [DEMO_SITES.find(({ id }) => id === pair.site)!, SHEETS.find(({ id }) => id === pair.sheet)!];
        if (!judged.has(key)) judged.set(key, judgeDay(await demoInput(site, { wing: pair.wing, sheet, date: request.date })));
      }
      return new Map(pairsOf(request).map((pair) => [dayKey(pair), judged.get(`${dayKey(pair)} ${request.date}`)!]));
    },
    keep({ request, plan }, before) {
      const id = before?.id ?? `p${kept.size + 1}`;
      kept.set(id, { id, revision: (before?.revision ?? 0) + 1, request, plan, isTold: before?.isTold ?? false });
      return Promise.resolve(id);
    },
    tell(plan, manageLink) {
      if (manageLink !== null && !manageLink.endsWith('/manage/ada')) return Promise.resolve(false);
      kept.set(plan.id, { ...plan, isTold: manageLink !== null });
      return Promise.resolve(true);
    },
    kept: (token) => Promise.resolve(kept.get(token) ?? null),
  };
}

let browser: Browser;
let site: Served;

beforeAll(async () => {
  [browser, site] = await Promise.all([launch(), serve(new Hono().route('/plan', planPages(valley())))]);
});

afterAll(async () => {
  await browser.close();
  await site.close();
});

async function pagesOfPdf(page: Page): Promise<number> {
  const pdf = await page.pdf({ preferCSSPageSize: true, printBackground: true });
  return [...pdf.toString('latin1').matchAll(/\/Type\s*\/Page[^s]/g)].length;
}

/** The block of a group, as it reads. */
const blockOf = (page: Page, group: string) => page.locator('.plan .entry', { hasText: group }).locator('.plan-when').first();

async function journey(scripts: boolean): Promise<void> {
  const { page, requests, complaints, close } = await open(browser, `${site.origin}/plan`, { width: 1280, scripts });
  // Enter a day: the tow course gets another name and only two hours.
  await page.locator('input[name="g1.name"]').fill('Winch crew');
  await page.locator('input[name="g1.wishHours"]').fill('2');
  await page.locator('form#plan-form > button[type="submit"]').click();
  expect(new URL(page.url()).pathname).toMatch(/^\/plan\/p\d+$/);
  const link = page.url();
  // Read it.
  const before = await blockOf(page, 'Winch crew').innerText();
  expect(before).toMatch(/^(Within limits|Close to a limit at .*), (last launch|everybody down by) \d+:\d\d, (\d+) to \d+ h at Tivvern Strip\.$/);
  const firstHour = Number(/, (\d+) to/.exec(before)![1]);
  expect(await page.locator('main').innerText()).toContain('Next best:');
  // Say who is told when a block turns.
  await page.getByLabel('Link to change your subscription').fill('https://brief.example/manage/ada');
  await page.getByRole('button', { name: 'Tell me when a block turns' }).click();
  expect(page.url()).toBe(link);
  expect(await page.locator('main').innerText()).toContain('A subscription is told when a planned block turns');
  // Lose an hour and plan again: one press, the same link.
  await page.getByRole('button', { name: `Take out ${firstHour} h at Tivvern Strip` }).first().click();
  expect(page.url()).toBe(link);
  const after = await blockOf(page, 'Winch crew').innerText();
  expect(after).not.toBe(before);
  expect(after).toMatch(new RegExp(`, ${firstHour + 1} to ${firstHour + 3} h at Tivvern Strip`));
  // Download.
  const [csv] = await Promise.all([page.waitForEvent('download'), page.getByRole('link', { name: 'As a table (CSV)' }).click()]);
  expect(csv.suggestedFilename()).toBe(`training-day-${DATE}.csv`);
  expect(readFileSync(await csv.path(), 'utf8')).toMatch(/^"weather","as of \(UTC\)".*\r\n"Invented weather","2027-05-1/);
  const [ics] = await Promise.all([page.waitForEvent('download'), page.getByRole('link', { name: 'As a calendar' }).click()]);
  const events = new ICAL.Component(ICAL.parse(readFileSync(await ics.path(), 'utf8')) as never).getAllSubcomponents('vevent');
  expect(events.length).toBe(await page.locator('.plan-when').count());
  // Put the hour back.
  await page.getByRole('button', { name: 'Put back' }).click();
  expect(await blockOf(page, 'Winch crew').innerText()).toBe(before);
  expect(requests.filter((url) => !url.startsWith(site.origin))).toEqual([]);
  expect(complaints).toEqual([]);
  await close();
}

test('enter a day, read the plan, lose an hour, plan again, download, put it back', () => journey(true));

test('the same with scripts off', () => journey(false));

test('the return key in a field plans; it takes no hour out', async () => {
  const { page, close } = await open(browser, `${site.origin}/plan`, { width: 1280 });
  const before = await blockOf(page, 'Tow course').innerText();
  await page.locator('input[name="instructors"]').press('Enter');
  expect(new URL(page.url()).pathname).toMatch(/^\/plan\/p\d+$/);
  expect(await blockOf(page, 'Tow course').innerText()).toBe(before);
  expect(await page.getByRole('button', { name: 'Put back' }).count()).toBe(0);
  await close();
});

describe('on paper', () => {
  test('the worked day is one page of A4, with what must stand there and without the form', async () => {
    const { page, close } = await open(browser, `${site.origin}/plan`, { width: 1280 });
    expect(await pagesOfPdf(page)).toBe(1);
    await page.emulateMedia({ media: 'print' });
    const text = await page.locator('body').innerText();
    for (const part of ['Invented weather', 'First hops', 'Tow course', 'Licence class', 'Local rules:', CLOSING]) expect(text).toContain(part);
    expect(await page.locator('.plan .cautions li').first().isVisible()).toBe(true);
    for (const part of await page.locator('form, .plan-out, .plan-lose').all()) expect(await part.isVisible()).toBe(false);
    await close();
  });

  test.each([8, 12])('%i groups are one page too', async (count) => {
    const form = new URLSearchParams({ date: DATE, instructors: '20', movingMin: '30' });
    for (const [nth, place] of demoPlan.sites.entries()) for (const [name, value] of Object.entries({ ...place, capacity: 4 })) form.set(`s${nth}.${name}`, String(value));
    for (let nth = 0; nth < count; nth += 1) {
      const sheet = ['descent-experienced', 'thermal-flight', 'first-hops', 'descent-new', 'ridge-soaring'][nth % 5]!;
      const fields = { name: `Group number ${nth + 1} of the school`, sheet, wing: 'EN A', minHours: '1', wishHours: '3', instructors: '1', close: '1' };
      for (const [name, value] of Object.entries(fields)) form.set(`g${nth}.${name}`, value);
      for (const id of ['orlask-shoulder', 'wennet-meadow', 'maddle-bowl']) form.append(`g${nth}.sites`, id);
    }
    const { page, close } = await open(browser, 'about:blank', { width: 1280, scripts: false });
    const made = await page.request.post(`${site.origin}/plan`, { data: form.toString(), headers: { 'content-type': 'application/x-www-form-urlencoded' } });
    await page.goto(made.url());
    expect(await page.locator('.plan .entry').count()).toBe(count);
    expect(await pagesOfPdf(page)).toBe(1);
    await close();
  });
});

test.each([390, 1280])('at %i px in both themes: no axe violation, no overflow', async (width) => {
  const { page, close } = await open(browser, `${site.origin}/plan`, { width });
  await page.evaluate(() => { for (const details of document.querySelectorAll('details')) details.open = true; });
  for (const colorScheme of ['light', 'dark'] as const) {
    expect(await axeFindings(page, colorScheme)).toEqual([]);
    expect(await page.evaluate(() => document.documentElement.scrollWidth)).toBeLessThanOrEqual(width);
  }
  await close();
});
