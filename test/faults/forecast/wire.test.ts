// Faults F1-F16 and the byte-level rows of table 4-A against safeFetch: real sockets on loopback, nothing mocked.
import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest';
import { startForecastServer, type ForecastServer } from '../../support/forecast-server/server.ts';
import { BOUNDS, safeFetch, type Bounds } from '../../../worker/sources/safe-fetch.ts';

const SHORT: Bounds = { ...BOUNDS, totalMs: 600, firstTryMs: 250 };

let server: ForecastServer;
beforeAll(async () => {
  server = await startForecastServer();
});
afterAll(() => server.close());
beforeEach(() => server.reset());

const query =
  '/v1/forecast?latitude=47.26&longitude=11.44&elevation=nan&models=icon_d2&cell_selection=nearest&wind_speed_unit=ms&timeformat=unixtime' +
  '&timezone=GMT&start_hour=2027-05-13T21:00&end_hour=2027-05-14T23:00&hourly=wind_speed_10m,wind_gusts_10m';

async function ask(mode: string, bounds: Bounds = SHORT) {
  server.behave('open-meteo', mode);
  const startedMs = performance.now();
  const result = await safeFetch({ url: server.origin + query, origins: [server.origin] }, { fetch, now: Date.now, local: true, bounds });
  return { fault: result.ok ? null : result.error, answer: result.ok ? result.value : null, tookMs: performance.now() - startedMs };
}

test('a clean answer is read, packed or not, with or without a byte order mark (A3)', async () => {
  for (const mode of ['clean', 'gzip', 'utf8-bom']) {
    const { answer } = await ask(mode);
    expect(answer).toMatchObject({ status: 200, json: { hourly_units: { wind_gusts_10m: 'm/s' } } });
  }
  expect(server.asked).toHaveLength(3);
});

describe('T2 each fault has its tag, and as many tries as may help', () => {
  test.each<[string, string, object, number]>([
    ['F1: the connection is reset', 'reset', { kind: 'unreachable' }, 2],
    ['F3: no answer at all', 'hang', { kind: 'timeout', afterMs: 600 }, 2],
    ['F3: headers and then nothing', 'hang-in-body', { kind: 'timeout', afterMs: 600 }, 1],
    ['F4: a byte every 300 ms', 'drip', { kind: 'timeout', afterMs: 600 }, 1],
    ['F7: packed bytes that do not unpack', 'corrupt-gzip', { kind: 'unreachable' }, 2],
    ['F8: less than the length that was announced', 'truncated', { kind: 'unreachable' }, 2],
    ['F9: complete JSON and then a reset', 'reset-after-json', { kind: 'unreachable' }, 2],
    ['half a stream, then their error in plain text', 'half-streamed', { kind: 'not-json' }, 2],
    ['F10: a maintenance page', 'html', { kind: 'content-type' }, 1],
    ['F10: JSON under another name', 'text-plain', { kind: 'content-type' }, 1],
    ['F10: a page under the name of JSON', 'html-as-json', { kind: 'not-json' }, 2],
    ['F11: an empty 200', 'empty', { kind: 'not-json' }, 2],
    ['F11: a 204', 'status-204', { kind: 'not-json' }, 2],
    ['F12: 500', 'status-500', { kind: 'server-error', status: 500 }, 2],
    ['F12: 502 as HTML', 'status-502', { kind: 'server-error', status: 502 }, 2],
    ['F12: 503 that asks for an hour', 'status-503', { kind: 'server-error', status: 503 }, 2],
    ['F13: 429', 'status-429', { kind: 'rate-limited', retryAfterS: null }, 1],
    ['F13: 429 with a time', 'status-429-later', { kind: 'rate-limited', retryAfterS: 120 }, 1],
    ['F14: 401', 'status-401', { kind: 'refused', status: 401 }, 1],
    ['F14: 403', 'status-403', { kind: 'refused', status: 403 }, 1],
    ['a bad request', 'status-400', { kind: 'refused', status: 400 }, 1],
    ['F15: 301 to another host', 'status-301', { kind: 'redirected' }, 1],
    ['F15: 302 on the same host', 'status-302', { kind: 'redirected' }, 1],
    ['F15: 307 to this machine', 'status-307', { kind: 'redirected' }, 1],
    ['A2: invalid JSON', 'invalid-json', { kind: 'not-json' }, 2],
    ['A2: the literal NaN', 'nan-literal', { kind: 'not-json' }, 2],
    ['A4: invalid UTF-8', 'broken-utf8', { kind: 'not-json' }, 2],
    ['A5: UTF-16', 'utf16', { kind: 'not-json' }, 2],
    ['A6: two documents', 'two-documents', { kind: 'not-json' }, 2],
    ['A7: a key twice', 'duplicate-key', { kind: 'not-json' }, 2],
    ['A9: a thousand levels', 'deep-nesting', { kind: 'not-json' }, 2],
  ])('%s', async (_, mode, fault, tries) => {
    const result = await ask(mode);
    expect(result.fault).toEqual(fault);
    expect(server.asked).toHaveLength(tries);
    expect(result.tookMs).toBeLessThan(1500);
  });
});

test('one fault that has passed at the second try costs nothing', async () => {
  server.behave('open-meteo', 'status-503', 'clean');
  const result = await safeFetch({ url: server.origin + query, origins: [server.origin] }, { fetch, now: Date.now, local: true, bounds: SHORT });
  expect(result.ok).toBe(true);
});

describe('size: 2 MB, counted after unpacking', () => {
  test.each([
    ['F5: an endless body', 'endless'],
    ['F6: a 200 MB bomb', 'gzip-bomb'],
    ['A10: a list of 50 MB', 'huge-list'],
  ])('%s', async (_, mode) => {
    global.gc?.();
    const beforeBytes = process.memoryUsage().rss;
    const result = await ask(mode, BOUNDS);
    expect(result.fault).toEqual({ kind: 'too-large', limitBytes: 2_000_000 });
    expect(server.asked).toHaveLength(1);
    expect(result.tookMs).toBeLessThan(3000);
    expect(process.memoryUsage().rss - beforeBytes).toBeLessThan(60_000_000);
  });
});

describe('T2 who may be asked', () => {
  const outside = { fetch, now: Date.now, local: true, bounds: SHORT };

  test('F1: a closed port', async () => {
    const closed = await startForecastServer();
    await closed.close();
    expect(await safeFetch({ url: `${closed.origin}/`, origins: [closed.origin] }, outside)).toEqual({ ok: false, error: { kind: 'unreachable' } });
  });

  test('F2: a name that does not resolve; nothing of the raw error is kept', async () => {
    const origin = 'https://forecast.invalid';
    expect(await safeFetch({ url: `${origin}/`, origins: [origin] }, outside)).toEqual({ ok: false, error: { kind: 'unreachable' } });
  });

  test('a body that throws whatever it likes', async () => {
    const fetchThatThrows = () => Promise.reject(new Error('internal error; reference = 0123'));
    const result = await safeFetch({ url: 'https://a.example/', origins: ['https://a.example'] }, { ...outside, fetch: fetchThatThrows });
    expect(result).toEqual({ ok: false, error: { kind: 'unreachable' } });
  });

  test.each([
    ['plain http elsewhere', 'http://api.example/', ['http://api.example'], true],
    ['plain http to this machine without LOCAL=1', 'http://127.0.0.1:9/', ['http://127.0.0.1:9'], false],
    ['an origin that is not configured', 'https://other.example/', ['https://api.example'], true],
    ['a host that only begins like ours', 'https://api.example.evil.example/', ['https://api.example'], true],
    ['a name before the at sign', 'https://api.example@evil.example/', ['https://api.example'], true],
    ['another port', 'https://api.example:8443/', ['https://api.example'], true],
    ['no address', 'forecast', ['https://api.example'], true],
  ])('refused without a call: %s', async (_, url, origins, local) => {
    let calls = 0;
    const counting = () => {
      calls += 1;
      return Promise.resolve(Response.json({}));
    };
    expect(await safeFetch({ url, origins }, { ...outside, local, fetch: counting })).toEqual({ ok: false, error: { kind: 'unreachable' } });
    expect(calls).toBe(0);
  });

  test('upper case, a default port and a full stop of the path make no other origin', async () => {
    const result = await safeFetch({ url: 'HTTPS://API.example:443/a/../b', origins: ['https://api.example'] }, { ...outside, fetch: () => Promise.resolve(Response.json({})) });
    expect(result.ok).toBe(true);
  });
});

test('T2 with the real bounds nothing takes longer than 10 s (F3, F4)', { timeout: 30_000 }, async () => {
  const asks = ['hang', 'hang-in-body', 'drip'].map(async (mode) => {
    const own = await startForecastServer();
    own.behave('open-meteo', mode);
    const startedMs = performance.now();
    const result = await safeFetch({ url: own.origin + query, origins: [own.origin] }, { fetch, now: Date.now, local: true });
    await own.close();
    return { result, tookMs: performance.now() - startedMs };
  });
  for (const { result, tookMs } of await Promise.all(asks)) {
    expect(result).toEqual({ ok: false, error: { kind: 'timeout', afterMs: 10_000 } });
    expect(tookMs).toBeLessThan(12_000);
  }
});
