// Recorded answers of the three services, read by the adapters and compared with numbers copied by hand from the raw
// JSON. The recordings are not part of the repository (see the licence notes beside them): without them these tests are
// skipped, and say so.
import { existsSync, readFileSync } from 'node:fs';
import path from 'node:path';
import { describe, expect, test } from 'vitest';
import { root } from '../../support/run-tool.ts';
import { siteAt } from '../../faults/forecast/live.ts';
import type { Conditions, Forecast } from '../../../lib/forecast/conditions.ts';
import type { PlainSource } from '../../../lib/config/source-order.ts';
import { epochOf } from '../../../lib/time.ts';
import { success } from '../../../lib/result.ts';
import { chosenHours } from '../../../worker/sources/hours.ts';
import { toMetForecast } from '../../../worker/sources/met-norway/to-forecast.ts';
import { toNwsForecast } from '../../../worker/sources/nws/to-forecast.ts';
import type { PlaceForecast } from '../../../worker/sources/one-by-one.ts';
import { forecastOf } from '../../../worker/sources/open-meteo/open-meteo.ts';
import { readAnswer } from '../../../worker/sources/open-meteo/read-answer.ts';
import { readJson } from '../../../worker/sources/read-json.ts';
import { answer, entryOf, judge, order } from './pipeline.ts';

const folder = path.resolve(root, '..', 'shared', 'reference', 'payloads');
const isThere = existsSync(folder);
if (!isThere) console.log(`the recorded payloads are not at ${path.relative(root, folder)}: their tests are skipped`);

const json = (file: string) => readJson(readFileSync(path.join(folder, file), 'utf8'));
const plain = (id: string) => order.sources.find((entry) => entry.id === id) as PlainSource;

/** A day of a surface source, as its adapter hands it over. */
function forecast(id: string, read: PlaceForecast, day: { fromUtc: string; toUtc: string }): Forecast {
  const entry = plain(id);
  const chosen = chosenHours(read.hours, { ...day, declares: entry.declares });
  if (!chosen.ok) throw new Error(`the recording does not hold ${day.fromUtc}`);
  return { source: id, kind: 'deterministic', runAt: read.runAt, fetchedAt: day.fromUtc, declares: entry.declares, members: [chosen.value], gridDistanceM: 0, demo: false, trustedWithoutRunTime: false };
}

/** Every field that the judged hours miss, by name. No hour may be within or close: what is missing is missed in all of them. */
function missingOn(date: string, source: Forecast, place: { latDeg: number; lonDeg: number }, issuedAt: string): string[] {
  const site = siteAt('recorded', place.latDeg, place.lonDeg, { elevationM: 60, timeZone: 'UTC' });
  const day = judge([answer({ id: source.source, kind: 'deterministic' }, success(source))], { site, localDate: date, issuedAt });
  expect(day.hours.length).toBeGreaterThan(7);
  expect(day.hours.filter(({ verdict }) => verdict === 'within' || verdict === 'close')).toEqual([]);
  expect(day.sources[0]).toMatchObject({ state: 'voted', why: null });
  return [...new Set(day.hours.flatMap(({ margins }) => margins.flatMap(({ missing }) => missing)))];
}

describe.skipIf(!isThere)('MET Norway complete, London, 2020-07-20', () => {
  const read = () => {
    const result = toMetForecast((json('metno_locationforecast_complete_london_2020-07-20.json') as { data: unknown }).data, Date.parse('2020-07-20T11:20:00Z'));
    if (!result.ok) throw new Error(JSON.stringify(result.error));
    return result.value;
  };

  test('55 hourly steps and the hour that ends them, where and when they are from', () => {
    const { hours, ...rest } = read();
    expect(rest).toEqual({ runAt: '2020-07-20T01:30:57Z', latDeg: 51.5, lonDeg: -0.1 });
    expect(hours).toHaveLength(56);
    expect([hours[0]?.validAt, hours.at(-1)?.validAt]).toEqual(['2020-07-20T11:00:00Z', '2020-07-22T18:00:00Z']);
  });

  test.each<[number, Conditions]>([
    [1, { validAt: '2020-07-20T12:00:00Z', gridElevationM: 25, wind10m: { speedMps: 2.7, fromDeg: 346.1 }, gustMps: null, temperature2mC: 19.6, dewPoint2mC: 6.4, seaLevelPressureHpa: 1023, lowCloudPct: 8.6, precipitationMm: 0, precipitationProbabilityPct: null, weatherCode: 0 }],
    [25, { validAt: '2020-07-21T12:00:00Z', gridElevationM: 25, wind10m: { speedMps: 2.6, fromDeg: 326 }, gustMps: null, temperature2mC: 19.3, dewPoint2mC: 6.8, seaLevelPressureHpa: 1026.2, lowCloudPct: 99.2, precipitationMm: 0, precipitationProbabilityPct: null, weatherCode: 3 }],
    [55, { validAt: '2020-07-22T18:00:00Z', gridElevationM: 25, wind10m: { speedMps: 3, fromDeg: 262 }, gustMps: null, temperature2mC: 23.3, dewPoint2mC: 7.8, seaLevelPressureHpa: 1020.2, lowCloudPct: 0, precipitationMm: null, precipitationProbabilityPct: null, weatherCode: null }],
  ])('hour %i', (index, expected) => {
    expect(read().hours[index]).toEqual(expected);
  });

  test('it has no gusts: no hour of its day can be said, and the gust is named', () => {
    const day = forecast('met-norway:locationforecast', read(), { fromUtc: '2020-07-21T00:00:00Z', toUtc: '2020-07-22T00:00:00Z' });
    const missing = missingOn('2020-07-21', day, { latDeg: 51.5, lonDeg: -0.1 }, '2020-07-20T12:00:00Z');
    expect(missing).toContain('gustMps');
    expect(missing).toContain('precipitationProbabilityPct');
  });
});

describe.skipIf(!isThere)('MET Norway compact, Oslo, 2026-02-06', () => {
  test('reads what compact has and misses what it has not', () => {
    const result = toMetForecast(json('metno_locationforecast_compact_oslo_2026-02-06.json'), Date.parse('2026-02-06T21:20:00Z'));
    const value = result.ok ? result.value : null;
    expect(value?.hours).toHaveLength(52);
    expect(value?.hours[1]).toEqual({
      validAt: '2026-02-06T22:00:00Z', gridElevationM: 5, wind10m: { speedMps: 6.4, fromDeg: 39 }, gustMps: null, temperature2mC: -5.9, dewPoint2mC: null,
      seaLevelPressureHpa: 1014.8, lowCloudPct: null, precipitationMm: 0.7, precipitationProbabilityPct: null, weatherCode: 73,
    });
    const day = forecast('met-norway:locationforecast', value!, { fromUtc: '2026-02-07T00:00:00Z', toUtc: '2026-02-08T00:00:00Z' });
    const missing = missingOn('2026-02-07', day, { latDeg: 59.9139, lonDeg: 10.7522 }, '2026-02-06T21:00:00Z');
    expect(missing).toContain('gustMps');
  });
});

describe.skipIf(!isThere)('NWS grid TAE 58,65, 2022-02-04', () => {
  const read = () => {
    const result = toNwsForecast(json('nws_gridpoints_TAE_2022-02-04.json'));
    if (!result.ok) throw new Error(JSON.stringify(result.error));
    return result.value;
  };

  test('where and when it is from', () => {
    const { hours, ...rest } = read();
    expect(rest).toEqual({ runAt: '2022-02-04T03:15:41Z', latDeg: expect.closeTo(30.01938, 4), lonDeg: expect.closeTo(-84.9803, 4) });
    expect(hours[0]?.validAt).toBe('2022-02-03T21:00:00Z');
    expect(hours).toHaveLength(97);
  });

  const near = (value: number) => expect.closeTo(value, 9) as number;

  test('01 UTC: an interval that began earlier counts, gusts and chances are the larger of the two hours that touch', () => {
    expect(read().hours[4]).toEqual({
      validAt: '2022-02-04T01:00:00Z', gridElevationM: near(3.9624), wind10m: { speedMps: near(14.816 / 3.6), fromDeg: 170 }, gustMps: near(24.076 / 3.6),
      temperature2mC: near(18.88888888888889), dewPoint2mC: near(17.77777777777778), mixedLayerM: near(374.904), precipitationProbabilityPct: 1,
      weatherCode: 2, visibilityM: near(14307.06816),
    });
  });

  test('06 UTC: a chance of thunder in the words is a thunderstorm', () => {
    expect(read().hours[9]).toMatchObject({ validAt: '2022-02-04T06:00:00Z', weatherCode: 95, precipitationProbabilityPct: 20, gustMps: near(24.076 / 3.6) });
    expect(read().hours[8]).toMatchObject({ validAt: '2022-02-04T05:00:00Z', weatherCode: 2 });
  });

  test('layers end at their own time: beyond it the field is missing', () => {
    const { hours } = read();
    expect(hours.find(({ validAt }) => validAt === '2022-02-05T09:00:00Z')?.visibilityM).toBe(15900.31872);
    expect(hours.find(({ validAt }) => validAt === '2022-02-05T10:00:00Z')?.visibilityM).toBeNull();
  });
});

describe.skipIf(!isThere)('Open-Meteo', () => {
  const location = (file: string) => {
    const result = readAnswer(json(file), 1);
    if (!result.ok) throw new Error(JSON.stringify(result.error));
    return result.value[0]!;
  };
  const munich = 'openmeteo_forecast_unixtime_legacynames_munich_2026-02-07.json';

  /** As the adapter would take an answer for a site at its place. */
  const taken = (file: string, changes: object = {}) => {
    const read = { ...location(file), ...changes };
    const entry = entryOf('open-meteo:icon_d2');
    const ask = { ...entry, fromMs: epochOf('2026-02-07T00:00:00Z'), toMs: epochOf('2026-02-08T00:00:00Z') };
    const site = siteAt('munich', read.latDeg ?? 0, read.lonDeg ?? 0);
    return forecastOf(entry, site, { location: read, ask, pressures: () => ({ a: null, b: null }), runAt: '2026-02-06T18:00:00Z', fetchedAt: '2026-02-07T00:00:00Z' });
  };

  test('Munich: unix time, old names, km/h', () => {
    const { columns, ...rest } = location(munich);
    expect(rest).toEqual({ latDeg: 48.14, lonDeg: 11.58, groundM: 524, utcOffsetS: 3600 });
    expect(columns.get('time')).toMatchObject({ unit: 'unixtime' });
    expect([0, 10].map((row) => columns.get('time')?.values[row])).toEqual([1770418800, 1770454800]);
    expect(columns.get('temperature_2m')?.values.slice(10, 12)).toEqual([6.2, 7]);
    expect(columns.get('windspeed_10m')).toMatchObject({ unit: 'km/h' });
    expect(columns.get('windspeed_10m')?.values.slice(0, 3)).toEqual([9.4, 9.5, 9.2]);
    expect(columns.get('winddirection_10m')?.values.slice(10, 12)).toEqual([256, 256]);
  });

  test('Munich: in its own zone it is not what was asked for; in UTC its temperatures are taken and everything else is missing', () => {
    expect(taken(munich)).toEqual({ ok: false, error: { kind: 'times', why: 'not-utc' } });
    const utc = taken(munich, { utcOffsetS: 0 });
    const hour = utc.ok ? utc.value.members[0]?.find(({ validAt }) => validAt === '2026-02-07T09:00:00Z') : null;
    expect(hour).toMatchObject({ gridElevationM: 524, temperature2mC: 6.2, wind10m: { speedMps: null, fromDeg: null }, gustMps: null });
    const site = siteAt('munich', 48.14, 11.58, { elevationM: 560 });
    const day = judge([answer(entryOf('open-meteo:icon_d2'), utc)], { site, localDate: '2026-02-07', issuedAt: '2026-02-07T04:00:00Z' });
    expect(new Set(day.hours.map(({ verdict }) => verdict))).toEqual(new Set(['unknown']));
    const missing = day.hours.flatMap(({ margins }) => margins.flatMap((margin) => margin.missing));
    expect(missing).toEqual(expect.arrayContaining(['wind10m.speedMps', 'gustMps', 'visibilityM', 'precipitationMm']));
    expect(missing).not.toContain('temperature2mC');
  });

  test('New York: local times without offset are refused, its numbers are where they were', () => {
    const { columns, ...rest } = location('openmeteo_forecast_iso_newyork_2026-02-06.json');
    expect(rest).toEqual({ latDeg: 40.78858, lonDeg: -73.9661, groundM: 20, utcOffsetS: -18000 });
    expect(columns.get('time')).toMatchObject({ unit: 'iso8601' });
    expect(columns.get('time')?.values[10]).toBe('2026-02-06T10:00');
    expect(columns.get('wind_speed_10m')?.unit).toBe('km/h');
    expect(columns.get('wind_speed_10m')?.values.slice(10, 14)).toEqual([5.4, 4.7, 5, 1.5]);
    expect(columns.get('temperature_2m')?.values.slice(10, 14)).toEqual([-3.4, -2.4, -1.3, -0.8]);
    expect(taken('openmeteo_forecast_iso_newyork_2026-02-06.json')).toEqual({ ok: false, error: { kind: 'times', why: 'not-utc' } });
  });

  test('two models in one answer: every column has a suffix, no column has a bare name', () => {
    const { columns, ...rest } = location('openmeteo_multimodel_suffix_2023-11-13.json');
    expect(rest).toEqual({ latDeg: 52.52, lonDeg: 13.419998, groundM: 38, utcOffsetS: 0 });
    expect([...columns.keys()]).toEqual(['time', 'weather_code_best_match', 'weather_code_gfs_seamless']);
    expect(columns.get('weather_code_best_match')?.values.slice(0, 3)).toEqual([2, 3, 3]);
    expect(columns.get('weather_code_gfs_seamless')?.values.slice(0, 3)).toEqual([0, 0, 0]);
    expect(taken('openmeteo_multimodel_suffix_2023-11-13.json')).toEqual({ ok: false, error: { kind: 'times', why: 'not-utc' } });
  });
});
