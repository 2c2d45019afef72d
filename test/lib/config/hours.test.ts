import { describe, expect, test } from 'vitest';
import { declaredBy, parseDeclares, parseHours } from '../../../lib/config/hours.ts';
import { CONDITION_FIELDS } from '../../../lib/forecast/conditions.ts';
import { hour, issuesOf, pathsOf, valueOf, type Json } from './fixtures.ts';

const full: Json = {
  ...hour(),
  nearGround: [{ heightAglM: 80, speedMps: 4, fromDeg: 230 }],
  levels: [{ pressureHpa: 850, altitudeM: 1500, speedMps: 6, fromDeg: 220, temperatureC: 4, relativeHumidityPct: 40 }],
  temperature2mC: 9, dewPoint2mC: 4, surfacePressureHpa: 935, seaLevelPressureHpa: 1018, referencePressureHpa: { a: 1019, b: 1017 },
  mixedLayerM: 900, shortwaveWm2: 300, sensibleHeatWm2: 90, capeJkg: 20, precipitationMm: 0, precipitationProbabilityPct: 5, weatherCode: 1,
  visibilityM: 30000, lowCloudPct: 10,
};

function paths(...hours: unknown[]): string[] {
  return pathsOf(parseHours(hours));
}

describe('an hour', () => {
  test('with every field is read as it is', () => {
    expect(valueOf(parseHours([full]))).toEqual([full]);
    expect(Object.keys(full)).toHaveLength(CONDITION_FIELDS.length + 2);
  });

  test('with instant and ground alone is an hour of which nothing is known', () => {
    const bare = { validAt: '2027-05-14T04:00:00Z', gridElevationM: 700 };
    expect(valueOf(parseHours([bare]))).toEqual([bare]);
  });

  test('keeps null, and reads what a wind or level leaves out as null', () => {
    const [read] = valueOf(parseHours([{ ...hour(), gustMps: null, wind10m: { speedMps: 0 }, levels: [{ pressureHpa: 850 }], referencePressureHpa: { a: 1017 } }]));
    expect(read).toMatchObject({
      gustMps: null, wind10m: { speedMps: 0, fromDeg: null }, referencePressureHpa: { a: 1017, b: null },
      levels: [{ pressureHpa: 850, altitudeM: null, speedMps: null, fromDeg: null, temperatureC: null, relativeHumidityPct: null }],
    });
  });

  test.each([
    ['wind10m', { speedMps: 400, fromDeg: 720 }], ['gustMps', -999], ['temperature2mC', 250], ['capeJkg', 9999], ['visibilityM', -1],
    ['weatherCode', 1.5], ['gridElevationM', 99_999], ['precipitationProbabilityPct', 130],
  ])('implausible %s is kept: it is the judge who cannot say', (name, value) => {
    expect(paths({ ...hour(), [name]: value })).toEqual([]);
  });
});

describe('wrong types and unknown keys are errors with their path', () => {
  test.each<[string, unknown, string]>([
    ['gustMps', '15.2', '$[0].gustMps'],
    ['gustMps', '', '$[0].gustMps'],
    ['gustMps', [5], '$[0].gustMps'],
    ['gustMps', true, '$[0].gustMps'],
    ['gustMps', NaN, '$[0].gustMps'],
    ['gustMps', Infinity, '$[0].gustMps'],
    ['wind10m', 4, '$[0].wind10m'],
    ['wind10m', { speedMps: 4, fromDeg: 'W' }, '$[0].wind10m.fromDeg'],
    ['wind10m', { speed: 4 }, '$[0].wind10m.speed'],
    ['gridElevationM', null, '$[0].gridElevationM'],
    ['gridElevationM', undefined, '$[0].gridElevationM'],
    ['levels', {}, '$[0].levels'],
    ['levels', [{ altitudeM: 1500 }], '$[0].levels[0].pressureHpa'],
    ['nearGround', [{ heightM: 80, heightAglM: 80 }], '$[0].nearGround[0].heightM'],
    ['windGustMps', 4, '$[0].windGustMps'],
    ['constructor', {}, '$[0].constructor'],
  ])('%s: %j', (name, value, path) => {
    const json: Json = { ...hour(), [name]: value };
    if (value === undefined) delete json[name];
    expect(paths(json)).toEqual([path]);
  });

  test('did you mean', () => {
    expect(issuesOf(parseHours([{ ...hour(), gust: 4 }]))[0]?.problem).toBe('unknown key; did you mean "gustMps"?');
  });
});

describe('validAt', () => {
  test.each(['2027-05-14T04:00:00Z', '2027-05-14T04:00Z', '2027-05-14T04:00:00.000Z'])('%s is read in one spelling', (validAt) => {
    expect(valueOf(parseHours([hour(validAt)]))[0]?.validAt).toBe('2027-05-14T04:00:00Z');
  });

  test.each([
    '2027-05-14T04:00:00', '2027-05-14T06:00:00+02:00', '2027-05-14T04:30:00Z', '2027-05-14T04:00:01Z', '2027-05-14', '2027-05-14 04:00Z',
    '2027-02-30T04:00:00Z', '2027-05-14T25:00:00Z', '2027-05-14T24:00:00Z', 'noon', '', 1_810_000_000, null,
  ])('%j is refused', (validAt) => {
    expect(paths({ ...hour(), validAt })).toEqual(['$[0].validAt']);
  });
});

describe('hours', () => {
  test('stand in order of time, each once', () => {
    expect(paths(hour('2027-05-14T05:00:00Z'), hour('2027-05-14T04:00:00Z'))).toEqual(['$[1].validAt']);
    expect(paths(hour('2027-05-14T04:00:00Z'), hour('2027-05-14T04:00Z'))).toEqual(['$[1].validAt']);
    expect(paths(hour('2027-05-14T04:00:00Z'), hour('2027-05-14T07:00:00Z'))).toEqual([]);
  });

  test('are at least one and at most 400', () => {
    expect(paths()).toEqual(['$']);
    expect(pathsOf(parseHours(Array.from({ length: 401 }, () => hour())))).toEqual(['$']);
  });

  test.each([[null], [{}], ['x'], [undefined]])('%j are no hours', (json) => {
    expect(pathsOf(parseHours(json, ['hours']))).toEqual(['$.hours']);
  });

  test('report every hour at once', () => {
    expect(pathsOf(parseHours([{ ...hour(), gustMps: 'x' }, 3, { ...hour('2027-05-14T05:00:00Z'), foo: 1 }], ['hours']))).toEqual(['$.hours[0].gustMps', '$.hours[1]', '$.hours[2].foo']);
  });
});

describe('what is declared', () => {
  test('by the sender: known fields, each once, in our order', () => {
    expect(valueOf(parseDeclares(['gustMps', 'wind10m', 'gustMps']))).toEqual(['wind10m', 'gustMps']);
    expect(issuesOf(parseDeclares(['gustMp']))[0]).toMatchObject({ path: '$[0]', problem: 'not one of the words allowed here; did you mean "gustMps"?' });
  });

  test('else every field that has a value in at least one hour', () => {
    const hours = valueOf(parseHours([
      { ...hour('2027-05-14T04:00:00Z'), gustMps: null, levels: [], wind10m: { speedMps: null, fromDeg: null }, capeJkg: null },
      { ...hour('2027-05-14T05:00:00Z'), gustMps: null, levels: null, capeJkg: 0, referencePressureHpa: { a: null, b: 1013 } },
    ]));
    expect(declaredBy(hours)).toEqual(['wind10m', 'referencePressureHpa', 'capeJkg']);
  });
});
