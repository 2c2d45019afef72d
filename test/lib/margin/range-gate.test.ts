// The gate that every forecast number passes: the plausible ranges of the data page, written out again, each tried on both
// of its ends and just outside them, and what the gate makes of pairs, rows and heights.
import { describe, expect, test } from 'vitest';
import type { Conditions, Level } from '../../../lib/forecast/conditions.ts';
import { checkHour, plausible, PLAUSIBLE, type PlausibleKey } from '../../../lib/forecast/ranges.ts';
import { geometricM, geopotentialM, pressureAltitudeM, standardAir } from '../../../lib/air/standard-atmosphere.ts';

/** Data shapes, "Plausible ranges". */
const PAGE: Readonly<Record<PlausibleKey, readonly [number, number]>> = {
  windMps: [0, 75], gustMps: [0, 100], directionDeg: [0, 360], temperatureC: [-60, 55], pressureHpa: [400, 1085], seaLevelPressureHpa: [870, 1085],
  capeJkg: [0, 8000], precipitationMm: [0, 150], percent: [0, 100], visibilityM: [0, 300_000], mixedLayerM: [0, 6000], radiationWm2: [-5, 1400],
  heatFluxWm2: [-400, 800], weatherCode: [0, 99], elevationM: [-500, 9000],
};

test('the ranges are those of the page', () => {
  expect(PLAUSIBLE).toEqual(PAGE);
});

test.each(Object.entries(PAGE))('%s: both ends are in, just outside is not, and nothing but a number ever is', (key, [low, high]) => {
  const name = key as PlausibleKey;
  expect(plausible(low, name)).toBe(low);
  expect(plausible(high, name)).toBe(high);
  for (const odd of [low - 0.001, high + 0.001, NaN, Infinity, -Infinity, null, undefined, String(low), [low], true, {}]) expect(plausible(odd, name)).toBeNaN();
});

const AT = '2027-05-14T10:00:00Z';
const GROUND_M = 800;

function checked(changes: Partial<Record<keyof Conditions, unknown>> = {}) {
  return checkHour({ validAt: AT, gridElevationM: GROUND_M, ...changes } as Conditions);
}

/** Fields that are one number each, with the range they are held to. */
const FIELDS = {
  gustMps: 'gustMps', temperature2mC: 'temperatureC', seaLevelPressureHpa: 'seaLevelPressureHpa', mixedLayerM: 'mixedLayerM', shortwaveWm2: 'radiationWm2',
  sensibleHeatWm2: 'heatFluxWm2', capeJkg: 'capeJkg', precipitationMm: 'precipitationMm', precipitationProbabilityPct: 'percent', weatherCode: 'weatherCode',
  visibilityM: 'visibilityM', lowCloudPct: 'percent',
} as const satisfies Partial<Record<keyof Conditions, PlausibleKey>>;

describe('fields of one number', () => {
  test.each(Object.entries(FIELDS))('%s keeps its ends and loses what is outside', (field, range) => {
    const name = field as keyof typeof FIELDS;
    const [low, high] = PAGE[range];
    for (const value of [low, high]) expect(checked({ [name]: value })[name]).toBe(value);
    for (const value of [low - 1, high + 1, null, undefined, String(low)]) expect(checked({ [name]: value })[name]).toBeNaN();
  });

  test('an hour without anything is an hour of unknowns', () => {
    const hour = checked();
    expect(hour.validAtMs).toBe(Date.parse(AT));
    expect(hour).toMatchObject({ gridElevationM: GROUND_M, nearGround: [], levels: [], gustRaised: false });
    const numbers = [hour.wind10m.speedMps, hour.wind10m.fromDeg, hour.dewPoint2mC, hour.surfacePressureHpa, hour.referencePressureHpa.a, hour.referencePressureHpa.b];
    for (const value of [...numbers, ...Object.keys(FIELDS).map((field) => hour[field as keyof typeof FIELDS])]) expect(value).toBeNaN();
  });

  test('a weather code is a whole number of the table', () => {
    expect(checked({ weatherCode: 95 }).weatherCode).toBe(95);
    expect(checked({ weatherCode: 95.5 }).weatherCode).toBeNaN();
  });

  test('each reference pressure on its own', () => {
    expect(checked({ referencePressureHpa: { a: 1015, b: 869 } }).referencePressureHpa).toEqual({ a: 1015, b: NaN });
    expect(checked({ referencePressureHpa: { a: 1086, b: 1012 } }).referencePressureHpa).toEqual({ a: NaN, b: 1012 });
    expect(checked({ referencePressureHpa: null }).referencePressureHpa).toEqual({ a: NaN, b: NaN });
  });
});

describe('wind and gust', () => {
  test('a wind is a speed and a direction, each on its own', () => {
    expect(checked({ wind10m: { speedMps: 75, fromDeg: 360 } }).wind10m).toEqual({ speedMps: 75, fromDeg: 360 });
    expect(checked({ wind10m: { speedMps: 76, fromDeg: 20 } }).wind10m).toEqual({ speedMps: NaN, fromDeg: 20 });
    expect(checked({ wind10m: { speedMps: 3, fromDeg: 361 } }).wind10m).toEqual({ speedMps: 3, fromDeg: NaN });
    expect(checked({ wind10m: { speedMps: 0.1, fromDeg: null } }).wind10m).toEqual({ speedMps: 0.1, fromDeg: NaN });
    for (const wind10m of [null, undefined]) expect(checked({ wind10m }).wind10m).toEqual({ speedMps: NaN, fromDeg: NaN });
  });

  test.each([
    [5, 7, 7, false], [5, 5, 5, false], [5, 4.5, 5, true], [5, 4, 5, true], [5, 3.99, NaN, false],
  ] as const)('mean %d with gust %d: %d, raised %s', (speedMps, gustMps, expected, raised) => {
    const hour = checked({ wind10m: { speedMps, fromDeg: 200 }, gustMps });
    expect(hour.gustMps).toEqual(expected);
    expect(hour.gustRaised).toBe(raised);
  });

  test('a gust without its mean stays what it is', () => {
    expect(checked({ gustMps: 6 })).toMatchObject({ gustMps: 6, gustRaised: false });
  });
});

describe('dew point and pressure', () => {
  test('a dew point may stand half a kelvin above the temperature, by rounding, and no more', () => {
    expect(checked({ temperature2mC: 10, dewPoint2mC: 10.5 }).dewPoint2mC).toBe(10.5);
    expect(checked({ temperature2mC: 10, dewPoint2mC: 10.51 }).dewPoint2mC).toBeNaN();
    expect(checked({ dewPoint2mC: 4 }).dewPoint2mC).toBe(4);
    expect(checked({ temperature2mC: 10, dewPoint2mC: -61 }).dewPoint2mC).toBeNaN();
  });

  test('a surface pressure lies within 60 hPa of the standard at the ground of the model', () => {
    const standardHpa = standardAir(799.9).pressurePa / 100;
    expect(checked({ surfacePressureHpa: standardHpa + 59.98 }).surfacePressureHpa).toBeCloseTo(standardHpa + 59.98, 9);
    expect(checked({ surfacePressureHpa: standardHpa - 59.98 }).surfacePressureHpa).toBeCloseTo(standardHpa - 59.98, 9);
    expect(checked({ surfacePressureHpa: standardHpa + 60.02 }).surfacePressureHpa).toBeNaN();
    expect(checked({ surfacePressureHpa: standardHpa - 60.02 }).surfacePressureHpa).toBeNaN();
    expect(checked({ surfacePressureHpa: '900' }).surfacePressureHpa).toBeNaN();
    // Exactly 60 is allowed, at a ground where adding it leaves no rounding.
    const exact = [0, 100, 500, 800, 1000, 1500].map((gridElevationM) => ({ gridElevationM, hpa: standardAir(geopotentialM(gridElevationM)).pressurePa / 100 })).find(({ hpa }) => hpa + 60 - hpa === 60)!;
    expect(checked({ gridElevationM: exact.gridElevationM, surfacePressureHpa: exact.hpa + 60 }).surfacePressureHpa).toBe(exact.hpa + 60);
    // Out of range however near the standard: no ground is that high.
    expect(checked({ gridElevationM: 8900, surfacePressureHpa: 390 }).surfacePressureHpa).toBeNaN();
    expect(checked({ gridElevationM: 9001, surfacePressureHpa: 900 })).toMatchObject({ gridElevationM: NaN, surfacePressureHpa: NaN });
  });
});

describe('near-ground winds', () => {
  const row = (heightAglM: unknown, speedMps: unknown = 4) => ({ heightAglM, speedMps, fromDeg: 250 });
  const heights = (rows: readonly unknown[]) => checked({ nearGround: rows }).nearGround.map(({ heightAglM }) => heightAglM);

  test('rise, each height once, above ten metres and up to a kilometre', () => {
    expect(heights([row(180), row(80), row(120)])).toEqual([80, 120, 180]);
    expect(heights([row(10), row(10.5), row(1000), row(1001), row(NaN), row('80'), row(null)])).toEqual([10.5, 1000]);
    expect(heights([row(80), row(120), row(80)])).toEqual([80, 120]);
    for (const none of [null, undefined, []]) expect(checked({ nearGround: none }).nearGround).toEqual([]);
  });

  test('keep the first of two at one height, and their place where a wind is missing', () => {
    expect(checked({ nearGround: [row(80, 3), row(80, 9)] }).nearGround).toEqual([row(80, 3)]);
    expect(checked({ nearGround: [row(80, null), row(120)] }).nearGround).toEqual([row(80, NaN), row(120)]);
  });
});

describe('pressure levels', () => {
  const standardM = (hpa: number) => geometricM(pressureAltitudeM(100 * hpa));
  const level = (pressureHpa: number, changes: Partial<Record<keyof Level, unknown>> = {}) => ({ pressureHpa, altitudeM: standardM(pressureHpa), speedMps: 6, fromDeg: 250, temperatureC: 4, relativeHumidityPct: 50, ...changes });
  const levelsOf = (rows: readonly unknown[]) => checked({ levels: rows }).levels;
  const hole = (pressureHpa: number, altitudeM: number) => ({ pressureHpa, altitudeM, speedMps: NaN, fromDeg: NaN, temperatureC: NaN, relativeHumidityPct: NaN });

  test('come lowest first, whatever order they are given in', () => {
    expect(levelsOf([level(700), level(900), level(800)]).map(({ pressureHpa }) => pressureHpa)).toEqual([900, 800, 700]);
    for (const none of [null, undefined, []]) expect(levelsOf(none as never)).toEqual([]);
  });

  test('one whose pressure is none is no level', () => {
    expect(levelsOf([level(900), level(399, { altitudeM: 7200 }), level(1086, { altitudeM: -500 }), level(NaN), { ...level(850), pressureHpa: '850' }]).map(({ pressureHpa }) => pressureHpa)).toEqual([900]);
    expect(levelsOf([level(400), level(1085)]).map(({ pressureHpa }) => pressureHpa)).toEqual([1085, 400]);
  });

  test('each value on its own', () => {
    expect(levelsOf([level(900, { speedMps: 80, temperatureC: -61, relativeHumidityPct: 101, fromDeg: -1 })])[0]).toMatchObject({ speedMps: NaN, temperatureC: NaN, relativeHumidityPct: NaN, fromDeg: NaN });
    expect(levelsOf([level(900)])[0]).toEqual(level(900));
  });

  test('a height up to 900 m off the standard is one', () => {
    expect(levelsOf([level(800, { altitudeM: standardM(800) + 899 })])[0]!.speedMps).toBe(6);
    expect(levelsOf([level(800, { altitudeM: standardM(800) - 899 })])[0]!.speedMps).toBe(6);
  });

  test.each([['too high', 901], ['too low', -901]])('one %s by a metre is a hole as high as it could be', (_, offM) => {
    expect(levelsOf([level(800, { altitudeM: standardM(800) + offM })])).toEqual([hole(800, standardM(800) + 900)]);
  });

  test('exactly 900 m off still counts', () => {
    // A height without rounding: the bound itself.
    const altitudeM = standardM(800) + 900;
    expect(Math.abs(altitudeM - standardM(800))).toBe(900);
    expect(levelsOf([level(800, { altitudeM })])[0]!.speedMps).toBe(6);
  });

  test('a hole lies under the next level that is known', () => {
    const [low, lost, high] = [level(900), level(800, { altitudeM: null }), level(750)];
    expect(levelsOf([low, lost, high])).toEqual([low, hole(800, standardM(750) - 1), high]);
    expect(levelsOf([low, level(800, { altitudeM: '1949' }), level(750, { altitudeM: undefined })])).toEqual([low, hole(800, standardM(800) + 900), hole(750, standardM(750) + 900)]);
  });

  test('two that do not rise both lose their height and their values', () => {
    const crossed = [level(900), level(850, { altitudeM: standardM(800) + 10 }), level(800), level(700)];
    expect(levelsOf(crossed)).toEqual([level(900), hole(850, standardM(850) + 900), hole(800, standardM(800) + 900), level(700)]);
    const equal = [level(850, { altitudeM: 1700 }), level(800, { altitudeM: 1700 })];
    expect(levelsOf(equal).map(({ speedMps }) => speedMps)).toEqual([NaN, NaN]);
  });

  test('one too high loses against every level it stands above', () => {
    const high = [level(900, { altitudeM: standardM(900) + 890 }), level(850), level(800), level(700)];
    expect(levelsOf(high).map(({ speedMps }) => speedMps)).toEqual([NaN, NaN, 6, 6]);
    const higher = [level(900, { altitudeM: 1880 }), level(850), level(800, { altitudeM: 1800 }), level(700)];
    expect(levelsOf(higher).map(({ speedMps }) => speedMps)).toEqual([NaN, NaN, NaN, 6]);
  });
});
