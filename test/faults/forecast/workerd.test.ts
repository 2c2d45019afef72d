// safeFetch in the runtime it is made for: workerd on this machine, bundled, against the test server. What Node does with
// redirects, broken packing and closed ports is not what the platform does.
import { build } from 'esbuild';
import { convertV4MiniflareOptions, Miniflare } from 'miniflare';
import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest';
import { root } from '../../support/run-tool.ts';
import { startForecastServer, type ForecastServer } from '../../support/forecast-server/server.ts';

const program = `
import { safeFetch } from './worker/sources/safe-fetch.ts';
export default {
  async fetch(request) {
    const { url, origin, bounds } = await request.json();
    const outside = { fetch: (address, init) => fetch(address, init), now: () => Date.now(), local: true, ...(bounds ? { bounds } : {}) };
    const result = await safeFetch({ url, origins: [origin] }, outside);
    return Response.json(result.ok ? { status: result.value.status, keys: Object.keys(result.value.json) } : result.error);
  },
};`;

let server: ForecastServer;
let runtime: Miniflare;
beforeAll(async () => {
  server = await startForecastServer();
  const bundle = await build({ stdin: { contents: program, resolveDir: root, loader: 'ts' }, bundle: true, format: 'esm', write: false });
  runtime = new Miniflare(convertV4MiniflareOptions({ modules: true, script: bundle.outputFiles[0]!.text, compatibilityDate: '2026-11-01' }));
  await runtime.ready;
});
afterAll(async () => {
  await runtime.dispose();
  await server.close();
});
beforeEach(() => server.reset());

const path = '/data/dwd_icon_d2/static/meta.json';

async function ask(mode: string, options: { origin?: string; bounds?: object } = {}): Promise<unknown> {
  const { origin = server.origin, bounds = { totalMs: 800, firstTryMs: 350, maxBytes: 2_000_000 } } = options;
  server.behave('meta', mode);
  const response = await runtime.dispatchFetch('http://worker.example/', { method: 'POST', body: JSON.stringify({ url: origin + path, origin, bounds }) });
  return response.json();
}

test('a clean answer, packed and unpacked', async () => {
  expect(await ask('clean')).toMatchObject({ status: 200, keys: expect.arrayContaining(['last_run_initialisation_time']) });
  expect(await ask('gzip')).toMatchObject({ status: 200 });
  expect(await ask('utf8-bom')).toMatchObject({ status: 200 });
});

describe('every fault ends as a tag, in time', () => {
  test.each<[string, object]>([
    ['reset', { kind: 'unreachable' }],
    ['hang', { kind: 'timeout', afterMs: 800 }],
    ['hang-in-body', { kind: 'timeout', afterMs: 800 }],
    ['drip', { kind: 'timeout', afterMs: 800 }],
    ['corrupt-gzip', { kind: 'unreachable' }],
    ['truncated', { kind: 'unreachable' }],
    ['reset-after-json', { kind: 'unreachable' }],
    ['half-streamed', { kind: 'not-json' }],
    ['html', { kind: 'content-type' }],
    ['empty', { kind: 'not-json' }],
    ['status-204', { kind: 'not-json' }],
    ['status-301', { kind: 'redirected' }],
    ['status-302', { kind: 'redirected' }],
    ['status-307', { kind: 'redirected' }],
    ['status-429-later', { kind: 'rate-limited', retryAfterS: 120 }],
    ['status-503', { kind: 'server-error', status: 503 }],
    ['broken-utf8', { kind: 'not-json' }],
    ['utf16', { kind: 'not-json' }],
  ])('%s', async (mode, fault) => {
    const startedMs = performance.now();
    expect(await ask(mode)).toEqual(fault);
    expect(performance.now() - startedMs).toBeLessThan(2500);
  });

  test.each(['endless', 'gzip-bomb', 'huge-list'])('%s stops at 2 MB', async (mode) => {
    expect(await ask(mode, { bounds: { totalMs: 10_000, firstTryMs: 3000, maxBytes: 2_000_000 } })).toEqual({ kind: 'too-large', limitBytes: 2_000_000 });
  });

  test('a closed port and a name that does not resolve', async () => {
    const closed = await startForecastServer();
    await closed.close();
    expect(await ask('clean', { origin: closed.origin })).toEqual({ kind: 'unreachable' });
    expect(await ask('clean', { origin: 'https://forecast.invalid' })).toEqual({ kind: 'unreachable' });
  });
});
