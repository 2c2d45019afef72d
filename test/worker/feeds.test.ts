import { XMLParser, XMLValidator } from 'fast-xml-parser';
import ICAL from 'ical.js';
import { env } from 'cloudflare:workers';
import type { Hono } from 'hono';
import { beforeEach, describe, expect, test, vi } from 'vitest';
import { app } from '../../worker/routes/app.ts';
import { linkToken } from '../../worker/secrets.ts';
import { feedDoor, type FeedDoor } from '../../worker/feeds/door.ts';
import { folded, icalText } from '../../worker/feeds/ical-text.ts';
import { xml } from '../../worker/feeds/atom.ts';
import { LINK_KEY, newHouse, type House } from './support/house.ts';
import { judgedAs } from './support/stand-ins.ts';

// A machine that has other things to do is no fault of ours.
vi.setConfig({ testTimeout: 30_000, hookTimeout: 30_000 });

const six = '2027-05-14T04:00:00Z';
let house: House;
let token: string;
let isOpen: boolean;
let storms = 0;

beforeEach(async () => {
  isOpen = true;
  house = await newHouse({ nowIso: six, judge: (input) => judgedAs(input, input.site.id === 'south' || !isOpen ? 'beyond' : 'close') });
  await house.seed([{ id: 'ana', sites: ['north', 'south'], urls: ['terminal'], dueIso: six }]);
  await house.minute();
  token = await linkToken(LINK_KEY, { purpose: 'feed', id: 'ana', version: 1 });
});

function get(path: string, headers: Record<string, string> = {}): Promise<Response> {
  return Promise.resolve(app(house.services()).request(path, { headers }));
}

async function events(): Promise<{ uid: string; title: string; status: string; sequence: number; text: string; isDate: boolean; from: string }[]> {
  const response = await get(`/feeds/${token}.ics`);
  expect(response.headers.get('content-type')).toBe('text/calendar; charset=utf-8');
  const calendar = new ICAL.Component(ICAL.parse(await response.text()) as unknown as string);
  return calendar.getAllSubcomponents('vevent').map((component) => {
    const event = new ICAL.Event(component);
    return {
      uid: event.uid, title: event.summary, status: String(component.getFirstPropertyValue('status')), sequence: event.sequence, text: event.description,
      isDate: event.startDate.isDate, from: event.startDate.toString(),
    };
  });
}

/** The morning again, judged anew because a new forecast has come. */
async function laterBrief(): Promise<void> {
  house.nowMs += 4 * 3_600_000;
  await env.DB.prepare('UPDATE subscription SET next_due_at = ?').bind(house.nowMs).run();
  await house.minute();
}

describe('the calendar', () => {
  test('is read by somebody else: a day event for each site and a tentative one for each window', async () => {
    const found = await events();
    expect(found.map(({ uid, status, isDate }) => [uid, status, isDate])).toEqual([
      ['north.2027-05-14.EN-B.hill.day@127.0.0.1', 'TENTATIVE', true],
      ['north.2027-05-14.EN-B.hill.window-1@127.0.0.1', 'TENTATIVE', false],
      ['south.2027-05-14.EN-B.hill.day@127.0.0.1', 'TENTATIVE', true],
    ]);
    expect(found[2]!.text).toMatch(/^Beyond a limit/);
    expect(found[0]!.text).toContain('not observed');
  });

  test('has titles that begin with their time and carry no verdict', async () => {
    for (const { title } of await events()) {
      expect(title).toMatch(/^As of 6:00: /);
      expect(title.toLowerCase()).not.toMatch(/within|close|beyond|cannot say/);
    }
  });

  test('keeps a window that a later revision has lost, cancelled, with a higher sequence', async () => {
    isOpen = false;
    await laterBrief();
    const found = await events();
    expect(found.map(({ status, sequence }) => [status, sequence])).toEqual([['TENTATIVE', 1], ['CANCELLED', 1], ['TENTATIVE', 1]]);
    expect(found[1]!.title).toBe('As of 10:00: no longer a window, Site north');
  });

  test('round-trips through the other parser', async () => {
    const text = await (await get(`/feeds/${token}.ics`)).text();
    const parsed = ICAL.parse(text);
    expect(ICAL.parse(ICAL.stringify(parsed))).toEqual(parsed);
    expect(text.split('\r\n').every((line) => new TextEncoder().encode(line).length <= 75)).toBe(true);
    expect(text.replaceAll('\r\n', '')).not.toMatch(/[\r\n]/);
  });

  test('T27 B31 B32 lets nothing of a text become structure', () => {
    const hostile = 'A;B,C\\D\r\nBEGIN:VEVENT\nX\u0000\u2028"<>&🪁';
    const component = new ICAL.Component(ICAL.parse(`BEGIN:VCALENDAR\r\n${folded(`SUMMARY:${icalText(hostile)}`)}\r\nEND:VCALENDAR`) as unknown as string);
    expect(component.getFirstPropertyValue('summary')).toBe('A;B,C\\D\nBEGIN:VEVENT\nX \u2028"<>&🪁');
    expect(component.getAllSubcomponents()).toHaveLength(0);
  });

  test('B34 folds on the edges of characters', () => {
    const line = `SUMMARY:${'🪁ä'.repeat(60)}`;
    const parts = folded(line).split('\r\n ');
    expect(parts.join('')).toBe(line);
    expect(parts.every((part) => part.isWellFormed())).toBe(true);
  });
});

describe('Atom', () => {
  interface Parsed { feed: { id: string; updated: string; title: string; link: { rel: string; href: string }[]; author: { name: string }; entry: { id: string; title: { text: string }; updated: string; content: { text: string } }[] } }

  test('is well-formed and has what RFC 4287 asks of a feed and of an entry', async () => {
    const response = await get(`/feeds/${token}.atom`);
    expect(response.headers.get('content-type')).toBe('application/atom+xml; charset=utf-8');
    const text = await response.text();
    expect(XMLValidator.validate(text)).toBe(true);
    const { feed } = new XMLParser({ ignoreAttributes: false, attributeNamePrefix: '', textNodeName: 'text', isArray: (name) => name === 'entry' || name === 'link', parseTagValue: false }).parse(text) as Parsed;
    expect(feed.id).toBe('urn:dawnmargin:feed:ana');
    expect(feed.title).toBeTruthy();
    expect(feed.author.name).toBeTruthy();
    expect(feed.updated).toBe('2027-05-14T04:00:00.000Z');
    expect(feed.link.find(({ rel }) => rel === 'self')!.href).toBe(`http://127.0.0.1:8787/feeds/${token}.atom`);
    expect(new Set(feed.entry.map(({ id }) => id)).size).toBe(2);
    for (const entry of feed.entry) {
      expect(Number.isFinite(Date.parse(entry.updated))).toBe(true);
      expect(entry.title.text).toMatch(/^(Beyond|Close to) a limit/);
      expect(entry.content.text).toMatch(/Valid until 2027-05-14T22:00:00Z/);
    }
  });

  test('T27 B31 B32 lets nothing of a text become structure', () => {
    const hostile = `</title><script>"'&]]>\u0000\ud800`;
    const parsed = new XMLParser().parse(`<a>${xml(hostile)}</a>`) as { a: string };
    expect(parsed.a).toBe(`</title><script>"'&]]>`);
  });
});

describe('a storm of polls', () => {
  /** What one isolate of a data centre has of its own; the cache is shared. */
  const isolate = (): Hono => behind(feedDoor(caches.default, (ms) => new Promise((resolve) => setTimeout(resolve, ms))));
  const behind = (door: FeedDoor): Hono => app({ ...house.services(), feedDoor: door });
  const poll = async (from: Hono, headers: Record<string, string> = {}, form = 'ics'): Promise<Response> => from.request(`/feeds/${token}.${form}`, { headers });
  const reads = (): number => house.calls.db;

  beforeEach(async () => {
    // The cache outlives a test: each has a feed of its own.
    await env.DB.prepare('UPDATE subscription SET link_version = link_version + ?').bind((storms += 1)).run();
    token = await linkToken(LINK_KEY, { purpose: 'feed', id: 'ana', version: 1 + storms });
    house.calls.db = 0;
  });

  test('T26 a thousand polls at once, from forty isolates, read the database as one does, and again after 60 s', async () => {
    const first = isolate();
    expect((await poll(first)).status).toBe(200);
    const once = reads();
    expect(once).toBeGreaterThan(0);
    const etag = (await poll(first)).headers.get('etag')!;
    house.nowMs += 59_999;
    const answers = await Promise.all(Array.from({ length: 40 }, isolate).flatMap((from) => Array.from({ length: 25 }, (_, index) => poll(from, index === 0 ? {} : { 'if-none-match': etag }))));
    expect(Map.groupBy(answers, ({ status }) => status).get(304)).toHaveLength(960);
    expect(answers.filter(({ status }) => status === 200)).toHaveLength(40);
    expect(reads()).toBe(once);
    house.nowMs += 1;
    expect((await Promise.all(Array.from({ length: 25 }, () => poll(first)))).every(({ status }) => status === 200)).toBe(true);
    expect(reads()).toBe(2 * once);
  });

  test('T26 whoever polls one feed more than thirty times a minute waits, and nobody else', async () => {
    const from = isolate();
    const statuses: number[] = [];
    for (let index = 0; index < 31; index += 1) statuses.push((await poll(from)).status);
    expect(statuses).toEqual([...Array.from({ length: 30 }, () => 200), 429]);
    house.nowMs += 20_000;
    const refused = await poll(from);
    expect([refused.status, refused.headers.get('retry-after')]).toEqual([429, '40']);
    expect((await poll(from, {}, 'atom')).status).toBe(200);
    house.nowMs += 40_000;
    expect((await poll(from)).status).toBe(200);
  });

  test('T26 what is kept says nothing of the token, ends with its days, and a revoked link within 60 s', async () => {
    const kept: string[] = [];
    const watched = behind(feedDoor({
      match: () => Promise.resolve(undefined),
      put: async (request, response) => { kept.push(new Request(request).url, JSON.stringify([...response.headers]), await response.text()); },
    }, () => Promise.resolve()));
    for (const form of ['ics', 'atom']) await poll(watched, {}, form);
    expect(kept).toHaveLength(6);
    expect(kept[0]).toMatch(/^http:\/\/127\.0\.0\.1:8787\/feeds\/kept\/[0-9a-f]{64}$/);
    // The Atom feed names its own address, as RFC 4287 asks: its secret stands in what is kept, behind the hash of it.
    expect(kept.slice(0, 3).join(), 'the calendar').not.toContain(token);
    expect([kept[3], kept[4]].join(), 'the name of the Atom feed').not.toContain(token);
    const near = isolate();
    house.nowMs = Date.parse('2027-05-14T21:59:59Z');
    expect(await (await poll(near)).text()).toContain('VEVENT');
    house.nowMs += 1000;
    expect(await (await poll(near)).text()).not.toContain('VEVENT');
    await env.DB.prepare('UPDATE subscription SET link_version = link_version + 1000').run();
    house.nowMs += 60_000;
    expect((await poll(near)).status).toBe(404);
  });
});

describe('the address', () => {
  test('T26 answers 304 until something changes', async () => {
    const first = await get(`/feeds/${token}.ics`);
    const etag = first.headers.get('etag')!;
    expect((await get(`/feeds/${token}.ics`, { 'if-none-match': etag })).status).toBe(304);
    expect((await get(`/feeds/${token}.ics`, { 'if-none-match': `"x", W/${etag}` })).status).toBe(304);
    isOpen = false;
    await laterBrief();
    expect((await get(`/feeds/${token}.ics`, { 'if-none-match': etag })).status).toBe(200);
  });

  test('T25 is one and the same 404 for whatever is not a token of ours', async () => {
    const other = await linkToken(LINK_KEY, { purpose: 'manage', id: 'ana', version: 1 });
    const unknown = await linkToken(LINK_KEY, { purpose: 'feed', id: 'nobody', version: 1 });
    const bodies = new Set<string>();
    for (const file of ['x.ics', `${token.slice(0, -1)}.ics`, `${token}x.ics`, `${other}.ics`, `${unknown}.atom`, `${token}.txt`, token, '.ics', `${'a'.repeat(190)}.ics`, 'ana.1.%00.ics', 'ana.1..ics']) {
      const response = await get(`/feeds/${file}`);
      expect(response.status, file).toBe(404);
      bodies.add(await response.text());
    }
    expect(bodies.size).toBe(1);
  });

  test('dies with a raised version or an ended subscription', async () => {
    await env.DB.prepare('UPDATE subscription SET link_version = 2').run();
    expect((await get(`/feeds/${token}.ics`)).status).toBe(404);
    token = await linkToken(LINK_KEY, { purpose: 'feed', id: 'ana', version: 2 });
    expect((await get(`/feeds/${token}.ics`)).status).toBe(200);
    await env.DB.prepare(`UPDATE subscription SET state = 'ended'`).run();
    expect((await get(`/feeds/${token}.ics`)).status).toBe(404);
  });

  test('tells nobody where it was read, and no search engine of it', async () => {
    const { headers } = await get(`/feeds/${token}.ics`);
    expect(headers.get('referrer-policy')).toBe('no-referrer');
    expect(headers.get('x-robots-tag')).toBe('noindex');
    expect(headers.get('cache-control')).toBe('private, no-cache');
  });

  test('shows no day whose brief has ceased to hold', async () => {
    house.nowMs = Date.parse('2027-05-14T22:00:00Z');
    expect(await events()).toHaveLength(0);
  });
});
