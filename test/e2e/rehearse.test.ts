// npm start -- --rehearse: the real adapters, the real way of a morning, and weather that nobody can take for real.
import { afterAll, beforeAll, expect, test } from 'vitest';
import { forget, freePort, newStateDir, nobodyLeft, start } from './support/start.ts';

const stateDir = newStateDir();
let run: { readonly code: number | null; readonly output: string; readonly errors: string };

beforeAll(async () => {
  // Were any of these asked, there would be no brief: nobody listens there.
  const nowhere = 'http://127.0.0.1:1';
  const env = { OPEN_METEO_URL: nowhere, OPEN_METEO_ENSEMBLE_URL: nowhere, MET_NORWAY_URL: nowhere, NWS_URL: nowhere, HEARTBEAT_URL: 'https://watchdog.invalid/' };
  const started = start(['--rehearse', '--once'], { stateDir, port: await freePort(), env });
  const code = await started.ended;
  run = { code, output: started.output(), errors: started.errors() };
}, 180_000);
afterAll(() => forget(stateDir));

const sites = ['Hollin Rake', 'Skarvel Brow', 'Dunnock Strip'];

test('judges a site of each service and ends with 0', () => {
  expect(run.code, run.errors + run.output).toBe(0);
  for (const source of ['Open-Meteo ICON-D2', 'MET Norway', 'US National Weather Service']) expect(run.output).toMatch(new RegExp(`[Ff]rom [^\\n]*${source}[^\\n]*run \\d+ h old`));
  expect(run.output).not.toMatch(/NaN|undefined|\[object|could not be reached/);
});

test('says before and after the briefs, and in each of them, that the weather is invented', () => {
  const lines = run.output.split('\n').filter((line) => line.startsWith('REHEARSAL. ') || sites.some((name) => line.includes(`${name}: `)));
  const notice = expect.stringMatching(/^REHEARSAL. The weather is invented /) as string;
  expect(lines).toEqual([notice, ...sites.map((name) => expect.stringMatching(new RegExp(`^Invented weather, ${name}: `)) as string), notice]);
});

test('leaves nobody behind, the stand-ins neither', async () => {
  await nobodyLeft(stateDir);
});
