// The deployed worker in the local runtime, with its real queues: what it sends to a push service on this machine.
import { generateKeyPairSync } from 'node:crypto';
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { freePort } from '../../e2e/support/start.ts';
import { startPushSink, type PushSink } from '../../support/sinks/push-sink.ts';
import { buildBundle, type Bundle } from './plant/bundle.ts';
import { settle, startPlant, type Plant } from './plant/plant.ts';
import { seedOf } from './plant/seed.ts';

const stateDir = mkdtempSync(path.join(tmpdir(), 'dawnmargin-plant-'));
let bundle: Bundle;
let sink: PushSink;
let plant: Plant;

beforeAll(async () => {
  const jwk = generateKeyPairSync('ec', { namedCurve: 'P-256' }).privateKey.export({ format: 'jwk' });
  const publicKey = Buffer.concat([Buffer.from([4]), Buffer.from(jwk.x!, 'base64url'), Buffer.from(jwk.y!, 'base64url')]).toString('base64url');
  sink = await startPushSink();
  bundle = await buildBundle();
  plant = await startPlant({ bundle, stateDir, port: await freePort(), env: { VAPID_PUBLIC_KEY: publicKey, VAPID_PRIVATE_KEY: jwk.d! } });
}, 120_000);

afterAll(async () => {
  await plant.kill();
  await sink.close();
  for (const folder of [stateDir, bundle.folder]) rmSync(folder, { recursive: true, force: true, maxRetries: 5 });
});

test('twenty browsers read, with a library that is not ours, what the worker has sent; one that is gone is ended', { timeout: 120_000 }, async () => {
  const browsers = Array.from({ length: 20 }, () => sink.newBrowser());
  sink.answer(({ path: at }) => ({ status: at === '/push/7' ? 410 : 201 }));
  await plant.post('begin');
  await plant.post('seed', seedOf(browsers.map(({ target }, index) => ({ id: `b${index}`, channels: [{ kind: 'push', target }] }))));
  await plant.post('morning');
  await settle(plant, 60_000);
  expect((await plant.progress()).outbox).toMatchObject({ pending: 0, sent: 19, dead: 1 });
  expect(new Set(sink.pushed.map((pushed) => pushed.path)).size).toBe(20);
  expect(sink.pushed).toHaveLength(20);
  const ids = sink.pushed.map((pushed) => {
    const read = sink.decrypt(pushed) as { id: string; title: string; body: string; inventedWeather: boolean };
    expect(read.title).toMatch(/^Invented weather/);
    expect(read.body).toMatch(/^Invented weather/);
    expect(read.inventedWeather).toBe(true);
    return read.id;
  });
  expect(new Set(ids).size).toBe(20);
});
