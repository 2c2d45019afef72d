import { existsSync, writeFileSync } from 'node:fs';
import { createServer } from 'node:net';
import path from 'node:path';
import { afterEach, describe, expect, test } from 'vitest';
import sites from '../../config/sites.json' with { type: 'json' };
import { wrangler } from '../../worker/local/wrangler.ts';
import { startWebhookSink } from '../support/sinks/webhook-sink.ts';
import { forget, freePort, localToken, newStateDir, nobodyLeft, processesOf, start } from './support/start.ts';

const stateDirs: string[] = [];
function stateDir(): string {
  const folder = newStateDir();
  stateDirs.push(folder);
  return folder;
}

afterEach(() => {
  for (const folder of stateDirs.splice(0)) {
    for (const pid of processesOf(folder)) process.kill(pid, 'SIGKILL');
    forget(folder);
  }
});

describe('npm start -- --once', () => {
  test('prints a brief for every demo site and ends with 0, twice on the same folder', { timeout: 150_000 }, async () => {
    const setup = { stateDir: stateDir(), port: await freePort() };
    for (const run of ['first', 'second']) {
      const begunMs = Date.now();
      const started = start(['--once'], setup);
      expect(await started.ended, started.errors()).toBe(0);
      const output = started.output();
      const blocks = output.split('\n').filter((line) => line.startsWith('Invented weather, '));
      expect(blocks).toHaveLength(sites.features.length);
      for (const site of sites.features) expect(output).toContain(`Invented weather, ${site.properties.name}: `);
      for (const phrase of ['within limits', 'close to a limit', 'beyond a limit', 'cannot say']) expect(output.toLowerCase()).toContain(phrase);
      expect(output).not.toMatch(/NaN|undefined|\[object|Infinity/);
      expect(Number(/This morning took ([\d.]+) s/.exec(output)?.[1])).toBeLessThan(10);
      expect(Date.now() - begunMs).toBeLessThan(60_000);
      expect(output.includes('Operator token'), 'the token is shown once').toBe(run === 'first');
      expect(started.errors()).toBe('');
      await nobodyLeft(setup.stateDir);
    }
    // The platform's own tool agrees with how the tables came about: on this database it has nothing left to do.
    const list = wrangler(['d1', 'migrations', 'list', 'DB', '--local', '--persist-to', setup.stateDir], setup.stateDir);
    expect(await list.ended, list.output()).toBe(0);
    expect(list.output()).toContain('No migrations to apply');
  });
});

describe('npm start', () => {
  test.each(['SIGINT', 'SIGTERM'] as const)('keeps serving until %s, and leaves nobody', { timeout: 90_000 }, async (signal) => {
    const setup = { stateDir: stateDir(), port: await freePort() };
    const started = start([], setup);
    await started.says('until you stop this');
    const board = await fetch(`${started.origin}/`);
    expect(board.status).toBe(200);
    expect(await board.text()).toContain('nvented weather');
    expect(await (await fetch(`${started.origin}/healthz`)).json()).toMatchObject({ outbox: { pending: 0 } });
    started.child.kill(signal);
    expect(await started.ended).toBe(0);
    await nobodyLeft(setup.stateDir);
  });

  test('killed outright, it leaves nobody either', { timeout: 90_000 }, async () => {
    const setup = { stateDir: stateDir(), port: await freePort() };
    const started = start([], setup);
    await started.says('until you stop this');
    started.child.kill('SIGKILL');
    await nobodyLeft(setup.stateDir);
  });

  test('killed between plan and delivery, the next start delivers the same message', { timeout: 150_000 }, async () => {
    const sink = await startWebhookSink();
    try {
      sink.behave(() => 'silence');
      const setup = { stateDir: stateDir(), port: await freePort() };
      const started = start([], setup);
      await started.says('until you stop this');
      await seedWebhook(started.origin, localToken(setup.stateDir), `${sink.origin}/hook`);
      await sink.has(1);
      started.child.kill('SIGKILL');
      await nobodyLeft(setup.stateDir);
      sink.behave(() => 204);
      const again = start(['--once'], setup);
      expect(await again.ended).toBe(0);
      expect(sink.received).toHaveLength(2);
      expect(new Set(sink.received.map((one) => one.id)).size).toBe(1);
      expect(new Set(sink.received.map((one) => one.body)).size).toBe(1);
    } finally {
      await sink.close();
    }
  });

  test.each([
    ['an argument nobody knows', ['--onec'], /--onec/],
    ['--sites without --live', ['--sites', 'x.json'], /--sites needs --live/],
    ['a file that is not there', ['--live', '--sites', 'nowhere.json'], /--sites \(nowhere\.json\): there is no such file/],
    ['an unknown sheet', ['--sheet', 'descent-old'], /--sheet \(descent-old\): neither the id of a sheet nor a file; allowed: one of .*descent-new/],
    ['an unknown wing', ['--wing', 'EN X'], /--wing \(EN X\): no wing class; allowed: EN A/],
    ['only invented places', ['--live'], /--live .*no real weather/],
  ])('%s: a clear message, exit 2, nothing stored', async (_, args, message) => {
    const setup = { stateDir: path.join(stateDir(), 'not-made'), port: await freePort() };
    const started = start(args, setup);
    expect(await started.ended).toBe(2);
    expect(started.errors()).toMatch(message);
    expect(started.output()).toBe('');
    expect(existsSync(setup.stateDir)).toBe(false);
  });

  test('a bad sites file is refused with every problem in it', async () => {
    const folder = stateDir();
    const file = path.join(folder, 'sites.json');
    writeFileSync(file, JSON.stringify({ type: 'FeatureCollection', features: [{ type: 'Feature', id: 'My Hill', properties: { kind: 'launch' } }] }));
    const started = start(['--live', '--sites', file], { stateDir: path.join(folder, 'not-made'), port: await freePort() });
    expect(await started.ended).toBe(2);
    for (const field of ['id', 'geometry', 'facingDeg', 'landing', 'timeZone']) expect(started.errors()).toContain(field);
  });

  test('a wrong setting is named', async () => {
    const setup = { stateDir: path.join(stateDir(), 'not-made'), port: await freePort(), env: { OPEN_METEO_URL: 'http://192.0.2.1/x' } };
    const started = start(['--once'], setup);
    expect(await started.ended).toBe(2);
    expect(started.errors()).toMatch(/OPEN_METEO_URL/);
  });

  test('a taken port is said, and whoever has it is left alone', async () => {
    const server = createServer().listen(0, '127.0.0.1');
    await new Promise((resolve) => server.once('listening', resolve));
    const { port } = server.address() as { port: number };
    const started = start(['--once'], { stateDir: path.join(stateDir(), 'not-made'), port });
    expect(await started.ended).toBe(2);
    expect(started.errors()).toContain(`port ${port} of 127.0.0.1 is taken`);
    expect(server.listening).toBe(true);
    server.close();
  });

  test('demo and live never share a folder', async () => {
    const folder = stateDir();
    writeFileSync(path.join(folder, 'kind'), 'live\n');
    const started = start(['--once'], { stateDir: folder, port: await freePort() });
    expect(await started.ended).toBe(2);
    expect(started.errors()).toMatch(/belongs to a live run/);
  });
});

/** A subscriber with a webhook besides what config/ seeds, due now. */
async function seedWebhook(origin: string, token: string, url: string): Promise<void> {
  const headers = { authorization: `Bearer ${token}`, 'content-type': 'application/json' };
  const { features } = (await (await fetch(`${origin}/api/v1/sites`)).json()) as { features: { id: string }[] };
  const seed = {
    sites: features.map((feature) => ({ id: feature.id, feature: JSON.stringify(feature), demo: true })),
    sheets: [], wings: [], published: [],
    subscriptions: [{
      id: 'a-receiver', timeZone: 'Europe/Vienna', deliverMinute: 330,
      pairs: [{ siteId: features[0]!.id, wingKey: 'EN B', sheetId: 'descent-new' }],
      channels: [{ id: 'a-receiver-0', rank: 0, kind: 'webhook', target: JSON.stringify({ url }) }],
    }],
  };
  for (const [where, body] of [['seed', seed], ['morning', {}]] as const) {
    const response = await fetch(`${origin}/local/${where}`, { method: 'POST', headers, body: JSON.stringify(body) });
    if (!response.ok) throw new Error(`${where} answered ${response.status}: ${await response.text()}`);
  }
}
