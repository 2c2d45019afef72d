// npm run soak -- --signups: 50 clients sign up for half a minute while the 10,000 messages of a morning leave through ten
// consumers to a push service that takes 100 ms, all in one runtime. The morning has to stay inside its minute, and nothing
// may be lost; how fast it is by itself is measured first, with the same machine.
import { generateKeyPairSync } from 'node:crypto';
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { build } from 'esbuild';
import { freePort } from '../../../worker/local/own-demo.ts';
import { root } from '../../support/run-tool.ts';
import { startPushSink } from '../../support/sinks/push-sink.ts';
import { startSmtpSink } from '../../support/sinks/smtp-sink.ts';
import { startPlant, type Plant } from './plant/plant.ts';
import { seedOf } from './plant/seed.ts';

const CONSUMERS = 10;
const CLIENTS = 50;
const FOR_MS = 30_000;
const MORNING_MS = 60_000;
const LATENCY_MS = 100;

interface Counted {
  readonly statuses: Record<string, number>;
  readonly tookMs: number[];
}

/** Asks again and again, each time for another address. */
async function client(origin: string, site: string, untilMs: number, { statuses, tookMs }: Counted, name: number): Promise<void> {
  for (let index = 0; Date.now() < untilMs; index += 1) {
    const wish = { sites: [{ id: site }], deliver: { at: '06:00', timeZone: 'Europe/Vienna' }, channels: [{ kind: 'mail', address: `c${name}.${index}@mail.example.org` }] };
    const beganMs = performance.now();
    const status = await fetch(`${origin}/api/v1/subscriptions`, { method: 'POST', headers: { 'content-type': 'application/json', 'cf-connecting-ip': `198.51.${index % 250}.${name}` }, body: JSON.stringify(wish) })
      .then(async (response) => { await response.arrayBuffer(); return String(response.status); }, () => 'no answer');
    tookMs.push(performance.now() - beganMs);
    statuses[status] = (statuses[status] ?? 0) + 1;
  }
}

async function seeded(plant: Plant, targets: readonly unknown[], site: (id: string) => void): Promise<void> {
  for (let from = 0; from < targets.length; from += 2000) {
    const seed = seedOf(targets.slice(from, from + 2000).map((target, index) => ({ id: `s${from + index}`, channels: [{ kind: 'push', target }] }))) as { readonly sites: readonly { readonly id: string }[] };
    await plant.post('seed', seed);
    site(seed.sites[0]?.id ?? '');
  }
  await plant.post('morning');
  await plant.drive('fetch');
  await plant.drive('assess');
}

/** Ten consumers side by side, as the platform would have them, each called again until nothing is left. */
async function delivered(plant: Plant): Promise<number> {
  const begunMs = Date.now();
  let isOver = false;
  const consumers = Promise.all(Array.from({ length: CONSUMERS }, async () => {
    while (!isOver) await (await fetch(`${plant.origin}/drive`, { method: 'POST' })).arrayBuffer();
  }));
  while (((await plant.progress()).outbox['pending'] ?? 0) > 0 && Date.now() - begunMs < 10 * MORNING_MS) await new Promise((resolve) => setTimeout(resolve, 250));
  const ms = Date.now() - begunMs;
  isOver = true;
  await consumers;
  return ms;
}

/** The worker with one door more, behind which a wake-up call for the delivery is answered. */
const DRIVEN = `import whole from './worker/whole.ts';
const call = { id: 'call', timestamp: new Date(0), attempts: 1, body: { v: 1, step: 'deliver' }, ack() {}, retry() {} };
export default {
  ...whole,
  async fetch(request, env, ctx) {
    if (new URL(request.url).pathname !== '/drive') return whole.fetch(request, env, ctx);
    await whole.queue({ queue: 'deliver', messages: [call], ackAll() {}, retryAll() {} }, env, ctx);
    return new Response('done');
  },
};`;

/** One morning, with or without people at the door; true when it kept its promises. */
async function morning(script: string, folder: string, { messages, clients }: { readonly messages: number; readonly clients: number }): Promise<boolean> {
  const jwk = generateKeyPairSync('ec', { namedCurve: 'P-256' }).privateKey.export({ format: 'jwk' });
  const publicKey = Buffer.concat([Buffer.from([4]), Buffer.from(jwk.x ?? '', 'base64url'), Buffer.from(jwk.y ?? '', 'base64url')]).toString('base64url');
  const [push, mail] = [await startPushSink(), await startSmtpSink()];
  push.answer(() => ({ status: 201, afterMs: LATENCY_MS }));
  const env = { PLANT_CONSUMERS: 'none', VAPID_PUBLIC_KEY: publicKey, VAPID_PRIVATE_KEY: jwk.d ?? '', SMTP_URL: `smtp://127.0.0.1:${mail.port}` };
  const plant = await startPlant({ bundle: { folder, script }, stateDir: mkdtempSync(path.join(folder, 'state-')), port: await freePort(), env });
  try {
    let site = '';
    await seeded(plant, Array.from({ length: messages }, () => push.newBrowser().target), (id) => { site = id; });
    const counted: Counted = { statuses: {}, tookMs: [] };
    const untilMs = Date.now() + FOR_MS;
    const people = Promise.all(Array.from({ length: clients }, (_, name) => client(plant.origin, site, untilMs, counted, name)));
    const ms = await delivered(plant);
    await people;
    const { outbox } = await plant.progress();
    const all = counted.tookMs.toSorted((a, b) => a - b);
    const at = (part: number): string => `${Math.round(all[Math.floor(all.length * part)] ?? 0)} ms`;
    const door = clients === 0 ? 'nobody at the door' : `${clients} clients for ${FOR_MS / 1000} s: ${all.length} sign-ups (${Math.round(all.length / (FOR_MS / 1000))}/s; half within ${at(0.5)}, 99 % within ${at(0.99)}; ${JSON.stringify(counted.statuses)})`;
    console.log(`${messages} messages delivered in ${(ms / 1000).toFixed(1)} s (${JSON.stringify(outbox)}, ${push.pushed.length} taken by the service), ${mail.received.length} mails sent meanwhile; ${door}`);
    const isWhole = outbox['sent'] === messages && push.pushed.length === messages;
    return isWhole && ms <= MORNING_MS && Object.keys(counted.statuses).every((status) => status === '202');
  } finally {
    await plant.kill();
    await Promise.all([push.close(), mail.close()]);
  }
}

export async function signups(messages: number): Promise<boolean> {
  const folder = mkdtempSync(path.join(tmpdir(), 'dawnmargin-signups-'));
  const script = path.join(folder, 'whole.js');
  await build({ stdin: { contents: DRIVEN, resolveDir: root, loader: 'ts' }, bundle: true, format: 'esm', outfile: script, target: 'es2024', external: ['cloudflare:*'], logLevel: 'error' });
  const alone = await morning(script, folder, { messages, clients: 0 });
  const together = await morning(script, folder, { messages, clients: CLIENTS });
  rmSync(folder, { recursive: true, force: true, maxRetries: 5 });
  console.log(alone && together ? `The morning stayed inside its ${MORNING_MS / 1000} s.` : `NOT inside ${MORNING_MS / 1000} s, or not whole.`);
  return alone && together;
}
