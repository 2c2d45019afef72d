import { env } from 'cloudflare:workers';
import { beforeAll, describe, expect, test, vi } from 'vitest';
import { app } from '../../worker/routes/app.ts';
import { SCHEMA_VERSION } from '../../worker/store/meta.ts';
import type { Hono } from 'hono';
import { newHouse, type House } from './support/house.ts';
import { launchFeature } from './support/stand-ins.ts';

// A machine that has other things to do is no fault of ours.
vi.setConfig({ testTimeout: 30_000, hookTimeout: 30_000 });

const noon = '2027-05-14T10:00:00Z';
let house: House;
let hono: Hono;

beforeAll(async () => {
  house = await newHouse({ nowIso: '2027-05-14T04:00:00Z' });
  await house.seed([{ id: 'ana', sites: ['north'], urls: ['terminal'], dueIso: '2027-05-14T04:00:00Z' }]);
  await house.minute();
  hono = app(house.services());
});

const hour = { validAt: noon, gridElevationM: 1240, wind10m: { speedMps: 3, fromDeg: 250 }, gustMps: 4, temperature2mC: 12, dewPoint2mC: 4, surfacePressureHpa: 873 };
const sheet = { id: 'mine', limits: { maxMeanMps: 6, maxGustMps: 8 } };

function assess(body: unknown, headers: Record<string, string> = { 'content-type': 'application/json' }): Promise<Response> {
  return Promise.resolve(hono.request('/api/v1/assess', { method: 'POST', headers, body: typeof body === 'string' ? body : JSON.stringify(body) }));
}

describe('POST /api/v1/assess', () => {
  test('judges hours with their working', async () => {
    const response = await assess({ site: launchFeature('here'), wing: { class: 'EN B' }, sheet, hours: [hour] });
    expect(response.status).toBe(200);
    const answer = (await response.json()) as { hours: { verdict: string; margins: { id: string; spare: number; working: unknown[] }[] }[]; notice: string };
    const mean = answer.hours[0]!.margins.find((margin) => margin.id === 'meanWind');
    expect(mean!.working.length).toBeGreaterThan(0);
    expect(answer.notice).toContain('not observed');
  });

  test('takes a site and a sheet by their ids', async () => {
    const response = await assess({ site: { id: 'north' }, wing: { class: 'EN B' }, sheet: { id: 'hill' }, hours: [hour] });
    expect(response.status).toBe(200);
  });

  test('lists every problem at once, as problem details', async () => {
    const response = await assess({ site: { id: 'nowhere' }, wing: { class: 'EN Z' }, sheet: { id: 'mine', limits: { maxGust: 8, maxMeanMps: 'x' } }, hours: [{ validAt: 'noon', gridElevationM: '3' }], extra: 1 });
    expect(response.status).toBe(400);
    expect(response.headers.get('content-type')).toBe('application/problem+json');
    const { problems, status, title } = (await response.json()) as { problems: { path: string; value: string; problem: string; allowed: string }[]; status: number; title: string };
    expect({ status, title }).toEqual({ status: 400, title: 'The request has errors' });
    for (const path of ['$.site.id', '$.wing.class', '$.sheet.limits.maxGust', '$.sheet.limits.maxMeanMps', '$.hours[0].validAt', '$.hours[0].gridElevationM', '$.extra']) {
      expect(problems.map((problem) => problem.path)).toContain(path);
    }
  });

  test.each([
    ['an empty body', '', 400], ['broken JSON', '{"site":', 400], ['the same key twice', '{"a":1,"a":2}', 400], ['a list', '[]', 400], ['null', 'null', 400],
    ['a number that is none', '{"hours":1e999}', 400], ['256 kB and a byte', `"${'x'.repeat(256 * 1024 - 1)}"`, 413],
  ])('%s is refused', async (_, body, status) => {
    const response = await assess(body);
    expect(response.status).toBe(status);
    expect(response.headers.get('content-type')).toBe('application/problem+json');
  });

  test('a body without a declared length is cut off too', async () => {
    const stream = new ReadableStream<Uint8Array>({ pull(controller) { controller.enqueue(new Uint8Array(64 * 1024).fill(32)); } });
    const request = new Request('https://x/api/v1/assess', { method: 'POST', headers: { 'content-type': 'application/json' }, body: stream });
    expect((await hono.fetch(request)).status).toBe(413);
  });

  test('text that calls itself something else is refused', async () => {
    expect((await assess('{}', { 'content-type': 'text/plain' })).status).toBe(415);
    expect((await assess('{}', {})).status).toBe(415);
  });

  test('stores nothing', async () => {
    const tables = ['brief', 'outbox', 'site', 'forecast', 'log'];
    const count = async (): Promise<number[]> => Promise.all(tables.map(async (table) => (await env.DB.prepare(`SELECT COUNT(*) AS n FROM ${table}`).first<{ n: number }>())!.n));
    const before = await count();
    await assess({ site: launchFeature('here'), wing: { class: 'EN B' }, sheet, hours: [hour] });
    await assess('{');
    expect(await count()).toEqual(before);
  });

  test('three hundred a minute, unless it is this machine', async () => {
    const away = app({ ...house.services(), settings: { ...house.services().settings, local: false } });
    const statuses: number[] = [];
    for (let index = 0; index < 302; index += 1) {
      const response = await away.request('/api/v1/assess', { method: 'POST', headers: { 'content-type': 'application/json', 'cf-connecting-ip': '192.0.2.1' }, body: '{}' });
      statuses.push(response.status);
    }
    expect(statuses.slice(0, 300).every((status) => status === 400)).toBe(true);
    expect(statuses.slice(300)).toEqual([429, 429]);
    const other = await away.request('/api/v1/assess', { method: 'POST', headers: { 'content-type': 'application/json', 'cf-connecting-ip': '192.0.2.2' }, body: '{}' });
    expect(other.status).toBe(400);
  });
});

describe('what can be read', () => {
  test('the sites, as they were handed in', async () => {
    const response = await hono.request('/api/v1/sites');
    expect(response.headers.get('content-type')).toBe('application/geo+json');
    expect(await response.json()).toEqual({ type: 'FeatureCollection', features: [launchFeature('north')] });
  });

  test('the day of a site, as data and as text', async () => {
    const path = '/api/v1/sites/north/days/2027-05-14?wing=EN+B&sheet=hill';
    expect(await (await hono.request(path)).json()).toMatchObject({ siteId: 'north', verdict: 'within', localDate: '2027-05-14' });
    const text = await (await hono.request(path, { headers: { accept: 'text/plain' } })).text();
    expect(text).toMatch(/^Site north: within limits/);
  });

  test('a day without a forecast cannot be said', async () => {
    expect(await (await hono.request('/api/v1/sites/north/days/2027-05-20?wing=EN+B&sheet=hill')).json()).toMatchObject({ verdict: 'unknown' });
  });

  test.each([
    ['/api/v1/sites/nowhere/days/2027-05-14', 404], ['/api/v1/sites/north/days/tomorrow', 400], ['/api/v1/sites/north/days/2027-02-30', 400],
    ['/api/v1/sites/north/days/2027-05-14?sheet=none&wing=EN+Q', 400], ['/api/v1/nothing', 404], ['/nothing', 404],
  ])('%s: %i', async (path, status) => {
    const response = await hono.request(path);
    expect(response.status).toBe(status);
    expect(response.headers.get('content-type')).toBe('application/problem+json');
  });

  test.each([['POST', '/api/v1/sites'], ['GET', '/api/v1/assess'], ['DELETE', '/healthz'], ['PUT', '/'], ['PATCH', '/sites/north']])('%s %s is told which methods there are', async (method, path) => {
    const response = await hono.request(path, { method });
    expect(response.status).toBe(405);
    expect(response.headers.get('allow')).toBeTruthy();
  });
});

describe('/healthz', () => {
  test('says how every step is', async () => {
    const response = await hono.request('/healthz');
    expect(response.status).toBe(200);
    expect(await response.json()).toMatchObject({
      status: 'working', warnings: [], outbox: { created: 1, sent: 1, pending: 0 }, work: { toFetch: 0, toAssess: 0 },
      steps: { tick: { lastAt: '2027-05-14T04:00:00.000Z' }, deliver: { lastAt: '2027-05-14T04:00:00.000Z' } },
      sources: [{ source: 'stand-in:one', sites: 1 }],
    });
  });

  test('is 503 when the tables are older than the code or the database is gone; after a roll-back older code reads newer tables', async () => {
    const services = house.services();
    await env.DB.prepare(`UPDATE meta SET value = '1' WHERE key = 'schema'`).run();
    expect((await app(services).request('/healthz')).status).toBe(503);
    await env.DB.prepare(`UPDATE meta SET value = '9999' WHERE key = 'schema'`).run();
    expect((await app(services).request('/healthz')).status).toBe(200);
    await env.DB.prepare(`UPDATE meta SET value = ? WHERE key = 'schema'`).bind(String(SCHEMA_VERSION)).run();
    house.options = { ...house.options, around: () => ({ prepare: () => { throw new Error('Network connection lost.'); }, batch: () => Promise.reject(new Error('Network connection lost.')) }) };
    expect((await app(house.services()).request('/healthz')).status).toBe(503);
    const { around: _, ...rest } = house.options;
    house.options = rest;
  });
});

describe('/local', () => {
  test('is there with LOCAL=1 and its token only', async () => {
    const { settings } = house.services();
    const token = 'a-token-of-this-start-0123456789abcdef';
    const withToken = app({ ...house.services(), settings: { ...settings, localToken: token } });
    const ask = (path: string, authorization?: string): Promise<Response> => Promise.resolve(withToken.request(path, authorization === undefined ? {} : { headers: { authorization } }));
    expect((await ask('/local/progress')).status).toBe(401);
    expect((await ask('/local/progress', 'Bearer wrong')).status).toBe(401);
    expect((await ask('/local/progress', `Bearer ${token}`)).status).toBe(200);
    expect(await (await ask('/local/terminal?after=0', `Bearer ${token}`)).json()).toHaveLength(1);
    const away = app({ ...house.services(), settings: { ...settings, local: false, localToken: token } });
    expect((await away.request('/local/progress', { headers: { authorization: `Bearer ${token}` } })).status).toBe(404);
  });

  test('a bad seed is refused whole', async () => {
    const { settings } = house.services();
    const token = 'a-token-of-this-start-0123456789abcdef';
    const withToken = app({ ...house.services(), settings: { ...settings, localToken: token } });
    const response = await withToken.request('/local/seed', {
      method: 'POST', headers: { authorization: `Bearer ${token}`, 'content-type': 'application/json' },
      body: JSON.stringify({ sites: [{ id: 'x', feature: '{"type":"Feature"}', demo: false }] }),
    });
    expect(response.status).toBe(400);
    expect((await env.DB.prepare('SELECT COUNT(*) AS n FROM site WHERE retired_at IS NULL').first<{ n: number }>())!.n).toBe(1);
  });
});
