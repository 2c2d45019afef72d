// The process that gets killed: the deployed worker in the local runtime, with its database on disk and real queues.
// node child.ts STATE_DIR SCRIPT PORT TOKEN
import { readdirSync, readFileSync } from 'node:fs';
import path from 'node:path';
import { convertV4MiniflareOptions, Miniflare } from 'miniflare';
import { root } from '../../../support/run-tool.ts';

const [stateDir = '', script = '', port = '', token = ''] = process.argv.slice(2);
const consumer = { maxBatchSize: 1, maxBatchTimeout: 0, maxRetries: 3, deadLetterQueue: 'dead' };

const miniflare = new Miniflare({
  ...convertV4MiniflareOptions({
    modules: [{ type: 'ESModule', path: 'index.js', contents: readFileSync(script, 'utf8') }],
    compatibilityDate: '2026-11-01',
    d1Databases: { DB: 'dawnmargin' },
    queueProducers: { FETCH_QUEUE: 'fetch', ASSESS_QUEUE: 'assess', DELIVER_QUEUE: 'deliver', DEAD_QUEUE: 'dead' },
    queueConsumers: { fetch: consumer, assess: consumer, deliver: consumer, dead: { maxBatchSize: 10, maxBatchTimeout: 1 } },
    bindings: {
      LOCAL: '1', LOCAL_TOKEN: token, LINK_KEY: 'a-link-key-for-tests-only-0123456789', PUBLIC_URL: `http://127.0.0.1:${port}`,
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
console.log('ready');
