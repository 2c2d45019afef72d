// How long a morning of a hundred thousand subscribers takes to plan, on the local runtime's database.
// node test/bench/outbox.ts [--rows 100000] [--rounds 3]
import { mkdtempSync, readdirSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { parseArgs } from 'node:util';
import { build } from 'esbuild';
import { convertV4MiniflareOptions, Miniflare } from 'miniflare';
import { root } from '../support/run-tool.ts';
import { launchFeature } from '../worker/support/stand-ins.ts';

interface Planning {
  readonly bareMs: number;
  readonly keyedMs: number;
  readonly rowsMs: number;
  readonly morningMs: number;
  readonly planned: number;
}

const { values } = parseArgs({ options: { rows: { type: 'string', default: '100000' }, rounds: { type: 'string', default: '3' } } });
const count = Number(values.rows);

const built = await build({ entryPoints: [path.join(import.meta.dirname, 'outbox-worker.ts')], bundle: true, format: 'esm', write: false, target: 'es2024', external: ['cloudflare:*', 'node:*'] });
const contents = built.outputFiles[0]?.text ?? '';

async function round(): Promise<Planning> {
  const stateDir = mkdtempSync(path.join(tmpdir(), 'dawnmargin-plan-'));
  const miniflare = new Miniflare({
    ...convertV4MiniflareOptions({ modules: [{ type: 'ESModule', path: 'index.js', contents }], compatibilityDate: '2026-11-01', d1Databases: { DB: 'bench' }, bindings: { LOCAL: '1', PUBLIC_URL: 'http://127.0.0.1:1' } }),
    resourcePersistencePath: stateDir,
  });
  const origin = await miniflare.ready;
  const db = await miniflare.getD1Database('DB');
  const folder = path.join(root, 'worker/store/migrations');
  for (const file of readdirSync(folder).filter((name) => name.endsWith('.sql')).sort()) {
    const text = readFileSync(path.join(folder, file), 'utf8').replaceAll(/--.*$/gm, '');
    await db.batch(text.split(';').filter((statement) => statement.trim() !== '').map((statement) => db.prepare(statement)));
  }
  const answer = await fetch(origin, { method: 'POST', body: JSON.stringify({ count, feature: JSON.stringify(launchFeature('north')) }) });
  const text = await answer.text();
  await miniflare.dispose();
  rmSync(stateDir, { recursive: true, force: true, maxRetries: 5 });
  if (!answer.ok) throw new Error(text);
  return JSON.parse(text) as Planning;
}

const rounds: Planning[] = [];
for (let index = 0; index < Number(values.rounds); index += 1) rounds.push(await round());
const least = (of: (one: Planning) => number): number => Math.min(...rounds.map(of));
if (rounds.some(({ planned }) => planned !== count)) throw new Error(`${rounds.map(({ planned }) => planned).join(', ')} rows were planned, not ${count}`);
console.log(`${count} rows: bare insert ${least((one) => one.bareMs)} ms, with the two keys of the outbox ${least((one) => one.keyedMs)} ms; planned in ${least((one) => one.rowsMs)} ms; the whole step of the morning ${least((one) => one.morningMs)} ms (the least of ${rounds.length} rounds)`);
