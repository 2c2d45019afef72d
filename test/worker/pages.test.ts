// States of the pages as markup: what they say, what they must not say, and what they are served with.
import { describe, expect, test } from 'vitest';
import type { JudgedDay } from '../../lib/brief/day.ts';
import { CLOSING, EXPIRED, failureSentence } from '../../lib/brief/words/index.ts';
import { dayOf, voteOf } from '../support/days.ts';
import { DAYS, fixturePages, fixtureServices, MORNING } from '../support/page-fixtures.ts';

const VERDICTS = /within limits|close to a limit|beyond a limit|cannot say/i;

async function get(path: string, days: Readonly<Record<string, JudgedDay>> = DAYS, now: Date = MORNING): Promise<{ status: number; markup: string; headers: Headers }> {
  const response = await fixturePages(fixtureServices(days, now)).request(path);
  return { status: response.status, markup: await response.text(), headers: response.headers };
}

/** What a person reads, without the words kept for scripts in attributes. */
function text(markup: string): string {
  return markup.replace(/<[^>]*>/g, ' ').replace(/\s+/g, ' ');
}

const one = (day: JudgedDay) => ({ [day.siteId]: day });

describe.each(['/', '/sites/kestrel-edge', '/sites/kestrel-edge/what-if?wind=5', '/sites/tern-meadow'])('%s', (path) => {
  test('ends with the notice, names its sources and ages, and says that the weather is invented', async () => {
    const { status, markup } = await get(path);
    expect(status).toBe(200);
    expect(markup).toContain(CLOSING);
    expect(text(markup)).toMatch(/run 3 h old/);
    expect(text(markup)).toContain('Invented weather');
    expect(markup).toMatch(/<title>Invented weather: /);
  });

  test('has no unsafe policy, no inline style or script, no leak', async () => {
    const { markup, headers } = await get(path);
    expect(headers.get('content-security-policy')).toContain("default-src 'none'");
    expect(headers.get('content-security-policy')).not.toContain('unsafe');
    expect(headers.get('cache-control')).toContain('must-revalidate');
    expect(headers.get('set-cookie')).toBeNull();
    expect(markup).not.toMatch(/ style=| on[a-z]+=|javascript:|<style/i);
    expect([...markup.matchAll(/<script\b[^>]*>/g)].map(([tag]) => tag)).toEqual(['<script src="/expiry.js" defer>']);
    expect(text(markup)).not.toMatch(/\bundefined\b|\bNaN\b|\[object|\bnull\b/);
    expect(text(markup)).not.toMatch(/\b(safe|good|go|OK|green|no-fly|stars?|score)\b/i);
  });
});

test('expired says expired and shows no verdict', async () => {
  const late = new Date('2027-05-14T22:00:00Z');
  for (const path of ['/', '/sites/kestrel-edge', '/sites/kestrel-edge/what-if?wind=3']) {
    const { markup } = await get(path, one(DAYS['kestrel-edge']!), late);
    expect(markup).toContain(EXPIRED);
    const seen = text(markup.replace(/<title>.*?<\/title>/s, ''));
    expect(seen).not.toMatch(VERDICTS);
  }
  expect((await get('/', one(DAYS['kestrel-edge']!), late)).markup).toMatch(/<title>Invented weather: cannot say/);
  expect((await get('/sites/kestrel-edge', one(dayOf('ww', { validUntil: 'no date' })))).markup).toContain(EXPIRED);
});

test('withheld data says cannot say, and why', async () => {
  const { markup } = await get('/sites/quillmoor');
  expect(text(markup)).toContain('Cannot say all day. No source has a vote: Demo weather (its data is withheld).');
  expect(text(markup)).not.toMatch(/within limits|close to a limit|beyond a limit/i);
});

test('a single source is a caution in full on board and day', async () => {
  for (const path of ['/', '/sites/kestrel-edge']) expect(text((await get(path)).markup)).toContain('Only one source has a vote: Demo weather; nothing checks it.');
});

test('a source of live weather is credited with its link and licence, and nothing is called invented', async () => {
  const day = dayOf('wwbb', { sources: [voteOf({ source: 'open-meteo:icon_d2' }), voteOf({ source: 'met-norway:locationforecast', state: 'no vote', why: failureSentence({ kind: 'timeout', afterMs: 10_000 }) })] });
  for (const path of ['/', '/sites/kestrel-edge']) {
    const { markup } = await get(path, one(day));
    expect(markup).toContain('<a href="https://open-meteo.com/" rel="external">Weather data by Open-Meteo.com</a>');
    expect(markup).toContain('https://creativecommons.org/licenses/by/4.0/');
    expect(markup).toContain('Data from MET Norway');
    expect(text(markup)).toContain('MET Norway (no answer within 10 s)');
    expect(text(markup)).not.toMatch(/invented/i);
  }
});

test('a site without a brief reads as cannot say, and the title says no more than the page', async () => {
  const services = { ...fixtureServices(one(DAYS['sallow-bank']!)) };
  const board = async () => [...(await fixtureServices(one(DAYS['sallow-bank']!)).board()), { siteId: 'late', siteName: 'Late Hill', kind: 'launch' as const, timeZone: 'Europe/Vienna', days: [] }];
  const markup = await (await fixturePages({ ...services, board }).request('/')).text();
  expect(markup).toMatch(/<title>Invented weather: cannot say at 1 site; within limits at 1/);
  expect(text(markup)).toContain('Late Hill Cannot say: no brief has been made for this morning yet.');
});

test('units come from the query and stay on every link', async () => {
  const { markup } = await get('/sites/kestrel-edge?speed=kt&height=ft');
  expect(text(markup)).toContain('A gust leaves 3.5 kt forward; the sheet asks 4.9.');
  expect(markup).toContain('href="/?speed=kt&amp;height=ft"');
  for (const [, href] of markup.matchAll(/href="(\/sites\/[^"]*hour=[^"]*)"/g)) expect(href).toContain('speed=kt&amp;height=ft');
});

test('what cannot be asked is said, with the right status', async () => {
  expect((await get('/sites/nowhere')).status).toBe(404);
  const wrong = await get('/sites/kestrel-edge/what-if?wind=strong&trim=10');
  expect(wrong.status).toBe(400);
  expect(text(wrong.markup)).toContain('Mean wind at 10 m: a number in m/s is needed.');
  expect(text(wrong.markup)).toContain('A wing of your own needs all three');
});

describe('hostile names are inert', () => {
  const HOSTILE = [
    '<script>alert(1)</script>', '"><img src=x onerror=alert(1)>', "' onfocus='alert(1)' autofocus='", '&lt;b&gt;', ']]></svg><script>alert(1)</script>',
    'a\u202Egnp.exe', 'zero\u200Bwidth\uFEFF', 'bell\u0007nul\u0000', 'x'.repeat(5000), 'within limits', '\uD800lone', '`${1}`', '</title><script>alert(1)</script>',
  ];

  // By number: a title with half a character in it would break the reporter's own wire.
  test.each(HOSTILE.map((_, index) => index))('name %i', async (index) => {
    const name = HOSTILE[index] ?? '';
    const day: JudgedDay = {
      ...DAYS['kestrel-edge']!, siteName: name, wingName: name, sheetName: name, localRules: name, sheetId: name, wingKey: name,
      cautions: [{ id: 'foehn', value: 5, unit: 'hPa', from: null, to: null, subject: name }],
      notJudged: [{ id: 'slope', why: name }],
      sources: [voteOf({ source: name }), voteOf({ source: name, state: 'no vote', why: name })],
      hours: DAYS['kestrel-edge']!.hours.map((hour) => ({ ...hour, margins: hour.margins.map((margin) => ({ ...margin, source: name, missing: [name] })), bySource: [{ source: name, verdict: 'within' as const }] })),
    };
    for (const path of ['/', '/sites/kestrel-edge', `/sites/kestrel-edge/what-if?wind=${encodeURIComponent(name.replace('\uD800', ''))}`]) {
      const { markup } = await get(path, one(day));
      const tags = (markup.match(/<[^>]*>/g) ?? []).map((tag) => tag.replace(/"[^"]*"/g, '""'));
      // Tags that are ours, attributes that are ours; no control, bidi or invisible character; nothing so long that it pushes the verdict away.
      expect(tags.filter((tag) => /^<script/i.test(tag))).toHaveLength(1);
      expect(tags.filter((tag) => /^<(img|b)\b|\son[a-z]+\s*=/i.test(tag))).toEqual([]);
      expect(/[\p{Cf}\p{Cs}]|[^\P{Cc}\n\t]/u.test(markup)).toBe(false);
      expect(text(markup).includes('x'.repeat(301))).toBe(false);
    }
  });
});
