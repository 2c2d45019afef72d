// The training day over HTTP, judged for real from the demo's invented weather.
import { env } from 'cloudflare:workers';
import { beforeAll, describe, expect, test } from 'vitest';
import type { Hono } from 'hono';
import demoPlan from '../../config/plan-demo.json' with { type: 'json' };
import sheets from '../../config/sheets.json' with { type: 'json' };
import sites from '../../config/sites.json' with { type: 'json' };
import { CLOSING } from '../../lib/brief/words/index.ts';
import type { DayPlan } from '../../lib/plan/day-plan.ts';
import { app } from '../../worker/routes/app.ts';
import { linkToken } from '../../worker/secrets.ts';
import { blemishes } from '../lib/words/forbidden.ts';
import { LINK_KEY, newHouse, type House } from './support/house.ts';

let house: House;
let hono: Hono;

beforeAll(async () => {
  house = await newHouse({ nowIso: '2027-05-14T03:30:00Z', real: true });
  const { stores } = house.services();
  const pairs = sites.features.map(({ id, properties }) => ({ siteId: id, wingKey: 'EN B', sheetId: properties.kind === 'strip' ? 'solo-tow' : 'descent-experienced' }));
  await stores.db.together([
    ...stores.site.replaceAll(sites.features.map((feature) => ({ id: feature.id, feature: JSON.stringify(feature), demo: true })), house.nowMs),
    stores.sheet.put(sheets.map((sheet) => ({ id: sheet.id, version: sheet.version, body: JSON.stringify(sheet) })), house.nowMs),
    stores.wing.put([{ key: 'EN B', name: 'EN B', body: '{"class":"EN B"}' }]),
    ...stores.published.replaceAll(pairs),
    ...stores.subscription.put([{ id: 'here', timeZone: 'Europe/Vienna', deliverMinute: 330, nextDueAtMs: house.nowMs, pairs }], house.nowMs),
    stores.channel.put([{ id: 'here-0', subscriptionId: 'here', rank: 0, kind: 'terminal', target: '{}', state: 'active' }], house.nowMs),
  ]);
  await house.minute();
  house.nowMs = Date.parse('2027-05-14T04:00:00Z');
  hono = app(house.services());
});

const JSON_TYPE = { 'content-type': 'application/json' };
const text = (markup: string) => markup.replace(/<[^>]*>/g, ' ').replace(/\s+/g, ' ');

function ask(body: unknown): Promise<Response> {
  return Promise.resolve(hono.request('/api/v1/plan', { method: 'POST', headers: JSON_TYPE, body: typeof body === 'string' ? body : JSON.stringify(body) }));
}

/** The fields of a form on a page, as a browser would send them. */
function fieldsOf(markup: string): URLSearchParams {
  const unescape = (value: string) => value.replaceAll('&#39;', "'").replaceAll('&quot;', '"').replaceAll('&amp;', '&');
  const form = new URLSearchParams();
  for (const [tag] of markup.matchAll(/<input\b[^>]*>/g)) {
    const name = /name="([^"]*)"/.exec(tag)?.[1];
    if (name === undefined || (tag.includes('type="checkbox"') && !tag.includes(' checked'))) continue;
    form.append(name, unescape(/value="([^"]*)"/.exec(tag)?.[1] ?? ''));
  }
  for (const [, name, options] of markup.matchAll(/<select name="([^"]*)">(.*?)<\/select>/gs)) {
    form.append(name!, unescape(/<option value="([^"]*)" selected>/.exec(options!)?.[1] ?? /<option value="([^"]*)"/.exec(options!)?.[1] ?? ''));
  }
  return form;
}

function send(path: string, form: URLSearchParams, headers: Record<string, string> = {}): Promise<Response> {
  return Promise.resolve(hono.request(path, { method: 'POST', headers: { 'content-type': 'application/x-www-form-urlencoded', ...headers }, body: form.toString() }));
}

const rows = async (): Promise<number> => (await env.DB.prepare('SELECT COUNT(*) AS n FROM plan').first<{ n: number }>())!.n;

describe('POST /api/v1/plan', () => {
  test('plans the worked day: three groups, never an hour that is beyond or unknown', async () => {
    const response = await ask(demoPlan);
    expect(response.status).toBe(200);
    const plan = (await response.json()) as DayPlan & { title: string; sentence: string; notice: string };
    expect(plan.groups.map(({ name }) => name)).toEqual(demoPlan.groups.map(({ name }) => name));
    expect(plan.objective.placed).toBe(3);
    expect(plan.groups.flatMap(({ blocks }) => blocks.map(({ verdict }) => verdict)).filter((verdict) => verdict !== 'within' && verdict !== 'close')).toEqual([]);
    expect(plan.groups.flatMap(({ blocks }) => blocks.map(({ site }) => site))).not.toContain('maddle-bowl');
    expect(plan).toMatchObject({ demo: true, date: '2027-05-14', proven: true });
    expect(plan.notice).toMatch(/^Invented weather\. .*not observed/);
    expect(plan.title).toMatch(/^Invented weather: /);
    expect(plan.siteDays.every(({ cautions, localRules, sources }) => cautions.length > 0 && localRules !== null && sources.length > 0)).toBe(true);
  });

  test('says every problem at once, with its path', async () => {
    const [first, second] = demoPlan.groups;
    const response = await ask({
      ...demoPlan, date: '2027-02-30', instructors: -1, weather: 'fine', groups: [{ ...first, wishHours: 'four', closed: true }, { ...second, wing: 'EN Z' }],
    });
    expect(response.status).toBe(400);
    expect(response.headers.get('content-type')).toBe('application/problem+json');
    const paths = ((await response.json()) as { problems: { path: string }[] }).problems.map(({ path }) => path);
    expect(paths.sort()).toEqual(['$.date', '$.groups[0].closed', '$.groups[0].wishHours', '$.groups[1].wing', '$.instructors', '$.weather']);
  });

  test('and every reference that leads nowhere', async () => {
    const [first, second, third] = demoPlan.groups;
    const response = await ask({
      ...demoPlan, moves: [{ from: 'here', to: 'wennet-meadow', minutes: 5 }], lost: [{ site: 'there', hour: 9 }],
      sites: [...demoPlan.sites, { id: 'quorrin-edge', capacity: 1 }, { id: 'nowhere', capacity: 1, openFromHour: 9, openToHour: 9 }],
      groups: [{ ...first, sites: ['wennet-meadow', 'tivvern-strip', 'wennet-meadow'], wishHours: 1, minHours: 2 }, { ...second, name: 'First hops', sheet: 'solo-tows' }, { ...third, earliestHour: 17, minHours: 2 }],
    });
    const paths = ((await response.json()) as { problems: { path: string }[] }).problems.map(({ path }) => path);
    expect(paths).toEqual([
      '$.sites[4].id', '$.sites[5].id', '$.sites[5].openToHour', '$.groups[0].name', '$.groups[0].wishHours', '$.groups[0].sites[1]', '$.groups[0].sites[2]',
      '$.groups[1].sheet', '$.groups[1].name', '$.groups[2].latestHour', '$.moves[0].from', '$.lost[0].site',
    ]);
  });

  test.each([['nothing', '', 400], ['a list', '[]', 400], ['too little', '{"sites":[]}', 400], ['64 kB and two bytes', `"${'x'.repeat(64 * 1024)}"`, 413]])('%s is refused', async (_, body, status) => {
    expect((await ask(body)).status).toBe(status);
  });

  test('keeps nothing, and takes no other method or type', async () => {
    const before = await rows();
    await ask(demoPlan);
    expect(await rows()).toBe(before);
    expect((await hono.request('/api/v1/plan')).status).toBe(405);
    expect((await hono.request('/api/v1/plan', { method: 'POST', body: '{}' })).status).toBe(415);
  });

  test('thirty a minute, unless it is this machine', async () => {
    const away = app({ ...house.services(), settings: { ...house.services().settings, local: false } });
    const statuses: number[] = [];
    for (let index = 0; index < 31; index += 1) statuses.push((await away.request('/api/v1/plan', { method: 'POST', headers: { ...JSON_TYPE, 'cf-connecting-ip': '192.0.2.7' }, body: '{}' })).status);
    expect(statuses.filter((status) => status === 400)).toHaveLength(30);
    expect(statuses.at(-1)).toBe(429);
  });
});

describe('/plan', () => {
  test('shows the worked day, and keeps nothing', async () => {
    const before = await rows();
    const response = await hono.request('/plan');
    const markup = await response.text();
    expect(response.status).toBe(200);
    expect(markup).toMatch(/<title>Invented weather: /);
    expect(text(markup)).toContain(CLOSING);
    for (const name of ['First hops', 'Tow course', 'Licence class', 'Local rules:', 'Next best:', 'run ']) expect(text(markup)).toContain(name);
    expect(text(markup)).not.toMatch(/\bundefined\b|\bNaN\b|\[object|\bnull\b/);
    expect(blemishes(text(markup.replace(/<title>.*?<\/title>/s, ''))).filter((each) => /^"(safe|good|go|ok|fly|green)"/i.test(each))).toEqual([]);
    expect(markup).not.toMatch(/ style=| on[a-z]+=|javascript:|<style/i);
    expect(response.headers.get('content-security-policy')).toContain("default-src 'none'");
    expect(await rows()).toBe(before);
  });

  test('what its form sends is what the API takes: the same plan, kept behind a link', async () => {
    const form = fieldsOf(await (await hono.request('/plan')).text());
    const made = await send('/plan', form);
    expect(made.status).toBe(303);
    const link = made.headers.get('location')!;
    expect(link).toMatch(/^\/plan\/[\w-]+\.1\.[\w-]{32}$/);
    const row = (await env.DB.prepare('SELECT body FROM plan').first<{ body: string }>())!;
    const { title: _, sentence: __, notice: ___, ...asked } = (await (await ask(demoPlan)).json()) as Record<string, unknown>;
    expect(JSON.parse(row.body)).toEqual(asked);
    const kept = await hono.request(link);
    expect(kept.status).toBe(200);
    expect(kept.headers.get('x-robots-tag')).toBe('noindex');
    expect(text(await kept.text())).toContain('As a calendar');
  });

  test('an hour taken out is planned around and can be put back; the link stays, the revision counts', async () => {
    const link = (await send('/plan', fieldsOf(await (await hono.request('/plan')).text()))).headers.get('location')!;
    const first = await (await hono.request(link)).text();
    const lose = /<button form="plan-form" name="lose" value="(tivvern-strip \d+)"/.exec(first)![1]!;
    const again = fieldsOf(first);
    again.set('lose', lose);
    expect((await send(link, again)).headers.get('location')).toBe(link);
    const second = await (await hono.request(link)).text();
    expect(second).toContain(`<button name="give" value="${lose}">`);
    expect(second).not.toContain(`name="lose" value="${lose}"`);
    const back = fieldsOf(second);
    back.set('give', lose);
    await send(link, back);
    const third = await (await hono.request(link)).text();
    expect(third).toContain(`name="lose" value="${lose}"`);
    const calendar = await (await hono.request(`${link}/plan.ics`)).text();
    expect(calendar).toContain('SEQUENCE:3');
  });

  test('what is wrong comes back with the form as it was typed, and nothing is kept', async () => {
    const before = await rows();
    const form = fieldsOf(await (await hono.request('/plan')).text());
    form.set('g0.wishHours', 'lots');
    form.set('g1.name', '<img src=x onerror=alert(1)>');
    const response = await send('/plan', form);
    const markup = await response.text();
    expect(response.status).toBe(400);
    expect(text(markup)).toMatch(/Group 1, wishHours: a text where a (whole )?number is needed/);
    expect(markup).toContain('value="lots"');
    expect(markup).not.toContain('<img');
    expect(await rows()).toBe(before);
  });

  test('a link that is wrong, of another purpose or revoked shows nothing', async () => {
    const link = (await send('/plan', fieldsOf(await (await hono.request('/plan')).text()))).headers.get('location')!;
    const id = link.split('/')[2]!.split('.')[0]!;
    expect((await hono.request(`${link.slice(0, -1)}${link.endsWith('A') ? 'B' : 'A'}`)).status).toBe(404);
    expect((await hono.request(`/plan/${await linkToken(LINK_KEY, { purpose: 'feed', id, version: 1 })}`)).status).toBe(404);
    expect((await hono.request(`/plan/${id}`)).status).toBe(404);
    await env.DB.prepare('UPDATE plan SET link_version = 2 WHERE id = ?').bind(id).run();
    for (const path of [link, `${link}/plan.csv`, `${link}/plan.ics`]) expect((await hono.request(path)).status).toBe(404);
    expect((await send(link, new URLSearchParams())).status).toBe(404);
    expect((await hono.request(`/plan/${await linkToken(LINK_KEY, { purpose: 'plan', id, version: 2 })}`)).status).toBe(200);
  });

  test('GET changes nothing, whatever is read', async () => {
    const link = (await send('/plan', fieldsOf(await (await hono.request('/plan')).text()))).headers.get('location')!;
    const all = async () => JSON.stringify((await env.DB.prepare('SELECT * FROM plan ORDER BY id').all()).results);
    const before = await all();
    for (const path of ['/plan', link, `${link}/plan.csv`, `${link}/plan.ics`]) expect((await hono.request(path)).status).toBe(200);
    expect(await all()).toBe(before);
    expect((await hono.request(`${link}/plan.pdf`)).status).toBe(404);
  });

  test('another site may not post here, and a day without a link key is planned but not kept', async () => {
    const form = fieldsOf(await (await hono.request('/plan')).text());
    expect((await send('/plan', form, { 'sec-fetch-site': 'cross-site' })).status).toBe(403);
    const before = await rows();
    const keyless = app({ ...house.services(), settings: { ...house.services().settings, linkKey: null } });
    const response = await keyless.request('/plan', { method: 'POST', headers: { 'content-type': 'application/x-www-form-urlencoded' }, body: form.toString() });
    expect(response.status).toBe(200);
    expect(text(await response.text())).toContain('This plan is not kept');
    expect(await rows()).toBe(before);
  });

  test('a block that has turned since is told before the plan', async () => {
    const link = (await send('/plan', fieldsOf(await (await hono.request('/plan')).text()))).headers.get('location')!;
    await env.DB.prepare("UPDATE brief SET body = replace(replace(body, '\"verdict\":\"within\"', '\"verdict\":\"unknown\"'), '\"verdict\":\"close\"', '\"verdict\":\"unknown\"') WHERE site_id = 'orlask-shoulder'").run();
    const seen = text(await (await hono.request(link)).text());
    expect(seen).toMatch(/Turned since this plan was made Cannot say at \d+ h: Licence class/);
  });

  test('when its time is over it shows no verdict; the form stays', async () => {
    const link = (await send('/plan', fieldsOf(await (await hono.request('/plan')).text()))).headers.get('location')!;
    const later = house.nowMs;
    house.nowMs = Date.parse('2027-05-14T22:00:00Z');
    const markup = await (await app(house.services()).request(link)).text();
    house.nowMs = later;
    expect(text(markup)).toContain('Expired');
    expect(text(markup)).not.toMatch(/within limits|beyond a limit|cannot say/i);
    expect(markup).toContain('id="plan-form"');
  });
});
