// As it is deployed: the worker of the morning and the worker of the desk, each built as wrangler builds it, bound to each
// other in the local runtime. (On one machine both are one worker: every other test drives that.)
import { createHash } from 'node:crypto';
import { mkdtempSync, readdirSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { gzipSync } from 'node:zlib';
import { convertV4MiniflareOptions, Miniflare } from 'miniflare';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { isForDesk } from '../../worker/routes/desk-paths.ts';
import { DESK_METHODS } from '../../worker/routes/desk.ts';
import { FRONT_METHODS } from '../../worker/routes/front.ts';
import { wrangler } from '../../worker/local/wrangler.ts';
import { root } from '../support/run-tool.ts';

/** The most that a worker may weigh, kB of gzip. */
const MOST_KB = 150;

const TOKEN = 'an-operator-token-for-tests-only-01';

const folder = mkdtempSync(path.join(tmpdir(), 'dawnmargin-two-'));
let built: readonly string[];
let runtime: Miniflare;
let db: Awaited<ReturnType<Miniflare['getD1Database']>>;

async function bundle(name: string, config: string): Promise<string> {
  const into = path.join(folder, name);
  const run = wrangler(['deploy', '--config', config, '--dry-run', '--outdir', into], folder);
  if ((await run.ended) !== 0) throw new Error(run.output());
  const script = readdirSync(into).find((file) => file.endsWith('.js'));
  return readFileSync(path.join(into, script ?? ''), 'utf8');
}

beforeAll(async () => {
  built = [await bundle('morning', 'wrangler.toml'), await bundle('desk', 'worker/desk.toml')];
  const shared = {
    compatibilityDate: '2026-11-01',
    d1Databases: { DB: 'dawnmargin' },
    queueProducers: { FETCH_QUEUE: 'fetch', ASSESS_QUEUE: 'assess', DELIVER_QUEUE: 'deliver' },
    bindings: { LINK_KEY: 'a-link-key-for-tests-only-0123456789', PUBLIC_URL: 'https://dawnmargin.example', OPERATOR_TOKEN_SHA256: createHash('sha256').update(TOKEN).digest('hex') },
  };
  const module = (contents: string | undefined) => [{ type: 'ESModule' as const, path: 'index.js', contents: contents ?? '' }];
  runtime = new Miniflare(convertV4MiniflareOptions({
    workers: [
      { ...shared, name: 'dawnmargin', modules: module(built[0]), serviceBindings: { DESK: 'dawnmargin-desk' } },
      { ...shared, name: 'dawnmargin-desk', modules: module(built[1]) },
    ],
  }));
  await runtime.ready;
  db = await runtime.getD1Database('DB', 'dawnmargin');
  const migrations = path.join(root, 'worker/store/migrations');
  for (const file of readdirSync(migrations).filter((name) => name.endsWith('.sql')).sort()) {
    const text = readFileSync(path.join(migrations, file), 'utf8').replaceAll(/--.*$/gm, '');
    await db.batch(text.split(';').filter((statement) => statement.trim() !== '').map((statement) => db.prepare(statement)));
  }
});
afterAll(async () => {
  await runtime.dispose();
  rmSync(folder, { recursive: true, force: true });
});

const ask = (url: string, init: { method?: string; headers?: Record<string, string>; body?: string } = {}) => runtime.dispatchFetch(`https://dawnmargin.example${url}`, init);

test('each of the two stays under 150 kB of gzip', () => {
  expect(built.map((code) => gzipSync(code, { level: 9 }).length / 1000).filter((weightKb) => weightKb > MOST_KB)).toEqual([]);
});

test('each path is answered by the worker that knows it', () => {
  const example = (pattern: string): string => pattern.replaceAll(/:\w+/g, 'x');
  expect(Object.keys(DESK_METHODS).map(example).filter((url) => !isForDesk(url))).toEqual([]);
  expect(Object.keys(FRONT_METHODS).map(example).filter(isForDesk)).toEqual([]);
});

test('what is read comes from the worker of the morning', async () => {
  const board = await ask('/');
  expect([board.status, board.headers.get('content-security-policy') !== null]).toEqual([200, true]);
  expect((await ask('/healthz')).status).toBe(200);
  expect((await ask('/api/v1/sites')).headers.get('content-type')).toContain('geo+json');
});

test('what is handed in reaches the desk, whole', async () => {
  const assess = await ask('/api/v1/assess', { method: 'POST', headers: { 'content-type': 'application/json' }, body: '{"hours":[]}' });
  expect(assess.status).toBe(400);
  expect(JSON.stringify(await assess.json())).toContain('$.site');
  expect((await ask('/plan')).status).toBe(200);
  expect(await (await ask('/subscribe')).text()).toContain('<form');
  expect((await ask('/sites/nowhere/what-if')).status).toBe(404);
  expect((await ask('/api/v1/operator/sites')).status).toBe(401);
});

test('a method that a path does not answer is told so by either', async () => {
  expect((await ask('/healthz', { method: 'DELETE' })).headers.get('allow')).toBe('GET, HEAD');
  expect((await ask('/api/v1/assess')).headers.get('allow')).toBe('POST');
});

test('launches that an operator enters at the desk are read from the worker of the morning', async () => {
  const sites = readFileSync(path.join(root, 'config/sites.json'), 'utf8');
  const bearer = { authorization: `Bearer ${TOKEN}` };
  const etag = (await ask('/api/v1/operator/sites', { headers: bearer })).headers.get('etag') ?? '';
  const entered = await ask('/api/v1/operator/sites', { method: 'PUT', headers: { ...bearer, 'content-type': 'application/geo+json', 'if-match': etag }, body: sites });
  expect([entered.status, await entered.text()]).toEqual([200, expect.any(String)]);
  const idsIn = (json: unknown): string[] => (json as { features: { id: string }[] }).features.map(({ id }) => id).sort();
  expect(idsIn(await (await ask('/api/v1/sites')).json())).toEqual(idsIn(JSON.parse(sites)));
});
