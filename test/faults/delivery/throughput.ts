// How fast messages leave, as a ratio: N push messages by ten consumers side by side to a service that takes 100 ms, with
// encryption, signature and a mark after each send, against a bare loop of encryption and POST in the same runtime.
// node test/faults/delivery/throughput.ts [--messages 10000] [--latency 100] [--calls 1000]: calls that an invocation may make, 50 on
// a free plan, which is not the plan for ten thousand messages a morning.
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { parseArgs } from 'node:util';
import { build } from 'esbuild';
import { convertV4MiniflareOptions, Miniflare } from 'miniflare';
import { freePort } from '../../e2e/support/start.ts';
import { startPushSink } from '../../support/sinks/push-sink.ts';
import { buildBundle } from './plant/bundle.ts';
import { seedOf } from './plant/seed.ts';
import { startPlant } from './plant/plant.ts';
import { vapidKeys } from './vapid-keys.ts';

const CONSUMERS = 10;
const { values } = parseArgs({ options: { messages: { type: 'string', default: '10000' }, latency: { type: 'string', default: '100' }, calls: { type: 'string', default: '1000' } } });
const messages = Number(values.messages);
const afterMs = Number(values.latency);

const keys = vapidKeys();

const sink = await startPushSink();
sink.answer(() => ({ status: 201, afterMs }));
const targets = Array.from({ length: messages }, () => sink.newBrowser().target);

async function bareLoop(bytes: number): Promise<number> {
  const built = await build({ entryPoints: [path.join(import.meta.dirname, 'bare.ts')], bundle: true, format: 'esm', write: false, target: 'es2024' });
  const miniflare = new Miniflare(convertV4MiniflareOptions({ modules: [{ type: 'ESModule', path: 'index.js', contents: built.outputFiles[0]?.text ?? '' }], compatibilityDate: '2026-11-01' }));
  const origin = await miniflare.ready;
  const share = Math.ceil(messages / CONSUMERS);
  const begunMs = Date.now();
  await Promise.all(Array.from({ length: CONSUMERS }, async (_, index) => {
    const work = { targets: targets.slice(index * share, (index + 1) * share), keys, bytes };
    await (await fetch(origin, { method: 'POST', body: JSON.stringify(work) })).text();
  }));
  const ms = Date.now() - begunMs;
  await miniflare.dispose();
  return ms;
}

async function deliveries(): Promise<number> {
  const bundle = await buildBundle();
  const stateDir = mkdtempSync(path.join(tmpdir(), 'dawnmargin-throughput-'));
  const env = { PLANT_CONSUMERS: 'none', CALLS_AN_INVOCATION: values.calls, VAPID_PUBLIC_KEY: keys.publicKey, VAPID_PRIVATE_KEY: keys.privateKey };
  const plant = await startPlant({ bundle, stateDir, port: await freePort(), env });
  for (let from = 0; from < messages; from += 2000) {
    const some = targets.slice(from, from + 2000).map((target, index) => ({ id: `s${from + index}`, channels: [{ kind: 'push', target }] }));
    await plant.post('seed', seedOf(some));
  }
  await plant.post('morning');
  await plant.drive('fetch');
  await plant.drive('assess');
  const before = sink.pushed.length;
  const ms = await plant.drive('deliver', CONSUMERS);
  const sent = sink.pushed.length - before;
  await plant.kill();
  for (const folder of [stateDir, bundle.folder]) rmSync(folder, { recursive: true, force: true, maxRetries: 5 });
  if (sent !== messages) throw new Error(`${sent} of ${messages} messages were sent`);
  return ms;
}

// What a bare loop sends is as long as what is delivered; it runs before and after, since no machine is the same for long.
const ENVELOPE_BYTES = 103;
const before = await bareLoop(1500);
const ownMs = await deliveries();
const after = await bareLoop((sink.pushed.at(-1)?.body.length ?? 0) - ENVELOPE_BYTES);
const bareMs = (before + after) / 2;
await sink.close();
const perS = (ms: number): string => `${(ms / 1000).toFixed(1)} s (${Math.round((messages / ms) * 1000)}/s)`;
console.log(`${messages} messages to a service that takes ${afterMs} ms, ${CONSUMERS} consumers of ${values.calls} calls an invocation: bare loop ${perS(bareMs)} (${perS(before)} before, ${perS(after)} after), delivered and marked ${perS(ownMs)}: ${Math.round((bareMs / ownMs) * 100)} %`);
