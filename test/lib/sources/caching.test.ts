// The caching contract: not before Expires, then If-Modified-Since, 304 renews, 203 is told, and no text of theirs is kept.
import { beforeEach, describe, expect, test } from 'vitest';
import { failure, success } from '../../../lib/result.ts';
import { askCached, memoryCache, type CachedQuestion, type SourceCache } from '../../../worker/sources/caching.ts';
import type { Host } from '../../../worker/sources/host.ts';
import type { Answer } from '../../../worker/sources/safe-fetch.ts';

const t0 = Date.parse('2027-05-14T02:40:00Z');
const MINUTE = 60_000;

let nowMs: number;
let cache: SourceCache;
let asked: (string | undefined)[];
let next: Answer;

beforeEach(() => {
  nowMs = t0;
  cache = memoryCache();
  asked = [];
  next = { status: 200, json: { n: 1 }, expiresAtMs: t0 + 30 * MINUTE, lastModifiedMs: t0 - 10 * MINUTE };
});

const host: Host = {
  origin: 'https://a.example',
  now: () => nowMs,
  ask: ({ headers = {} }) => {
    asked.push(headers['if-modified-since']);
    return Promise.resolve(success(next));
  },
};

const question: CachedQuestion<{ n: number }> = {
  version: 1, path: '/p', headers: { 'user-agent': 'x' }, freshMs: 20 * MINUTE, keepMs: 24 * 60 * MINUTE,
  read: (json) => (typeof (json as { n?: unknown }).n === 'number' ? success({ n: (json as { n: number }).n }) : failure({ kind: 'shape', path: '$' })),
};

const ask = () => askCached(host, cache, question);

test('before Expires nobody is asked', async () => {
  await ask();
  nowMs += 30 * MINUTE - 1;
  expect(await ask()).toEqual(success({ value: { n: 1 }, fetchedMs: t0, isDeprecated: false }));
  expect(asked).toHaveLength(1);
});

test('after it, the exact Last-Modified goes along, and a 304 renews what we have', async () => {
  await ask();
  nowMs += 31 * MINUTE;
  next = { status: 304, json: undefined, expiresAtMs: nowMs + 30 * MINUTE, lastModifiedMs: null };
  expect(await ask()).toEqual(success({ value: { n: 1 }, fetchedMs: t0 + 31 * MINUTE, isDeprecated: false }));
  expect(asked).toEqual([undefined, 'Fri, 14 May 2027 02:30:00 GMT']);
  nowMs += 31 * MINUTE;
  await ask();
  expect(asked[2]).toBe('Fri, 14 May 2027 02:30:00 GMT');
});

test('a 200 replaces it', async () => {
  await ask();
  nowMs += 31 * MINUTE;
  next = { ...next, json: { n: 2 }, lastModifiedMs: nowMs };
  const answer = await ask();
  expect(answer.ok && answer.value.value).toEqual({ n: 2 });
});

test('a 304 to a question without a condition is an answer to nothing', async () => {
  next = { ...next, status: 304, json: undefined };
  expect(await ask()).toEqual(failure({ kind: 'refused', status: 304 }));
});

test('203 is told', async () => {
  next = { ...next, status: 203 };
  const answer = await ask();
  expect(answer.ok && answer.value.isDeprecated).toBe(true);
});

test('without Expires it is fresh for as long as we say; a far Expires is not believed', async () => {
  next = { ...next, expiresAtMs: null };
  await ask();
  nowMs += 21 * MINUTE;
  next = { ...next, expiresAtMs: nowMs + 365 * 24 * 60 * MINUTE };
  await ask();
  expect(asked).toHaveLength(2);
  nowMs += 6 * 60 * MINUTE;
  await ask();
  expect(asked).toHaveLength(3);
});

test('what does not parse is not kept', async () => {
  next = { ...next, json: { reason: '<script>' } };
  expect(await ask()).toEqual(failure({ kind: 'shape', path: '$' }));
  next = { ...next, json: { n: 5 } };
  const answer = await ask();
  expect(answer.ok && answer.value.value).toEqual({ n: 5 });
});

describe('a cache with faults costs a question, never an answer', () => {
  test.each(['x', '{}', '{"freshUntilMs":1e99}'])('that holds %j', async (body) => {
    await cache.put('https://a.example|1|/p', { body, expiresAtMs: t0 + MINUTE }, t0);
    expect((await ask()).ok).toBe(true);
  });

  test('that throws', async () => {
    const broken: SourceCache = { get: () => Promise.reject(new Error('D1')), put: () => Promise.reject(new Error('D1')) };
    expect((await askCached(host, broken, question)).ok).toBe(true);
  });
});
