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

const miniflare = new Miniflare({
  ...convertV4MiniflareOptions({
    modules: [{ type: 'ESModule', path: 'index.js', contents: readFileSync(script, 'utf8') }],
    compatibilityDate: '2026-11-01',
    d1Databases: { DB: 'dawnmargin' },
    queueProducers: { FETCH_QUEUE: 'fetch', ASSESS_QUEUE: 'assess', DELIVER_QUEUE: 'deliver', DEAD_QUEUE: 'dead' },
    ...(isDriven ? {} : { queueConsumers: { fetch: consumer, assess: consumer, deliver: consumer, dead: { maxBatchSize: 10, maxBatchTimeout: 1 } } }),
    bindings: {
      LOCAL: '1', LOCAL_TOKEN: token, LINK_KEY: 'a-link-key-for-tests-only-0123456789', PUBLIC_URL: `http://127.0.0.1:${port}`,
      ...(process.env['SMTP_URL'] === undefined ? {} : { SMTP_URL: process.env['SMTP_URL'], MAIL_FROM: 'brief@dawnmargin.example.org' }),
      ...(process.env['VAPID_PUBLIC_KEY'] === undefined ? {} : { VAPID_PUBLIC_KEY: process.env['VAPID_PUBLIC_KEY'], VAPID_PRIVATE_KEY: process.env['VAPID_PRIVATE_KEY'] ?? '' }),
    },
    host: '127.0.0.1',
    port: Number(port),
  }),
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
/** Whether there is anything that nobody else has taken and that may be done now. */
async function isLeft(step: string): Promise<boolean> {
  const table = step === 'deliver' ? `outbox WHERE state = 'pending'` : `run WHERE state = 'wanted' AND step = '${step}'`;
  return (await db.prepare(`SELECT 1 AS one FROM ${table} AND next_attempt_at <= ?1 AND (lease_until IS NULL OR lease_until <= ?1) LIMIT 1`).bind(Date.now()).first()) !== null;
}

async function consume(step: string): Promise<void> {
  const worker = await miniflare.getWorker();
  for (let call = 0; await isLeft(step); call += 1) {
    await worker.queue(step, [{ id: `${step}-${call}`, timestamp: new Date(), attempts: 1, body: { v: 1, step } }]);
  }
}

const input = createInterface({ input: process.stdin });
// Whoever started us is gone.
input.on('close', () => void miniflare.dispose().finally(() => process.exit()));
input.on('line', (line) => {
  const [step = '', side = '1'] = line.split(' ');
  const begunMs = Date.now();
  Promise.all(Array.from({ length: Number(side) }, () => consume(step))).then(
    () => console.log(`done ${Date.now() - begunMs}`),
    (error: unknown) => console.log(`failed ${String(error)}`),
  );
});
console.log('ready');
