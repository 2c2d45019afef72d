// The process that gets killed: the deployed worker in the local runtime, with its database on disk and real queues.
// node child.ts STATE_DIR SCRIPT PORT TOKEN
//
// With PLANT_CONSUMERS=none nothing is taken from the queues by itself. Then a line on its input drives the worker as the
// platform would: `fetch`, `assess`, or `deliver N` for N consumers side by side until nothing is left; `done MS` is the answer.
import { readdirSync, readFileSync } from 'node:fs';
import path from 'node:path';
import { createInterface } from 'node:readline';
import { convertV4MiniflareOptions, Miniflare } from 'miniflare';
import { root } from '../../../support/run-tool.ts';

const [stateDir = '', script = '', port = '', token = ''] = process.argv.slice(2);
const isDriven = process.env['PLANT_CONSUMERS'] === 'none';
const consumer = { maxBatchSize: 1, maxBatchTimeout: 0, maxRetries: 3, deadLetterQueue: 'dead' };

const shared = { compatibilityDate: '2026-11-01', d1Databases: { DB: 'dawnmargin' } };
const main = {
  name: 'main',
  modules: [{ type: 'ESModule' as const, path: 'index.js', contents: readFileSync(script, 'utf8') }],
  ...shared,
  queueProducers: { FETCH_QUEUE: 'fetch', ASSESS_QUEUE: 'assess', DELIVER_QUEUE: 'deliver', DEAD_QUEUE: 'dead' },
  ...(isDriven ? {} : { queueConsumers: { fetch: consumer, assess: consumer, deliver: consumer, dead: { maxBatchSize: 10, maxBatchTimeout: 1 } } }),
  bindings: {
    LOCAL: '1', LOCAL_TOKEN: token, LINK_KEY: 'a-link-key-for-tests-only-0123456789', PUBLIC_URL: `http://127.0.0.1:${port}`,
    ...(process.env['CALLS_AN_INVOCATION'] === undefined ? {} : { CALLS_AN_INVOCATION: process.env['CALLS_AN_INVOCATION'] }),
    ...(process.env['SMTP_URL'] === undefined ? {} : { SMTP_URL: process.env['SMTP_URL'], MAIL_FROM: 'brief@dawnmargin.example.org' }),
    ...(process.env['VAPID_PUBLIC_KEY'] === undefined ? {} : { VAPID_PUBLIC_KEY: process.env['VAPID_PUBLIC_KEY'], VAPID_PRIVATE_KEY: process.env['VAPID_PRIVATE_KEY'] ?? '' }),
  },
};
// The consumers are called from inside the runtime, as the platform does: through Node a call costs more than its work.
const driver = {
  name: 'driver',
  modules: [{ type: 'ESModule' as const, path: 'driver.js', contents: readFileSync(path.join(import.meta.dirname, 'driver.js'), 'utf8') }],
  ...shared, compatibilityFlags: ['service_binding_extra_handlers'], serviceBindings: { MAIN: 'main' },
};
const miniflare = new Miniflare({
  ...convertV4MiniflareOptions({ workers: [main, ...(isDriven ? [driver] : [])], host: '127.0.0.1', port: Number(port) }),
  resourcePersistencePath: stateDir,
});
await miniflare.ready;

const db = await miniflare.getD1Database('DB');
const tables = await db.prepare(`SELECT COUNT(*) AS n FROM sqlite_master WHERE name = 'outbox'`).first<{ n: number }>();
if (tables?.n === 0) {
  const folder = path.join(root, 'worker/store/migrations');
  for (const file of readdirSync(folder).filter((name) => name.endsWith('.sql')).sort()) {
    const text = readFileSync(path.join(folder, file), 'utf8').replaceAll(/--.*$/gm, '');
    await db.batch(text.split(';').filter((statement) => statement.trim() !== '').map((statement) => db.prepare(statement)));
  }
}
async function drive(step: string, side: number): Promise<void> {
  const worker = await miniflare.getWorker('driver');
  const answer = await worker.fetch(`http://driver/${step}?side=${side}`);
  if (!answer.ok) throw new Error(await answer.text());
}

const input = createInterface({ input: process.stdin });
// Whoever started us is gone.
input.on('close', () => void miniflare.dispose().finally(() => process.exit()));
input.on('line', (line) => {
  const [step = '', side = '1'] = line.split(' ');
  const begunMs = Date.now();
  drive(step, Number(side)).then(
    () => console.log(`done ${Date.now() - begunMs}`),
    (error: unknown) => console.log(`failed ${String(error)}`),
  );
});
console.log('ready');
