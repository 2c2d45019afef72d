// Sources in the runtime with their state in D1: what one invocation learns of a host, the next one knows.
import { env } from 'cloudflare:workers';
import { beforeEach, expect, test } from 'vitest';
import sourcesJson from '../../../config/sources.json' with { type: 'json' };
import { parseSourceOrder } from '../../../lib/config/source-order.ts';
import type { Site } from '../../../lib/site.ts';
import { metNorway } from '../../support/forecast-server/met-norway.ts';
import { metaOf, openMeteo } from '../../support/forecast-server/open-meteo.ts';
import { liveSources } from '../../../worker/sources/order.ts';
import type { SourceAnswer } from '../../../worker/sources/source.ts';
import { breakerStore } from '../../../worker/store/breaker.ts';
import { database } from '../../../worker/store/database.ts';
import { sourceCacheStore } from '../../../worker/store/source-cache.ts';

const order = parseSourceOrder(sourcesJson);
const alps = { id: 'alps', latDeg: 47.26, lonDeg: 11.44, elevationM: 1300, pressureStep: null } as Site;
const norway = { ...alps, id: 'norway', latDeg: 60.1, lonDeg: 9.1 };
const D2 = 'open-meteo:icon_d2';
const MET = 'met-norway:locationforecast';
const terrain = { groundAtM: () => 1180 };

let nowMs: number;
let asked: string[];
let isDown: boolean;

beforeEach(() => {
  nowMs = Date.parse('2027-05-14T02:40:00Z');
  asked = [];
  isDown = false;
});

function reply(url: URL): unknown {
  if (url.pathname.startsWith('/data/')) return metaOf(url.pathname.split('/')[2]!, nowMs);
  if (url.pathname.startsWith('/weatherapi/')) return metNorway({ latDeg: Number(url.searchParams.get('lat')), lonDeg: Number(url.searchParams.get('lon')) }, nowMs, terrain);
  return openMeteo(url, terrain).body;
}

/** One invocation: nothing of the one before but the database. */
async function invoke(site: Site, id: string, addresses: { openMeteoUrl: string } = { openMeteoUrl: 'https://weather.example' }): Promise<SourceAnswer> {
  if (!order.ok) throw new Error('config/sources.json does not parse');
  const db = database(env.DB, { sleep: () => Promise.resolve(), random: () => 0, timeoutMs: 5000 });
  const settings = { ...addresses, openMeteoEnsembleUrl: 'https://ensemble.example', metNorwayUrl: 'https://met.example', nwsUrl: 'https://nws.example', openMeteoKey: null, contact: 'ops@club.example' };
  const fetch = (address: string): Promise<Response> => {
    asked.push(address);
    if (isDown) return Promise.reject(new Error('Network connection lost.'));
    const headers = { expires: new Date(nowMs + 1_800_000).toUTCString(), 'last-modified': new Date(nowMs - 600_000).toUTCString() };
    return Promise.resolve(Response.json(reply(new URL(address)), { headers }));
  };
  const everything = { ...order.value, perSite: { deterministic: 6, ensemble: 1 } };
  const sources = liveSources(everything, settings, { fetch, now: () => nowMs, local: false, cache: sourceCacheStore(db), breakers: breakerStore(db) })(site);
  const source = sources.find((candidate) => candidate.id === id)!;
  return (await source.fetch({ sites: [site], fromUtc: '2027-05-13T21:00:00Z', toUtc: '2027-05-14T23:00:00Z' })).get(site.id)!;
}

const kindOf = async (...args: Parameters<typeof invoke>) => {
  const answer = await invoke(...args);
  return answer.ok ? 'given' : answer.error.kind;
};

test('F29: a breaker that one invocation opened holds the next one back, lets one probe through, and closes', async () => {
  isDown = true;
  expect([await kindOf(alps, D2), await kindOf(alps, D2), await kindOf(alps, D2)]).toEqual(['unreachable', 'unreachable', 'unreachable']);
  const before = asked.length;
  expect(await kindOf(alps, D2)).toBe('breaker-open');
  expect(asked).toHaveLength(before);
  nowMs += 30_000;
  isDown = false;
  expect(await kindOf(alps, D2)).toBe('given');
  expect(await kindOf(alps, D2)).toBe('given');
});

test('an answer of MET Norway is kept until its Expires', async () => {
  const first = await invoke(norway, MET);
  nowMs += 29 * 60_000;
  expect(await invoke(norway, MET)).toEqual(first);
  expect(asked.filter((url) => url.includes('met.example'))).toHaveLength(1);
  nowMs += 2 * 60_000;
  await invoke(norway, MET);
  expect(asked.filter((url) => url.includes('met.example'))).toHaveLength(2);
});

test('what a day has cost is counted over invocations, and what would cost too much is not sent', async () => {
  const free = { openMeteoUrl: 'https://api.open-meteo.com' };
  expect(await kindOf(alps, D2, free)).toBe('given');
  const row = await env.DB.prepare("SELECT body FROM breaker WHERE source = 'quota:open-meteo'").first<{ body: string }>();
  expect(Object.values(JSON.parse(row!.body) as Record<string, number>)).toEqual([5.5, 5.5, 5.5]);
  const full = Object.fromEntries(Object.keys(JSON.parse(row!.body) as object).map((key) => [key, 9999]));
  await env.DB.prepare("UPDATE breaker SET body = ? WHERE source = 'quota:open-meteo'").bind(JSON.stringify(full)).run();
  const before = asked.filter((url) => url.includes('/v1/forecast')).length;
  expect(await invoke(alps, D2, free)).toEqual({ ok: false, error: { kind: 'rate-limited', retryAfterS: 76_800 } });
  expect(asked.filter((url) => url.includes('/v1/forecast'))).toHaveLength(before);
});

test('nothing of theirs is in the tables', async () => {
  const rows = await env.DB.prepare('SELECT body FROM source_cache UNION ALL SELECT body FROM breaker').all<{ body: string }>();
  expect(rows.results.length).toBeGreaterThan(1);
  for (const { body } of rows.results) expect(body).not.toMatch(/fair_day|Europe|GMT|reason|Network/);
});
