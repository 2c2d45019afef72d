// The other side of "cannot say": how often it is said where nothing is wrong, and where one source of several is away. A
// tool that always says it would pass every other test here.
import { afterAll, beforeAll, expect, test } from 'vitest';
import type { DayInput } from '../../../lib/brief/day-input.ts';
import { failure } from '../../../lib/result.ts';
import { instantOfLocal, isoUtc } from '../../../lib/time.ts';
import { instantsAround } from '../../../worker/morning/times.ts';
import { startForecastServer, type ForecastServer } from '../../support/forecast-server/server.ts';
import { groundAtM } from '../../support/forecast-server/weather.ts';
import { judge } from '../../lib/sources/pipeline.ts';
import { live, siteAt } from './live.ts';

/** A place in each region of config/sources.json, and three where only worldwide models reach. */
const places = [
  ['alps', 47.26, 11.44, 'Europe/Vienna'], ['jura', 47, 6.6, 'Europe/Paris'], ['pennines', 54.4, -3, 'Europe/London'], ['norway', 60.12, 9.1, 'Europe/Oslo'],
  ['finland', 64.2, 26.1, 'Europe/Helsinki'], ['utah', 40.2, -111.7, 'America/Denver'], ['southern-alps', -43.5, 170.5, 'Pacific/Auckland'],
  ['andes', -33.3, -70.3, 'America/Santiago'], ['himalaya', 28.2, 83.9, 'Asia/Kathmandu'],
] as const;
const dates = ['2027-06-21', '2027-12-03'];
const sheetIds = ['first-hops', 'descent-new', 'thermal-flight'];

let server: ForecastServer;
let nowMs = 0;
beforeAll(async () => { server = await startForecastServer({ now: () => nowMs }); });
afterAll(() => server.close());

const siteOf = (id: string, latDeg: number, lonDeg: number, timeZone: string) => {
  const groundM = groundAtM(latDeg, lonDeg);
  return siteAt(id, latDeg, lonDeg, { timeZone, elevationM: groundM + 120, landing: { latDeg: latDeg + 0.002, lonDeg, elevationM: groundM - 30, roughnessM: 0.03 } });
};

interface Morning {
  readonly answers: DayInput['answers'];
  readonly rest: Pick<DayInput, 'site' | 'localDate' | 'issuedAt' | 'validUntil'>;
}

/** Every source of a place, asked over the wire at twenty to five in the morning for a brief at five. */
async function mornings(): Promise<readonly Morning[]> {
  const all: Morning[] = [];
  for (const localDate of dates) {
    for (const [id, latDeg, lonDeg, timeZone] of places) {
      const site = siteOf(id, latDeg, lonDeg, timeZone);
      nowMs = instantOfLocal(localDate, { hour: 4, minute: 40 }, timeZone);
      const { fromMs, toMs } = instantsAround(site, localDate);
      const answers: DayInput['answers'][number][] = [];
      for (const source of live({ origin: server.origin, place: site, now: () => nowMs }).sources) {
        const outcome = (await source.fetch({ sites: [site], fromUtc: isoUtc(fromMs), toUtc: isoUtc(toMs) })).get(site.id);
        answers.push({ source: source.id, kind: source.kind, outcome: outcome ?? failure({ kind: 'not-covered' }) });
      }
      all.push({ answers, rest: { site, localDate, issuedAt: isoUtc(nowMs + 1_200_000), validUntil: isoUtc(toMs) } });
    }
  }
  return all;
}

const DOWN = failure({ kind: 'server-error', status: 503 } as const);
const without = (answers: DayInput['answers'], isDown: (index: number, answer: DayInput['answers'][number]) => boolean): DayInput['answers'] =>
  answers.map((answer, i) => (isDown(i, answer) ? { ...answer, outcome: DOWN } : answer));

test('clean answers: no hour that cannot be said; the first model down and the second up: at most one in twenty', { timeout: 300_000 }, async () => {
  const asked = await mornings();
  const unknownShare = (isDown: Parameters<typeof without>[1]): number => {
    const hours = asked.flatMap(({ answers, rest }) => sheetIds.flatMap((sheetId) => judge(without(answers, isDown), { ...rest, sheetId }).hours));
    expect(hours.length).toBeGreaterThan(500);
    return hours.filter(({ verdict }) => verdict === 'unknown').length / hours.length;
  };
  const shares = {
    clean: unknownShare(() => false),
    'the first model down': unknownShare((i) => i === 0),
    'the second model down': unknownShare((i) => i === 1),
    'the ensemble down': unknownShare((_, { kind }) => kind === 'ensemble'),
    'the lender of mixed layers down': unknownShare((_, { source }) => source.startsWith('open-meteo-mixed-layer:')),
    'all down': unknownShare(() => true),
  };
  console.log(`hours that cannot be said, of ${places.length} places on ${dates.length} days by ${sheetIds.length} sheets:\n${Object.entries(shares).map(([what, share]) => `${what.padEnd(34)} ${(100 * share).toFixed(2)} %`).join('\n')}`);
  expect(shares.clean).toBe(0);
  for (const [what, share] of Object.entries(shares)) if (what !== 'all down') expect(share, what).toBeLessThanOrEqual(0.05);
  expect(shares['all down']).toBe(1);
});
