// The way of README, "Running it for real", walked from nothing to the first brief: the worker of the morning and those
// of the desk and the operator, each built as wrangler builds it, bound to each other in the local runtime, tables made by the migrations,
// secrets made as the deploy command makes them. (On one machine they are one worker: every other test drives that.)
import { mkdtempSync, readdirSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { gzipSync } from 'node:zlib';
import { convertV4MiniflareOptions, Miniflare } from 'miniflare';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { deskOf } from '../../worker/routes/desk-paths.ts';
import { DESK_METHODS } from '../../worker/routes/desk.ts';
import { FRONT_METHODS } from '../../worker/routes/front.ts';
import { OPERATOR_METHODS } from '../../worker/routes/operator-desk.ts';
import { changeKeys, secretsIn } from '../../worker/local/state.ts';
import { readSettings } from '../../worker/settings.ts';
import { wrangler } from '../../worker/local/wrangler.ts';
import { startForecastServer, type ForecastServer } from '../support/forecast-server/server.ts';
import { startWebhookSink, type Behaviour, type WebhookSink } from '../support/sinks/webhook-sink.ts';
import { root } from '../support/run-tool.ts';

/** The most that a worker may weigh, kB of gzip. */
const MOST_KB = 150;

const folder = mkdtempSync(path.join(tmpdir(), 'dawnmargin-three-'));
let built: readonly string[];
let runtime: Miniflare;
let services: ForecastServer;
let hook: WebhookSink;
let token: string;
let db: Awaited<ReturnType<Miniflare['getD1Database']>>;

async function bundle(name: string, config: string): Promise<string> {
  const into = path.join(folder, name);
  const run = wrangler(['deploy', '--config', config, '--dry-run', '--outdir', into], folder);
  if ((await run.ended) !== 0) throw new Error(run.output());
  const script = readdirSync(into).find((file) => file.endsWith('.js'));
  return readFileSync(path.join(into, script ?? ''), 'utf8');
}

beforeAll(async () => {
  built = [await bundle('morning', 'wrangler.toml'), await bundle('desk', 'worker/desk.toml'), await bundle('operator', 'worker/operator.toml')];
  [services, hook] = [await startForecastServer(), await startWebhookSink()];
  hook.behave(({ body }) => echo(body));
  const { secrets, newOperatorToken } = secretsIn(folder);
  token = newOperatorToken ?? '';
  const shared = {
    compatibilityDate: '2026-11-01',
    d1Databases: { DB: 'dawnmargin' },
    queueProducers: { FETCH_QUEUE: 'fetch', ASSESS_QUEUE: 'assess', DELIVER_QUEUE: 'deliver' },
    // Loopback addresses are spoken to with LOCAL=1 only; a house in the open has PUBLIC_URL and CONTACT of its own.
    bindings: {
      ...secrets, PUBLIC_URL: 'https://dawnmargin.example', CONTACT: 'rehearsal@dawnmargin.example', LOCAL: '1', REHEARSAL: '1',
      OPEN_METEO_URL: services.origin, OPEN_METEO_ENSEMBLE_URL: services.origin, MET_NORWAY_URL: services.origin, NWS_URL: services.origin,
    },
  };
  const consumer = { maxBatchSize: 1, maxBatchTimeout: 0 };
  const module = (contents: string | undefined) => [{ type: 'ESModule' as const, path: 'index.js', contents: contents ?? '' }];
  runtime = new Miniflare(convertV4MiniflareOptions({
    workers: [
      { ...shared, name: 'dawnmargin', queueConsumers: { fetch: consumer, assess: consumer, deliver: consumer }, modules: module(built[0]), serviceBindings: { DESK: 'dawnmargin-desk', OPERATOR: 'dawnmargin-operator' } },
      { ...shared, name: 'dawnmargin-desk', modules: module(built[1]) },
      { ...shared, name: 'dawnmargin-operator', modules: module(built[2]) },
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
  await Promise.all([services.close(), hook.close()]);
  rmSync(folder, { recursive: true, force: true });
});

/** What a receiver that wants to be told answers to its first message. */
function echo(body: string): Behaviour {
  const { data } = JSON.parse(body) as { data?: { challenge?: string } };
  return data?.challenge === undefined ? 204 : { status: 200, body: JSON.stringify({ challenge: data.challenge }) };
}

const ask = (url: string, init: { method?: string; headers?: Record<string, string>; body?: string } = {}) => runtime.dispatchFetch(`https://dawnmargin.example${url}`, init);

test('each of the three stays under 150 kB of gzip', () => {
  expect(built.map((code) => gzipSync(code, { level: 9 }).length / 1000).filter((weightKb) => weightKb > MOST_KB)).toEqual([]);
});

test('each path is answered by the worker that knows it', () => {
  const example = (pattern: string): string => pattern.replaceAll(/:\w+/g, 'x');
  expect(Object.keys(DESK_METHODS).map(example).filter((url) => deskOf(url) !== 'DESK')).toEqual([]);
  expect(Object.keys(OPERATOR_METHODS).map(example).filter((url) => deskOf(url) !== 'OPERATOR')).toEqual([]);
  expect(Object.keys(FRONT_METHODS).map(example).filter((url) => deskOf(url) !== null)).toEqual([]);
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

const json = { 'content-type': 'application/json' };

test('launches that an operator enters at the desk are read from the worker of the morning', async () => {
  const sites = JSON.parse(readFileSync(path.join(root, 'config/rehearsal.json'), 'utf8')) as unknown;
  const bearer = { authorization: `Bearer ${token}` };
  const etag = (await ask('/api/v1/operator/sites', { headers: bearer })).headers.get('etag') ?? '';
  const entered = await ask('/api/v1/operator/sites', { method: 'PUT', headers: { ...bearer, 'content-type': 'application/geo+json', 'if-match': etag }, body: JSON.stringify(sites) });
  expect([entered.status, await entered.text()]).toEqual([200, expect.any(String)]);
  const idsIn = (collection: unknown): string[] => (collection as { features: { id: string }[] }).features.map(({ id }) => id).sort();
  expect(idsIn(await (await ask('/api/v1/sites')).json())).toEqual(idsIn(sites));
});

test('a subscriber who echoes the challenge is sent the first brief, made of what the services gave', async () => {
  const [site] = ((await (await ask('/api/v1/sites')).json()) as { features: { id: string }[] }).features;
  const wish = { sites: [{ id: site?.id }], wing: { class: 'EN B' }, deliver: { at: '06:00', timeZone: 'Europe/Vienna' }, channels: [{ kind: 'webhook', url: `${hook.origin}/brief` }] };
  const made = await ask('/api/v1/subscriptions', { method: 'POST', headers: json, body: JSON.stringify(wish) });
  expect([made.status, await made.text()]).toEqual([202, expect.any(String)]);
  // Its time has come, and the cron with it.
  await db.prepare('UPDATE subscription SET next_due_at = ?').bind(Date.now()).run();
  const morning = await runtime.getWorker('dawnmargin');
  for (let turn = 0; turn < 60 && hook.received.length < 2; turn += 1) {
    await morning.scheduled({ cron: '* * * * *', scheduledTime: new Date() });
    await new Promise((resolve) => setTimeout(resolve, 500));
  }
  const brief = hook.received.map(({ body }) => body).find((body) => !body.includes('challenge')) ?? '';
  expect(brief).toContain(site?.id);
  expect(brief).toMatch(/within limits|close to a limit|beyond a limit|cannot say/);
  expect(brief).toContain('Computed from forecasts, not observed');
  expect(brief).not.toMatch(/NaN|undefined|\[object/);
});

test('the books balance after it', async () => {
  const { outbox } = (await (await ask('/healthz')).json()) as { outbox: Record<string, number> };
  expect(outbox).toMatchObject({ pending: 0, dead: 0, expired: 0 });
});

test('T34 a change of keys keeps those before beside the new ones, only two at once, until they are given up', () => {
  const at = mkdtempSync(path.join(tmpdir(), 'dawnmargin-keys-'));
  const { secrets: first } = secretsIn(at);
  expect(changeKeys(at, 'push')).toBeNull();
  const { secrets: second } = secretsIn(at);
  expect(second).toMatchObject({ LINK_KEY: first.LINK_KEY, OPERATOR_TOKEN_SHA256: first.OPERATOR_TOKEN_SHA256, VAPID_PUBLIC_KEY_BEFORE: first.VAPID_PUBLIC_KEY, VAPID_PRIVATE_KEY_BEFORE: first.VAPID_PRIVATE_KEY });
  expect(second.VAPID_PUBLIC_KEY).not.toBe(first.VAPID_PUBLIC_KEY);
  expect(readSettings(second)).toMatchObject({ ok: true, value: { vapid: { publicKey: second.VAPID_PUBLIC_KEY }, vapidBefore: { publicKey: first.VAPID_PUBLIC_KEY } } });
  // Asked again, as after a step that failed: the first pair is not lost.
  for (const change of ['push', 'link'] as const) expect(changeKeys(at, change)).toContain('a change of keys is under way');
  expect(secretsIn(at).secrets).toEqual(second);
  expect(changeKeys(at, 'give-up')).toBeNull();
  expect(secretsIn(at).secrets).toEqual({ ...second, VAPID_PUBLIC_KEY_BEFORE: '', VAPID_PRIVATE_KEY_BEFORE: '' });
  expect(changeKeys(at, 'link')).toBeNull();
  expect(readSettings(secretsIn(at).secrets)).toMatchObject({ ok: true, value: { linkKeyBefore: first.LINK_KEY, vapidBefore: null } });
  rmSync(at, { recursive: true });
});
