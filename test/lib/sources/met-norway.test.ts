// MET Norway's answers: by hand, and what is wrong with them.
import { describe, expect, test } from 'vitest';
import { metNorway } from '../../support/forecast-server/met-norway.ts';
import { metNorwayFaults } from '../../support/forecast-server/payload-faults.ts';
import { weatherCodeOf } from '../../../worker/sources/met-norway/symbols.ts';
import { toMetForecast } from '../../../worker/sources/met-norway/to-forecast.ts';

const entry = (time: string, wind: number, gust: number, rain: number | null, symbol = 'fair_day') => ({
  time,
  data: {
    instant: { details: { wind_speed: wind, wind_from_direction: 350.5, wind_speed_of_gust: gust, air_temperature: 7.1, dew_point_temperature: 2.2, air_pressure_at_sea_level: 1012.4, cloud_area_fraction_low: 12.5 } },
    ...(rain === null ? {} : { next_1_hours: { summary: { symbol_code: symbol }, details: { precipitation_amount: rain, probability_of_precipitation: 10 * rain } } }),
    next_6_hours: { summary: { symbol_code: 'rainandthunder' }, details: { precipitation_amount: 99 } },
  },
});

const units = {
  wind_speed: 'm/s', wind_from_direction: 'degrees', wind_speed_of_gust: 'm/s', air_temperature: 'celsius', dew_point_temperature: 'celsius',
  air_pressure_at_sea_level: 'hPa', cloud_area_fraction_low: '%', precipitation_amount: 'mm', probability_of_precipitation: '%',
};

function answer(series: unknown[]) {
  return { type: 'Feature', geometry: { type: 'Point', coordinates: [9.1, 60.1, 640] }, properties: { meta: { updated_at: '2027-05-14T01:20:05Z', units }, timeseries: series } };
}

const nowMs = Date.parse('2027-05-14T02:40:00Z');

const byHand = () =>
  answer([
    entry('2027-05-14T03:00:00Z', 1.5, 3, 0),
    entry('2027-05-14T04:00:00Z', 2.5, 4.5, 1, 'lightrainshowers_day'),
    entry('2027-05-14T05:00:00Z', 3, 4, 0.5, 'heavyrainandthunder_polartwilight'),
    entry('2027-05-14T06:00:00Z', 2, 6, null),
    entry('2027-05-14T12:00:00Z', 2, 3, null),
  ]);

test('every number lands where it belongs; where steps are six hours long there is no hour', () => {
  const read = toMetForecast(byHand(), nowMs);
  const common = { gridElevationM: 640, temperature2mC: 7.1, dewPoint2mC: 2.2, seaLevelPressureHpa: 1012.4, lowCloudPct: 12.5 };
  const wind = (speedMps: number) => ({ speedMps, fromDeg: 350.5 });
  expect(read).toEqual({
    ok: true,
    value: {
      runAt: '2027-05-14T01:20:05Z', latDeg: 60.1, lonDeg: 9.1,
      hours: [
        { ...common, validAt: '2027-05-14T03:00:00Z', wind10m: wind(1.5), gustMps: 4.5, precipitationMm: null, precipitationProbabilityPct: null, weatherCode: null },
        { ...common, validAt: '2027-05-14T04:00:00Z', wind10m: wind(2.5), gustMps: 4.5, precipitationMm: 1, precipitationProbabilityPct: 10, weatherCode: 80 },
        { ...common, validAt: '2027-05-14T05:00:00Z', wind10m: wind(3), gustMps: 6, precipitationMm: 1, precipitationProbabilityPct: 10, weatherCode: 95 },
        { ...common, validAt: '2027-05-14T06:00:00Z', wind10m: wind(2), gustMps: null, precipitationMm: null, precipitationProbabilityPct: null, weatherCode: null },
      ],
    },
  });
});

test('an hour missing in the middle costs the amounts of its neighbours, not the rest', () => {
  const series = byHand().properties.timeseries;
  const read = toMetForecast(answer([series[0], series[2], series[3]]), nowMs);
  expect(read.ok && read.value.hours.map((hour) => [hour.validAt.slice(11, 13), hour.precipitationMm, hour.wind10m?.speedMps])).toEqual([['03', null, 1.5], ['05', null, 3], ['06', null, 2]]);
});

// The service's series begins with the hour of the question (recorded answers, reference/forecast-sources, 2).
test.each([
  ['when it is under way: what is to come of it counts', '03:00', 0], ['at its last minute', '03:59', 0],
  ['when it lies ahead: the hour before it is missing', '02:59', null], ['when it is over: the answer is not of this hour', '04:00', null],
])('the first hour, %s', (_, clock, amountMm) => {
  const read = toMetForecast(byHand(), Date.parse(`2027-05-14T${clock}:00Z`));
  const [first, second] = read.ok ? read.value.hours : [];
  expect([first?.precipitationMm, first?.precipitationProbabilityPct === null]).toEqual([amountMm, amountMm === null]);
  expect(second?.precipitationMm).toBe(1);
});

describe('symbols', () => {
  test.each([
    ['clearsky_day', 0], ['fair_night', 1], ['partlycloudy_polartwilight', 2], ['cloudy', 3], ['fog', 45], ['rain', 63], ['heavysnowshowers_day', 86],
    ['rainandthunder', 95], ['lightssleetshowersandthunder_day', 95], ['lightssnowshowersandthunder_night', 95], ['heavysleetshowersandthunder_day', 95],
    ['hail', null], ['constructor', null], ['__proto__', null], ['clearsky_noon', null], ['andthunder', null], ['', null], [null, null], [95, null],
  ])('%s is %s', (symbol, code) => {
    expect(weatherCodeOf(symbol)).toBe(code);
  });
});

describe('faults of content', () => {
  const spoilt = (fault: string) => {
    const clean = metNorway({ latDeg: 60.1, lonDeg: 9.1 }, nowMs, { groundAtM: () => 640 });
    metNorwayFaults[fault]?.(clean);
    return toMetForecast(clean, nowMs);
  };

  test('clean, it has 56 hours', () => {
    const read = spoilt('clean');
    expect(read.ok && read.value.hours).toHaveLength(56);
  });

  test.each([
    ['kmh', { kind: 'unit', field: 'wind_speed', expected: 'm/s', found: 'other' }],
    ['no-units', { kind: 'unit', field: 'wind_speed', expected: 'm/s', found: null }],
    ['local-times', { kind: 'times', why: 'not-utc' }],
    ['unsorted', { kind: 'times', why: 'unsorted' }],
    ['no-elevation', { kind: 'ground', why: 'missing', byM: null }],
    ['no-series', { kind: 'times', why: 'empty' }],
  ])('%s costs the frame', (fault, error) => {
    expect(spoilt(fault)).toEqual({ ok: false, error });
  });

  test.each(['strings', 'sentinels', 'all-null', 'no-wind'])('%s costs the wind', (fault) => {
    const read = spoilt(fault);
    expect(read.ok && read.value.hours.every((hour) => hour.wind10m?.speedMps === null)).toBe(true);
  });

  test('a text for a symbol is missing, a thunder symbol is thunder', () => {
    const codes = (fault: string) => {
      const read = spoilt(fault);
      return read.ok ? new Set(read.value.hours.slice(1, -1).map((hour) => hour.weatherCode)) : null;
    };
    expect(codes('odd-symbol')).toEqual(new Set([null]));
    expect(codes('thunder')).toEqual(new Set([95]));
  });

  test.each(['x', null, 5, [], {}, { properties: { timeseries: {} } }, { properties: { timeseries: [5, null, 'x'] }, geometry: { coordinates: [1, 2, 3] } }])('%j is refused', (json) => {
    expect(toMetForecast(json, nowMs).ok).toBe(false);
  });
});
