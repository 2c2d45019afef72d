// The US grid: layers by hand, and what is wrong with them.
import { describe, expect, test } from 'vitest';
import { gridAnswer, type NwsAnswer } from '../../support/forecast-server/nws.ts';
import { nwsFaults } from '../../support/forecast-server/payload-faults.ts';
import { intervalsOf, numbersOf, valueAt } from '../../../worker/sources/nws/layers.ts';
import { toNwsForecast } from '../../../worker/sources/nws/to-forecast.ts';
import { weatherCodeOf } from '../../../worker/sources/nws/weather.ts';

const at = (iso: string) => Date.parse(iso);
const layer = (uom: string | undefined, ...values: [string, unknown][]) => ({ ...(uom === undefined ? {} : { uom }), values: values.map(([validTime, value]) => ({ validTime, value })) });

describe('intervals', () => {
  const three = layer('wmoUnit:m', ['2027-05-14T03:00:00+00:00/PT2H', 1], ['2027-05-14T05:00:00+00:00/P1DT1H', 2], ['2027-05-15T06:00:00+00:00/PT1H', null]);

  test('hold from their beginning up to, not including, their end', () => {
    const intervals = intervalsOf(three);
    const values = ['02:59', '03:00', '04:59', '05:00'].map((clock) => valueAt(intervals, at(`2027-05-14T${clock}Z`)));
    expect(values).toEqual([undefined, 1, 1, 2]);
    expect(['05:59', '06:00', '07:00'].map((clock) => valueAt(intervals, at(`2027-05-15T${clock}Z`)))).toEqual([2, null, undefined]);
  });

  test('may leave gaps', () => {
    const gap = intervalsOf(layer('', ['2027-05-14T03:00:00+00:00/PT1H', 1], ['2027-05-14T05:00:00+00:00/PT1H', 2]));
    expect(valueAt(gap, at('2027-05-14T04:00Z'))).toBeUndefined();
  });

  test.each([
    ['a month', ['2027-05-14T03:00:00+00:00/P1M', 1]], ['minutes', ['2027-05-14T03:00:00+00:00/PT30M', 1]], ['nothing', ['2027-05-14T03:00:00+00:00/P', 1]],
    ['no offset', ['2027-05-14T03:00:00/PT1H', 1]], ['half past', ['2027-05-14T03:30:00+00:00/PT1H', 1]], ['no duration', ['2027-05-14T03:00:00+00:00', 1]],
    ['two durations', ['2027-05-14T03:00:00+00:00/PT1H/PT1H', 1]], ['no text', [5, 1]],
  ] as [string, [string, unknown]][])('with %s the whole layer is left out', (_, value) => {
    expect(intervalsOf(layer('wmoUnit:m', ['2027-05-14T02:00:00+00:00/PT1H', 1], value))).toBeNull();
  });

  test('over one another or out of order the layer is left out', () => {
    expect(intervalsOf(layer('', ['2027-05-14T03:00:00+00:00/PT2H', 1], ['2027-05-14T04:00:00+00:00/PT1H', 2]))).toBeNull();
    expect(intervalsOf(layer('', ['2027-05-14T05:00:00+00:00/PT1H', 1], ['2027-05-14T04:00:00+00:00/PT1H', 2]))).toBeNull();
  });
});

describe('units by code', () => {
  const speed = (uom: string | undefined) => {
    const read = numbersOf({ windSpeed: layer(uom, ['2027-05-14T03:00:00+00:00/PT1H', 18]) }, 'windSpeed', 'speed');
    return read.ok ? read.value(at('2027-05-14T03:00Z')) : read.error;
  };

  test.each([['wmoUnit:km_h-1', 5], ['unit:km_h-1', 5], ['km_h-1', 5], ['wmoUnit:m_s-1', 18], ['wmoUnit:kt', 9.26]])('%s', (uom, mps) => {
    expect(speed(uom)).toBeCloseTo(mps, 9);
  });

  test.each([['wmoUnit:mi_h-1', 'other'], ['wmoUnit:degC', 'other'], ['__proto__', 'other'], [undefined, null]])('%s is a fault', (uom, found) => {
    expect(speed(uom)).toEqual({ kind: 'unit', field: 'windSpeed', expected: 'wmoUnit:km_h-1', found });
  });

  test('a layer without values needs no unit', () => {
    const read = numbersOf({ pressure: { values: [] } }, 'pressure', 'length');
    expect(read.ok && read.value(0)).toBeNull();
  });
});

describe('weather words', () => {
  const say = (...words: (string | null)[]) => weatherCodeOf(words.map((weather) => ({ coverage: 'slight_chance', weather, intensity: null })));
  test.each([
    [[null], 2], [['rain'], 63], [['rain_showers', 'thunderstorms'], 95], [['thunderstorms', 'frogs'], 95], [['patchy', 'fog'], null], [['fog', 'rain_showers'], 81], [['toString'], null],
  ])('%j is %s', (words, code) => {
    expect(say(...words)).toBe(code);
  });
  test.each([null, [], 'rain', [5]])('%j is missing', (value) => {
    expect(weatherCodeOf(value)).toBeNull();
  });
});

test('every number lands where it belongs', () => {
  const hour = (from: string, hours: number, value: unknown): [string, unknown] => [`2027-05-14T${from}:00:00+00:00/PT${hours}H`, value];
  const clear = [{ weather: null }];
  const read = toNwsForecast({
    geometry: { type: 'Polygon', coordinates: [[[-111, 40], [-111, 41], [-110, 41], [-110, 40], [-111, 40]]] },
    properties: {
      updateTime: '2027-05-14T03:15:41+00:00', elevation: { unitCode: 'wmoUnit:m', value: 1400.5 },
      windSpeed: layer('wmoUnit:km_h-1', hour('04', 2, 9), hour('06', 1, 18)), windDirection: layer('wmoUnit:degree_(angle)', hour('04', 3, 360)),
      windGust: layer('wmoUnit:km_h-1', hour('03', 1, 36), hour('04', 1, 18), hour('05', 1, 27), hour('06', 1, 18)),
      temperature: layer('wmoUnit:degC', hour('04', 3, 10.5)), dewpoint: layer('wmoUnit:degC', hour('04', 3, 2)), mixingHeight: layer('wmoUnit:m', hour('04', 1, 300), hour('05', 2, 640)),
      probabilityOfPrecipitation: layer('wmoUnit:percent', hour('00', 6, 20), hour('06', 6, 5)), visibility: layer('wmoUnit:m', hour('04', 3, 16093.44)),
      weather: { values: [{ validTime: '2027-05-14T03:00:00+00:00/PT3H', value: clear }, { validTime: '2027-05-14T06:00:00+00:00/PT6H', value: [{ weather: 'thunderstorms' }] }] },
      quantitativePrecipitation: layer('wmoUnit:mm', hour('00', 6, 3)),
    },
  });
  const common = { gridElevationM: 1400.5, temperature2mC: 10.5, dewPoint2mC: 2, visibilityM: 16093.44, precipitationProbabilityPct: 20 };
  expect(read).toEqual({
    ok: true,
    value: {
      runAt: '2027-05-14T03:15:41Z', latDeg: 40.5, lonDeg: -110.5,
      hours: [
        { ...common, validAt: '2027-05-14T04:00:00Z', wind10m: { speedMps: 2.5, fromDeg: 0 }, gustMps: 10, mixedLayerM: 300, weatherCode: 2 },
        { ...common, validAt: '2027-05-14T05:00:00Z', wind10m: { speedMps: 2.5, fromDeg: 0 }, gustMps: 7.5, mixedLayerM: 640, weatherCode: 2 },
        { ...common, validAt: '2027-05-14T06:00:00Z', wind10m: { speedMps: 5, fromDeg: 0 }, gustMps: 7.5, mixedLayerM: 640, weatherCode: 95 },
      ],
    },
  });
});

describe('faults of content', () => {
  const spoilt = (fault: string) => {
    const clean: NwsAnswer = gridAnswer(2720, 5208, at('2027-05-14T02:40Z'), { groundAtM: () => 1400 });
    nwsFaults[fault]?.(clean);
    return toNwsForecast(clean);
  };

  test.each([
    ['odd-unit', { kind: 'unit', field: 'windSpeed', expected: 'wmoUnit:km_h-1', found: 'other' }],
    ['unit-missing', { kind: 'unit', field: 'windSpeed', expected: 'wmoUnit:km_h-1', found: null }],
    ['odd-durations', { kind: 'shape', path: '$.properties.windSpeed' }],
    ['overlapping', { kind: 'shape', path: '$.properties.windSpeed' }],
    ['no-elevation', { kind: 'ground', why: 'missing', byM: null }],
    ['elevation-in-feet', { kind: 'ground', why: 'missing', byM: null }],
  ])('%s costs the frame', (fault, error) => {
    expect(spoilt(fault)).toEqual({ ok: false, error });
  });

  test.each(['strings', 'sentinels'])('%s cost the wind', (fault) => {
    const read = spoilt(fault);
    expect(read.ok && read.value.hours.every((hour) => hour.wind10m?.speedMps === null && hour.gustMps === null)).toBe(true);
  });

  test('an empty layer costs its field only; without a run time the frame says so later', () => {
    const gusts = spoilt('empty-gusts');
    expect(gusts.ok && gusts.value.hours.every((hour) => hour.gustMps === null && hour.wind10m?.speedMps !== null)).toBe(true);
    const run = spoilt('no-run');
    expect(run.ok && run.value.runAt).toBeNull();
  });

  test.each(['x', null, 5, [], {}, { properties: {} }, { properties: { windSpeed: 5 } }])('%j is refused', (json) => {
    expect(toNwsForecast(json).ok).toBe(false);
  });
});
