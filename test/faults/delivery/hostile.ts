// What one endpoint among five hundred does to the others: mornings with and without it in turn, ten consumers side by side,
// and when the others were told. Ends with 0 when their times differ by at most a fifth.
// node test/faults/delivery/hostile.ts [--endpoints 500] [--rounds 3] [--latency 100]
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { parseArgs } from 'node:util';
import { freePort } from '../../e2e/support/start.ts';
import { startPushSink, type PushAnswer } from '../../support/sinks/push-sink.ts';
import { buildBundle } from './plant/bundle.ts';
import { startPlant } from './plant/plant.ts';
import { seedOf } from './plant/seed.ts';
import { vapidKeys } from './vapid-keys.ts';

const CONSUMERS = 10;
const { values } = parseArgs({ options: { endpoints: { type: 'string', default: '500' }, rounds: { type: 'string', default: '3' }, latency: { type: 'string', default: '100' } } });
const endpoints = Number(values.endpoints);
const afterMs = Number(values.latency);

const HOSTILE: Readonly<Record<string, PushAnswer>> = {
  'never answers': 'silence',
  'ends the connection': 'reset',
  'answers after 14 s': { status: 201, afterMs: 14_000 },
  'answers with 200 MB': { status: 500, body: 'x'.repeat(200_000_000) },
  'redirects': { status: 307, headers: { location: 'http://127.0.0.1:1/' } },
};

const sink = await startPushSink();
const keys = vapidKeys();
const bundle = await buildBundle();
const stateDir = mkdtempSync(path.join(tmpdir(), 'dawnmargin-hostile-'));
const plant = await startPlant({ bundle, stateDir, port: await freePort(), env: { PLANT_CONSUMERS: 'none', VAPID_PUBLIC_KEY: keys.publicKey, VAPID_PRIVATE_KEY: keys.privateKey } });

interface Times {
  readonly half: number;
  readonly most: number;
  readonly last: number;
}

let mornings = 0;

/** When the others were told, in ms from the beginning of delivery: half of them, 95 in a hundred, the last. */
async function morning(hostile: PushAnswer | null): Promise<Times> {
  mornings += 1;
  const targets = Array.from({ length: endpoints }, () => sink.newBrowser().target);
  const worst = new URL(targets[Math.floor(endpoints / 10)]?.endpoint ?? '').pathname;
  sink.answer(({ path: at }) => (hostile !== null && at === worst ? hostile : { status: 201, afterMs }));
  const before = sink.pushed.length;
  await plant.post('seed', seedOf(targets.map((target, index) => ({ id: `m${mornings}-${index}`, channels: [{ kind: 'push', target }] }))));
  await plant.post('morning');
  await plant.drive('fetch');
  await plant.drive('assess');
  const begunMs = Date.now();
  await plant.drive('deliver', CONSUMERS);
  // A message of an earlier morning may come again meanwhile.
  const others = new Set(targets.map(({ endpoint }) => new URL(endpoint).pathname).filter((at) => at !== worst));
  const told = sink.pushed.slice(before).filter(({ path: at }) => others.has(at)).map(({ atMs }) => atMs - begunMs).sort((a, b) => a - b);
  if (told.length !== endpoints - 1) throw new Error(`${told.length} of ${endpoints - 1} others were told`);
  const at = (share: number): number => told[Math.min(told.length - 1, Math.floor(share * told.length))] ?? NaN;
  return { half: at(0.5), most: at(0.95), last: at(1) };
}

const middle = (times: readonly Times[], of: (one: Times) => number): number => times.map(of).sort((a, b) => a - b)[Math.floor(times.length / 2)] ?? NaN;
const rows = (times: readonly Times[]): string => `${middle(times, ({ half }) => half)} / ${middle(times, ({ most }) => most)} / ${middle(times, ({ last }) => last)} ms`;

await morning(null);
let worstRatio = 0;
console.log(`${endpoints - 1} others, told after (half, 95 in 100, last; the middle of ${values.rounds} mornings):`);
for (const [name, hostile] of Object.entries(HOSTILE)) {
  const calm: Times[] = [];
  const troubled: Times[] = [];
  for (let round = 0; round < Number(values.rounds); round += 1) {
    calm.push(await morning(null));
    troubled.push(await morning(hostile));
  }
  const ratio = Math.max(...([({ half }) => half, ({ most }) => most] as ((one: Times) => number)[]).map((of) => middle(troubled, of) / middle(calm, of)));
  worstRatio = Math.max(worstRatio, ratio);
  console.log(`one that ${name}: ${rows(troubled)}, without it ${rows(calm)}: ${ratio.toFixed(2)} times`);
}
await plant.kill();
await sink.close();
for (const folder of [stateDir, bundle.folder]) rmSync(folder, { recursive: true, force: true, maxRetries: 5 });
process.exitCode = worstRatio <= 1.2 ? 0 : 1;
