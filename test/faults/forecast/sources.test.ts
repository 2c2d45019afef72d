// Faults F1-F30 as a source, and as the brief made from it, must take them: the live adapters on real sockets.
import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest';
import type { JudgedDay } from '../../../lib/brief/day.ts';
import { startForecastServer, type ForecastServer } from '../../support/forecast-server/server.ts';
import { groundM, judge } from '../../lib/sources/pipeline.ts';
import { forgetful } from '../../../worker/sources/order.ts';
import { BOUNDS } from '../../../worker/sources/safe-fetch.ts';
import { alpineSite, fetchMs, live, onlySources, SHORT, siteAt } from './live.ts';

const D2 = 'open-meteo:icon_d2';
const EU = 'open-meteo:icon_eu';

let server: ForecastServer;
let nowMs = fetchMs;
beforeAll(async () => {
  server = await startForecastServer({ now: () => nowMs, groundAtM: () => groundM });
});
afterAll(() => server.close());
beforeEach(() => {
  server.reset();
  nowMs = fetchMs;
});

const here = (...ids: string[]) => live({ origin: server.origin, order: onlySources(...ids), now: () => nowMs });
const verdicts = (day: JudgedDay) => new Set(day.hours.map(({ verdict }) => verdict));
const whyOf = (day: JudgedDay, source: string) => day.sources.find((vote) => vote.source === source)?.why;

test('the documented service gives a day from its data', async () => {
  const day = await here(D2).day();
  expect(verdicts(day)).toEqual(new Set(['within', 'close']));
  expect(day.sources.map(({ source, state }) => [source, state])).toEqual([[D2, 'voted'], ['open-meteo-mixed-layer:ecmwf_ifs', 'voted']]);
  expect(day.windows.length).toBeGreaterThan(0);
});

describe('a single source that fails on the wire: cannot say, with the cause, in time', () => {
  test.each([
    ['F1: reset', 'reset', 'it could not be reached'],
    ['F3: a hang', 'hang', 'no answer within 1 s'],
    ['F4: a drip', 'drip', 'no answer within 1 s'],
    ['F5: an endless body', 'endless', 'its answer was larger than 2000 kB'],
    ['F6: a bomb', 'gzip-bomb', 'its answer was larger than 2000 kB'],
    ['F7: corrupt packing', 'corrupt-gzip', 'it could not be reached'],
    ['F8: truncated', 'truncated', 'it could not be reached'],
    ['F9: reset after complete JSON', 'reset-after-json', 'it could not be reached'],
    ['half-streamed', 'half-streamed', 'its answer could not be read'],
    ['F10: a maintenance page', 'html', 'its answer was not of the kind asked for'],
    ['F11: empty', 'empty', 'its answer could not be read'],
    ['F12: 500', 'status-500', 'it failed (status 500)'],
    ['F12: 503 that asks for an hour', 'status-503', 'it failed (status 503)'],
    ['F13: 429', 'status-429', 'it asked for fewer questions'],
    ['F13: 429 with two minutes', 'status-429-later', 'it asked for a pause of 2 min'],
    ['F14: 401', 'status-401', 'it refused the question (status 401)'],
    ['F14: 403', 'status-403', 'it refused the question (status 403)'],
    ['F15: 301', 'status-301', 'it sent us to another address, which is not followed'],
    ['F16: an error under 200', 'error-200', 'it refused the question (status 200)'],
  ])('%s', async (_, mode, why) => {
    server.behave('open-meteo', mode);
    const startedMs = performance.now();
    const day = await live({ origin: server.origin, order: onlySources(D2), now: () => nowMs, bounds: { totalMs: 900, firstTryMs: 300, maxBytes: 2_000_000 } }).day();
    expect(verdicts(day)).toEqual(new Set(['unknown']));
    expect(whyOf(day, D2)).toBe(why);
    expect(performance.now() - startedMs).toBeLessThan(4000);
  });

  test('F1: nobody listens; F2: no such name', async () => {
    const closed = await startForecastServer();
    await closed.close();
    for (const origin of [closed.origin, 'https://forecast.invalid']) {
      const day = await live({ origin, order: onlySources(D2) }).day();
      expect(verdicts(day)).toEqual(new Set(['unknown']));
      expect(whyOf(day, D2)).toBe('it could not be reached');
      expect(/reference = |ENOTFOUND|ECONN/.test(JSON.stringify(day))).toBe(false);
    }
  });
});

describe('a single source whose run cannot be trusted', () => {
  test.each([
    ['F17, F18: an old run under a fresh answer', 'old-run', 'its run is 27 h old'],
    ['F18: no run time', 'no-run', 'it does not say when its run was made'],
    ['a run time of null', 'run-null', 'it does not say when its run was made'],
    ['no meta.json at all', 'status-404', 'it does not say when its run was made'],
    ['F30: a clock three hours ahead', 'future-run', 'its run lies 3 h in the future'],
  ])('%s', async (_, mode, why) => {
    server.behave('meta', mode);
    const day = await here(D2).day();
    expect(verdicts(day)).toEqual(new Set(['unknown']));
    expect(whyOf(day, D2)).toBe(why);
  });

  test('a run that became available five minutes ago is not believed yet: the age is that of the run before', async () => {
    const settled = await here(D2).one(D2);
    server.behave('meta', 'just-available');
    const unsettled = await here(D2).one(D2);
    expect([settled, unsettled].map((answer) => answer.ok && answer.value.runAt)).toEqual(['2027-05-14T00:00:00Z', '2027-05-13T21:00:00Z']);
  });

  test('the older of two storage names counts, and one that is missing leaves no run time', async () => {
    const gfs = 'open-meteo:gfs_global';
    server.behave('meta', 'old-run', 'clean');
    const answer = await here(gfs).one(gfs);
    expect(answer.ok && answer.value.runAt).toBe('2027-05-13T00:00:00Z');
    server.behave('meta', 'clean', 'status-404');
    expect(await here(gfs).one(gfs)).toEqual({ ok: false, error: { kind: 'run-missing' } });
  });
});

describe('F22: the place', () => {
  test('a model ground that moved by 250 m since it was stored', async () => {
    const answers = await here(D2).one(D2);
    server.behave('open-meteo', 'moved-ground');
    const moved = await here(D2).one(D2);
    const day = (outcome: typeof moved) => judge([{ source: D2, kind: 'deterministic', outcome }], { storedGroundM: { [D2]: groundM }, sheetId: 'descent-experienced' });
    expect(verdicts(day(answers)).has('within')).toBe(true);
    expect(verdicts(day(moved))).toEqual(new Set(['unknown']));
    expect(whyOf(day(moved), D2)).toContain('250 m');
  });
});

describe('two sources', () => {
  const both = () => live({ origin: server.origin, order: onlySources(D2, EU), now: () => nowMs });

  test('F25: where they disagree the worse counts, and each is shown', async () => {
    server.behave('open-meteo', 'clean', 'absurd-gusts');
    const day = await both().day();
    expect(verdicts(day)).toEqual(new Set(['beyond']));
    expect(day.hours[3]?.bySource.map(({ source, verdict }) => [source, verdict])).toEqual([[D2, expect.stringMatching(/within|close/)], [EU, 'beyond']]);
  });

  test('F26: one is down and the other has no gusts: the gust cannot be said, the mean never stands in for it', async () => {
    server.behave('open-meteo', 'status-500', 'status-500', 'undefined-gusts');
    const day = await both().day();
    expect(verdicts(day)).toEqual(new Set(['unknown']));
    for (const { margins } of day.hours) expect(margins.find(({ id }) => id === 'gust')).toMatchObject({ status: 'unknown', spare: null, missing: ['gustMps'] });
  });

  test('one is down and the other is well: at most one hour in twenty cannot be said', async () => {
    server.behave('open-meteo', 'status-500', 'status-500', 'clean');
    const gfs = 'open-meteo:gfs_global';
    const day = await live({ origin: server.origin, order: onlySources(D2, gfs), now: () => nowMs }).day();
    expect(whyOf(day, D2)).toBe('it failed (status 500)');
    expect(day.hours.filter(({ verdict }) => verdict === 'unknown').length / day.hours.length).toBeLessThanOrEqual(0.05);
  });

  test('F23: a silent change of scale shows as a disagreement', async () => {
    server.behave('open-meteo', 'clean', 'third-of-wind');
    const day = await both().day();
    const spread = day.hours[6]?.wind;
    expect((spread?.mostMps ?? 0) - (spread?.leastMps ?? 0)).toBeGreaterThan(0.5);
  });
});

describe('F27: a service that fails half-way', () => {
  const norway = [siteAt('a', 60.1, 9.1), siteAt('b', 60.2, 9.2), siteAt('c', 60.3, 9.3), siteAt('d', 60.4, 9.4)];
  const met = (kept = forgetful(), bounds = BOUNDS) => live({ origin: server.origin, order: onlySources('met-norway:locationforecast'), place: norway[0]!, now: () => nowMs, kept, bounds });

  test('keeps the first half and says for each of the rest why not', async () => {
    server.behave('met-norway', 'clean', 'clean', 'status-500');
    const answers = await met().ask('met-norway:locationforecast', ...norway);
    expect([...answers].map(([id, answer]) => [id, answer.ok ? 'given' : answer.error.kind])).toEqual([['a', 'given'], ['b', 'given'], ['c', 'server-error'], ['d', 'server-error']]);
  });

  test('a dead host is not asked for every site', async () => {
    server.behave('met-norway', 'hang');
    const answers = await met(forgetful(), SHORT).ask('met-norway:locationforecast', ...norway);
    expect([...answers.values()].every((answer) => !answer.ok && answer.error.kind === 'timeout')).toBe(true);
    // Two tries for the first place, which take all the time that a source has.
    expect(server.asked).toHaveLength(2);
  });

  test('F13: after a 429 nothing more is asked, until its time has passed', async () => {
    const kept = forgetful();
    server.behave('met-norway', 'clean', 'status-429-later');
    const answers = await met(kept).ask('met-norway:locationforecast', ...norway);
    expect([...answers.values()].map((answer) => answer.ok || answer.error.kind)).toEqual([true, 'rate-limited', 'rate-limited', 'rate-limited']);
    expect(server.asked).toHaveLength(2);
    server.behave('met-norway', 'clean');
    nowMs += 119_000;
    expect(await met(kept).ask('met-norway:locationforecast', norway[1]!)).toEqual(new Map([['b', { ok: false, error: { kind: 'breaker-open', until: '2027-05-14T02:42:00Z' } }]]));
    expect(server.asked).toHaveLength(2);
    nowMs += 1000;
    expect([...(await met(kept).ask('met-norway:locationforecast', norway[1]!)).values()].map(({ ok }) => ok)).toEqual([true]);
  });
});

describe('F3: a host that hangs', () => {
  test('costs a morning one wait, whatever number of its sources are asked', async () => {
    server.behave('meta', 'hang');
    const day = await live({ origin: server.origin, order: onlySources(D2, EU, 'open-meteo:gfs_global'), now: () => nowMs, bounds: SHORT }).day();
    expect(server.asked).toHaveLength(2);
    expect(day.sources.map(({ why }) => why)).toEqual(['no answer within 1 s', ...Array.from({ length: day.sources.length - 1 }, () => expect.stringMatching(/^it failed before and is not asked again until/) as string)]);
  });
});

describe('the breaker', () => {
  const kept = forgetful();
  const ask = () => live({ origin: server.origin, order: onlySources(D2), now: () => nowMs, kept }).one(D2);
  const kindOf = async () => {
    const answer = await ask();
    return answer.ok ? 'given' : answer.error.kind;
  };

  test('F28, F29: opens at five failures, lets one probe through, stays open when it fails, closes when it succeeds', async () => {
    server.behave('meta', 'status-500');
    // Each question is tried twice.
    for (let i = 0; i < 3; i += 1) expect(await kindOf()).toBe('server-error');
    const asked = server.asked.length;
    expect(await kindOf()).toBe('breaker-open');
    expect(server.asked).toHaveLength(asked);
    nowMs += 30_000;
    expect(await kindOf()).toBe('server-error');
    expect(server.asked).toHaveLength(asked + 2);
    nowMs += 59_000;
    expect(await kindOf()).toBe('breaker-open');
    nowMs += 1000;
    server.behave('meta', 'clean');
    expect(await kindOf()).toBe('given');
    expect(await kindOf()).toBe('given');
  });
});

describe('the batch', () => {
  test('one place outside the model costs itself only', async () => {
    const sites = [alpineSite, siteAt('tyrol', 47.1, 11.3), siteAt('edge', 43.6, 19.9)];
    server.behave('open-meteo', 'status-400', 'clean', 'clean', 'status-400');
    const answers = await here(D2).ask(D2, ...sites);
    expect([...answers].map(([id, answer]) => [id, answer.ok ? 'given' : answer.error])).toEqual([
      [alpineSite.id, 'given'], ['tyrol', 'given'], ['edge', { kind: 'refused', status: 400 }],
    ]);
  });

  test('a place outside the configured region is not asked for', async () => {
    const answers = await here(D2).ask(D2, alpineSite, siteAt('sydney', -33.9, 151.2));
    expect(answers.get('sydney')).toEqual({ ok: false, error: { kind: 'not-covered' } });
    const [url] = server.asked.filter(({ service }) => service === 'open-meteo').map((one) => one.url);
    expect(url?.searchParams.get('latitude')).toBe('47.2611');
  });

  test('several sites come back in their order, one question at a time', async () => {
    let inFlight = 0;
    let most = 0;
    const counting: typeof fetch = async (...args) => {
      inFlight += 1;
      most = Math.max(most, inFlight);
      const response = await fetch(...args);
      inFlight -= 1;
      return response;
    };
    const sites = [alpineSite, siteAt('east', 47.3, 12.4), siteAt('west', 47.2, 9.6)];
    const answers = await live({ origin: server.origin, order: onlySources(D2), fetch: counting }).ask(D2, ...sites);
    for (const site of sites) {
      const answer = answers.get(site.id)!;
      expect(answer.ok && answer.value.gridDistanceM).toBeLessThan(1600);
    }
    expect(most).toBe(1);
    expect(server.asked.filter(({ service }) => service === 'open-meteo')).toHaveLength(1);
  });
});
