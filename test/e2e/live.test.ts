import { writeFileSync } from 'node:fs';
import path from 'node:path';
import { afterAll, afterEach, beforeAll, describe, expect, test } from 'vitest';
import { startForecastServer, type ForecastServer } from '../support/forecast-server/server.ts';
import { forget, freePort, newStateDir, nobodyLeft, start } from './support/start.ts';

let server: ForecastServer;
beforeAll(async () => { server = await startForecastServer(); });
afterAll(() => server.close());
afterEach(() => server.reset());

const hill = {
  type: 'Feature', id: 'my-hill', geometry: { type: 'Point', coordinates: [11.4, 47.2, 1250] },
  properties: {
    kind: 'launch', name: 'My Hill', timeZone: 'Europe/Vienna', facingDeg: 250, slopeDeg: 24,
    hill: { form: 'ridge', heightM: 180, halfLengthM: 320 }, landing: { coordinates: [11.38, 47.19, 900], roughnessM: 0.03 },
  },
};

async function runLive(args: readonly string[] = []): Promise<{ code: number | null; output: string; errors: string; tookMs: number }> {
  const stateDir = newStateDir();
  const file = path.join(stateDir, 'sites.json');
  writeFileSync(file, JSON.stringify({ type: 'FeatureCollection', features: [hill] }));
  const env = { OPEN_METEO_URL: server.origin, OPEN_METEO_ENSEMBLE_URL: server.origin, MET_NORWAY_URL: server.origin, NWS_URL: server.origin };
  const begunMs = Date.now();
  const started = start(['--once', '--live', '--sites', file, ...args], { stateDir, port: await freePort(), env });
  const code = await started.ended;
  await nobodyLeft(stateDir);
  forget(stateDir);
  return { code, output: started.output(), errors: started.errors(), tookMs: Date.now() - begunMs };
}

describe('npm start -- --live --once', () => {
  test('gives a brief from what the services say', { timeout: 90_000 }, async () => {
    const run = await runLive(['--sheet', 'descent-experienced', '--wing', 'EN A']);
    expect(run.code, run.errors + run.output).toBe(0);
    expect(run.output).toMatch(/^My Hill: /m);
    expect(run.output).toContain('EN A, sheet Descent');
    expect(run.output).toMatch(/From Open-Meteo ICON-D2.*\brun \d+ h old/);
    expect(run.output).not.toMatch(/nvented|NaN|undefined|\[object/);
    expect(server.asked.some((question) => question.service === 'ensemble')).toBe(true);
  });

  test.each([
    ['500', { 'open-meteo': 'status-500', ensemble: 'status-500', meta: 'status-500' }],
    ['a hang', { 'open-meteo': 'hang', ensemble: 'hang', meta: 'hang' }],
  ])('against %s: cannot say, with the cause, in time, exit 1', { timeout: 90_000 }, async (_, modes) => {
    for (const [service, mode] of Object.entries(modes)) server.behave(service as 'open-meteo', mode);
    const run = await runLive();
    expect(run.code, run.errors + run.output).toBe(1);
    expect(run.output).toMatch(/^My Hill: cannot say all day\. No source has a vote: Open-Meteo ICON-D2[^(]*\((?:each: )?(?!it was not asked)/m);
    expect(run.output.toLowerCase()).not.toContain('within limits');
    expect(run.tookMs).toBeLessThan(75_000);
  });
});
