import { env } from 'cloudflare:workers';
import { beforeAll, describe, expect, test, vi } from 'vitest';
import published from '../../config/published.json' with { type: 'json' };
import sheets from '../../config/sheets.json' with { type: 'json' };
import sites from '../../config/sites.json' with { type: 'json' };
import type { JudgedDay } from '../../lib/brief/day.ts';
import { briefText, briefTitle } from '../../lib/brief/words/index.ts';
import { app } from '../../worker/routes/app.ts';
import { READER } from '../../worker/morning/message.ts';
import { newHouse, type House } from './support/house.ts';

// A machine that has other things to do is no fault of ours.
vi.setConfig({ testTimeout: 30_000, hookTimeout: 30_000 });

const six = '2027-05-14T04:00:00Z';
let house: House;
let briefs: { siteId: string; day: JudgedDay; digest: JudgedDay; bodyBytes: number; digestBytes: number }[];

beforeAll(async () => {
  house = await newHouse({ nowIso: six, real: true });
  const { stores } = house.services();
  const pairs = sites.features.map(({ id, properties }) => {
    const own = published.sites.find(({ site }) => site === id)?.pairs[0] ?? published[properties.kind === 'strip' ? 'strip' : 'launch'][0]!;
    return { siteId: id, wingKey: own.wing, sheetId: own.sheet };
  });
  await stores.db.together([
    ...stores.site.replaceAll(sites.features.map((feature) => ({ id: feature.id, feature: JSON.stringify(feature), demo: true })), house.nowMs),
    stores.sheet.put(sheets.map((sheet) => ({ id: sheet.id, version: sheet.version, body: JSON.stringify(sheet) })), house.nowMs),
    stores.wing.put(['EN A', 'EN B'].map((key) => ({ key, name: key, body: JSON.stringify({ class: key }) }))),
    ...stores.published.replaceAll(pairs),
    ...stores.subscription.put([{ id: 'here', timeZone: 'Europe/Vienna', deliverMinute: 360, nextDueAtMs: house.nowMs, pairs }], house.nowMs),
    stores.channel.put([
      { id: 'here-0', subscriptionId: 'here', rank: 0, kind: 'terminal', target: '{}', state: 'active' },
      { id: 'here-1', subscriptionId: 'here', rank: 0, kind: 'webhook', target: '{"url":"https://hooks.example.org/x"}', state: 'active' },
    ], house.nowMs),
  ]);
  await house.minute();
  const rows = await env.DB.prepare('SELECT site_id, body, digest FROM brief ORDER BY site_id').all<{ site_id: string; body: string; digest: string }>();
  briefs = rows.results.map(({ site_id, body, digest }) => ({
    siteId: site_id, day: JSON.parse(body) as JudgedDay, digest: JSON.parse(digest) as JudgedDay, bodyBytes: body.length, digestBytes: digest.length,
  }));
});

describe('the demo morning, judged for real', () => {
  test('has a brief for every site, each marked as invented', () => {
    expect(briefs.map(({ siteId }) => siteId)).toEqual(sites.features.map(({ id }) => id).sort());
    expect(briefs.every(({ day }) => day.demo)).toBe(true);
    expect(new Set(briefs.flatMap(({ day }) => day.hours.map(({ verdict }) => verdict)))).toEqual(new Set(['within', 'close', 'unknown', 'beyond']));
  });

  test('a digest says the same as the whole day, in a fraction of the size', () => {
    for (const { day, digest } of briefs) {
      expect(briefText([digest], READER)).toBe(briefText([day], READER));
      expect(briefTitle([digest])).toBe(briefTitle([day]));
    }
    const all = briefs.map(({ digest }) => digest);
    expect(briefText(all, READER)).toBe(briefText(briefs.map(({ day }) => day), READER));
    const share = briefs.reduce((sum, { digestBytes }) => sum + digestBytes, 0) / briefs.reduce((sum, { bodyBytes }) => sum + bodyBytes, 0);
    expect(share).toBeLessThan(0.2);
  });

  test('reaches the terminal, and no address elsewhere', async () => {
    const terminal = await env.DB.prepare('SELECT title, text FROM terminal').all<{ title: string; text: string }>();
    expect(terminal.results).toHaveLength(1);
    expect(terminal.results[0]!.title).toMatch(/^Invented weather/);
    expect(terminal.results[0]!.text).toMatch(/^Invented weather/);
    expect(house.posts).toHaveLength(0);
    expect(await house.outbox()).toMatchObject([{ channel_id: 'here-0', state: 'sent' }, { channel_id: 'here-1', state: 'dead', reason: 'invented weather stays on this machine' }]);
  });

  test('every day through the API says that it is invented', async () => {
    const hono = app(house.services());
    for (const { day } of briefs) {
      const path = `/api/v1/sites/${day.siteId}/days/${day.localDate}?${new URLSearchParams({ wing: day.wingKey, sheet: day.sheetId })}`;
      const answer = (await (await hono.request(path)).json()) as { demo: boolean; notice: string; sentence: string };
      expect(answer).toMatchObject({ demo: true });
      expect(answer.notice).toMatch(/^Invented weather\./);
      expect(answer.sentence).toMatch(/^Invented weather/);
      expect(await (await hono.request(path, { headers: { accept: 'text/plain' } })).text()).toMatch(/^Invented weather/);
    }
  });

  test('a withheld site has its reason in the sentence', () => {
    const withheld = briefs.find(({ day }) => day.hours.every(({ verdict }) => verdict === 'unknown'));
    expect(briefText([withheld!.day], READER)).toMatch(/cannot say all day\. No source has a vote: .*withheld/);
  });
});
