// What each service is promised (who asks, how often, for what) and what comes of its answers, on real sockets.
import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest';
import { startForecastServer, type ForecastServer, type Service } from '../../support/forecast-server/server.ts';
import { judge } from '../../lib/sources/pipeline.ts';
import { forgetful } from '../../../worker/sources/order.ts';
import { alpineSite, fetchMs, live, onlySources, siteAt, type LiveOptions } from './live.ts';

const D2 = 'open-meteo:icon_d2';
const EPS = 'open-meteo:icon_d2_eps';
const MET = 'met-norway:locationforecast';
const NWS = 'nws:gridpoints';
const norway = siteAt('norway', 60.123456, 9.1);
const utah = siteAt('utah', 40.2, -111.7, { timeZone: 'America/Denver' });

let server: ForecastServer;
let nowMs = fetchMs;
let groundM = 1180;
beforeAll(async () => {
  server = await startForecastServer({ now: () => nowMs, groundAtM: () => groundM });
});
afterAll(() => server.close());
beforeEach(() => {
  server.reset();
  nowMs = fetchMs;
  groundM = 1180;
});

const here = (id: string, options: Partial<LiveOptions> = {}) => live({ origin: server.origin, order: onlySources(id), now: () => nowMs, ...options });
const askedOf = (service: Service) => server.asked.filter((one) => one.service === service);

describe('Open-Meteo', () => {
  test('the ensemble: twenty members of wind and gust, from its own address', async () => {
    const answer = await here(EPS).one(EPS);
    expect(answer.ok && [answer.value.kind, answer.value.members.length, answer.value.members[7]![3]]).toEqual([
      'ensemble', 20, { validAt: '2027-05-14T00:00:00Z', gridElevationM: 1180, wind10m: { speedMps: expect.any(Number), fromDeg: expect.any(Number) }, gustMps: expect.any(Number) },
    ]);
    expect(askedOf('ensemble')).toHaveLength(1);
    expect(askedOf('open-meteo')).toHaveLength(0);
  });

  test.each([['open-meteo:ecmwf_ifs025_ensemble', 51, 3], ['open-meteo:ecmwf_ifs025', 1, 3], [EPS, 20, undefined]])('%s says how far apart its own steps are', async (id, members, stepHours) => {
    const answer = await here(id).one(id);
    expect(answer.ok && [answer.value.members.length, answer.value.stepHours]).toEqual([members, stepHours]);
  });

  test('agreement is judged from it', async () => {
    const { sources, one } = live({ origin: server.origin, order: onlySources(D2, EPS), now: () => nowMs });
    const answers = [];
    for (const { id, kind } of sources) answers.push({ source: id, kind, outcome: await one(id) });
    const day = judge(answers, { sheetId: 'descent-experienced' });
    for (const { margins } of day.hours) expect(margins.find(({ id }) => id === 'agreement')).toMatchObject({ status: 'within', source: EPS });
  });

  test('a key goes along as a header, never in the address', async () => {
    await here(D2, { settings: { openMeteoKey: 'k3y' } }).one(D2);
    expect(server.asked.every(({ headers, url }) => headers['x-api-key'] === 'k3y' && !url.href.includes('k3y'))).toBe(true);
    server.reset();
    await here(D2).one(D2);
    expect(server.asked.every(({ headers }) => headers['x-api-key'] === undefined)).toBe(true);
  });

  describe('the pressure step', () => {
    const step = { a: { name: 'north', lonDeg: 11.6, latDeg: 48.1 }, b: { name: 'south', lonDeg: 11.3, latDeg: 46.5 } };
    const site = siteAt('foehn', 47.26, 11.44, { pressureStep: step });
    const other = siteAt('foehn-too', 47.1, 11.3, { pressureStep: step });
    const pressures = async () => {
      const answer = (await here(D2).ask(D2, site, other)).get('foehn-too');
      return answer?.ok ? answer.value.members[0]!.map((hour) => hour.referencePressureHpa) : answer?.error;
    };

    test('is read at the two points, asked once for all sites that share them', async () => {
      groundM = 520;
      const found = await pressures();
      expect(found).toHaveLength(27);
      expect(found).toEqual(found && Array.isArray(found) ? found.map(() => ({ a: expect.closeTo(1017, -1), b: expect.closeTo(1017, -1) })) : []);
      const second = askedOf('open-meteo')[1]?.url.searchParams;
      expect([second?.get('latitude'), second?.get('hourly')]).toEqual(['48.1,46.5', 'pressure_msl']);
      expect(askedOf('open-meteo')).toHaveLength(2);
    });

    test('points on ground above 800 m have none', async () => {
      groundM = 801;
      expect(new Set((await pressures() as unknown[]).map((hour) => JSON.stringify(hour)))).toEqual(new Set(['{"a":null,"b":null}']));
    });

    test('an answer that fails costs the step only', async () => {
      groundM = 520;
      server.behave('open-meteo', 'clean', 'status-500');
      const answer = (await here(D2).ask(D2, site)).get('foehn');
      expect(answer?.ok && answer.value.members[0]![5]).toMatchObject({ wind10m: { speedMps: expect.any(Number) }, referencePressureHpa: { a: null, b: null } });
    });
  });
});

describe('MET Norway', () => {
  test('is told who asks, with four decimals, and gives a surface day', async () => {
    const answer = await here(MET, { place: norway }).one(MET);
    expect(askedOf('met-norway')[0]?.headers['user-agent']).toBe('dawnmargin/0.1 ops@club.example');
    expect(askedOf('met-norway')[0]?.url.search).toBe('?lat=60.1235&lon=9.1');
    expect(answer.ok && answer.value).toMatchObject({ runAt: '2027-05-14T01:50:00Z', source: MET, gridDistanceM: expect.any(Number) });
    // The series begins with the current hour: what is past is not there.
    expect(answer.ok && answer.value.members[0]!.map((hour) => hour.validAt).at(0)).toBe('2027-05-14T02:00:00Z');
    expect(answer.ok && Object.keys(answer.value.members[0]![3]!).sort()).toEqual(['gridElevationM', 'validAt', ...(answer.ok ? answer.value.declares : [])].sort());
  });

  test('is not asked again before Expires, then with If-Modified-Since, and a 304 is enough', async () => {
    const kept = forgetful();
    const one = () => here(MET, { place: norway, kept }).one(MET);
    const first = await one();
    nowMs += 29 * 60_000;
    expect(await one()).toEqual(first);
    expect(server.asked).toHaveLength(1);
    nowMs += 2 * 60_000;
    const later = await one();
    expect(askedOf('met-norway')[1]?.headers['if-modified-since']).toBe('Fri, 14 May 2027 01:50:00 GMT');
    expect(later.ok).toBe(true);
  });

  test('a 304 confirms the run and renews the fetch', async () => {
    const kept = forgetful();
    const at = async (clock: string) => {
      nowMs = Date.parse(`2027-05-14T${clock}:00Z`);
      const answer = await here(MET, { place: norway, kept }).one(MET);
      return answer.ok ? [answer.value.runAt, answer.value.fetchedAt] : answer.error;
    };
    expect(await at('02:05')).toEqual(['2027-05-14T01:50:00Z', '2027-05-14T02:05:00Z']);
    expect(await at('02:36')).toEqual(['2027-05-14T01:50:00Z', '2027-05-14T02:36:00Z']);
    expect(server.asked.map(({ headers }) => headers['if-modified-since'])).toEqual([undefined, 'Fri, 14 May 2027 01:50:00 GMT']);
  });

  test('203 is accepted and reported to the operator', async () => {
    server.behave('met-norway', 'status-203');
    const asking = here(MET, { place: norway });
    expect((await asking.one(MET)).ok).toBe(true);
    expect(asking.notices).toEqual([{ source: MET, notice: 'deprecated' }]);
  });

  test.each([
    ['old-run', 'its run is 25 h old'], ['future-run', 'its run lies 3 h in the future'], ['no-run', 'it does not say when its run was made'],
    ['two-days-old', 'its hours are of another day'], ['far-300-km', 'its grid point is 301 km away'], ['swapped', /^its grid point is \d+ km away$/],
    ['constant-wind', /^the same/], ['kmh', /^wind_speed: in another unit/],
  ])('%s: no vote, and why', async (mode, why) => {
    server.behave('met-norway', mode);
    const answer = await here(MET, { place: norway }).one(MET);
    const day = judge([{ source: MET, kind: 'deterministic', outcome: answer }], { site: norway });
    expect(day.sources[0]?.why).toMatch(why);
    expect(day.hours.every(({ verdict }) => verdict === 'unknown')).toBe(true);
  });

  test('thunder in a symbol is beyond', async () => {
    server.behave('met-norway', 'thunder');
    const answer = await here(MET, { place: norway }).one(MET);
    const declares = answer.ok ? answer.value.declares : [];
    const day = judge([{ source: MET, kind: 'deterministic', outcome: answer }], { site: norway });
    if (declares.includes('weatherCode')) expect(day.hours.some(({ causes }) => causes.includes('storm'))).toBe(true);
    else expect(declares).toContain('wind10m');
  });
});

describe('NWS', () => {
  test('a place leads to a cell once a day, and the cell to its layers', async () => {
    const kept = forgetful();
    const one = () => here(NWS, { place: utah, kept }).one(NWS);
    const answer = await one();
    expect(answer.ok && answer.value).toMatchObject({ runAt: '2027-05-14T01:15:00Z', gridDistanceM: expect.closeTo(0, -3) });
    nowMs += 40 * 60_000;
    expect((await one()).ok).toBe(true);
    expect(server.asked.map(({ url }) => url.pathname)).toEqual(['/points/40.2,-111.7', '/gridpoints/TST/2732,5208', '/gridpoints/TST/2732,5208']);
    expect(new Set(server.asked.map(({ headers }) => headers['user-agent']))).toEqual(new Set(['dawnmargin/0.1 ops@club.example']));
  });

  test('a place it does not know is not covered', async () => {
    server.behave('nws', 'status-404');
    expect(await here(NWS, { place: utah }).one(NWS)).toEqual({ ok: false, error: { kind: 'not-covered' } });
  });

  test('an expired grid (503) is tried twice and then given up', async () => {
    server.behave('nws', 'clean', 'status-503');
    expect(await here(NWS, { place: utah }).one(NWS)).toEqual({ ok: false, error: { kind: 'server-error', status: 503 } });
    expect(server.asked).toHaveLength(3);
  });

  test.each([
    ['old-run', 'its run is 25 h old'], ['no-run', 'it does not say when its run was made'], ['far-300-km', 'its grid point is 300 km away'],
    ['odd-unit', /^windSpeed: in another unit/], ['no-elevation', 'it does not say how high its ground is'],
  ])('%s: no vote, and why', async (mode, why) => {
    server.behave('nws', mode);
    const answer = await here(NWS, { place: utah }).one(NWS);
    const day = judge([{ source: NWS, kind: 'deterministic', outcome: answer }], { site: utah });
    expect(day.sources[0]?.why).toMatch(why);
    expect(day.hours.every(({ verdict }) => verdict === 'unknown')).toBe(true);
  });
});

test('a source that has no vote leaves the others theirs, and is named', async () => {
  server.behave('open-meteo', 'clean', 'status-404');
  const day = await live({ origin: server.origin, order: onlySources(D2, 'open-meteo:icon_eu'), now: () => nowMs, place: alpineSite }).day();
  expect(day.hours.some(({ verdict }) => verdict === 'within')).toBe(true);
  expect(day.sources.map(({ source, why }) => [source, why])).toContainEqual(['open-meteo:icon_eu', 'it refused the question (status 404)']);
  expect(day.cautions.some(({ id, subject }) => id === 'noVote' && subject === 'open-meteo:icon_eu')).toBe(true);
});
