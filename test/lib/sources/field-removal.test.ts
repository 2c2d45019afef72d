// Take one field out of a clean payload: exactly the margins that need it, on a launch and on a strip held to every limit
// there is, become unknown in every hour, and no other. The expectations are written from the flight model for this
// geometry: the launch lies 160 m above the model's ground, the near-ground wind (80 m) below it and 850 hPa (1500 m) above
// it are the nodes it lies between, the glide ends between the 10 m and the 80 m wind; the tow reaches 850 hPa.
import { afterAll, describe, expect, test } from 'vitest';
import type { ConditionField } from '../../../lib/forecast/conditions.ts';
import type { MarginId } from '../../../lib/margin/ids.ts';
import type { LimitSheet } from '../../../lib/margin/sheet.ts';
import type { LaunchSite, Site, StripSite } from '../../../lib/site.ts';
import { answer, cleanLocation, entryOf, judge, read, sheets, site, textOf } from './pipeline.ts';

const entry = entryOf('open-meteo:gfs_global');
const pressureStep = { a: { name: 'north', lonDeg: 11, latDeg: 48 }, b: { name: 'south', lonDeg: 11, latDeg: 46 } };
const sectors = [{ fromDeg: 180, toDeg: 320, maxMps: 12, why: 'trees' }];
const launch: Site = { ...(site as LaunchSite), pressureStep, sectors };
const { facingDeg: _1, slopeDeg: _2, hill: _3, summitElevationM: _4, landing: _5, trackDeg: _6, distanceM: _7, ...common } = launch as LaunchSite;
const strip: StripSite = {
  ...common, kind: 'strip', elevationM: 1190, headingDeg: 250, usableBothWays: true, lineLengthM: 800, roughnessM: 0.03, lineTensionRatio: 0.8, releaseAngleDeg: 70, lineClearM: null,
};

/** Every limit that any sheet of the kind has. */
function fullest(kind: 'launch' | 'strip'): LimitSheet {
  const ofKind = sheets.filter((sheet) => sheet.kind === kind);
  return { ...ofKind[0]!, limits: Object.assign({}, ...ofKind.map(({ limits }) => limits)) as LimitSheet['limits'] };
}

const everyColumn: Readonly<Partial<Record<ConditionField, RegExp>>> = {
  wind10m: /^wind_(speed|direction)_10m$/, gustMps: /^wind_gusts/, nearGround: /^wind_(speed|direction)_80m$/, levels: /hPa$/, temperature2mC: /^temperature_2m$/,
  dewPoint2mC: /^dew_point/, surfacePressureHpa: /^surface_pressure$/, seaLevelPressureHpa: /^pressure_msl$/, mixedLayerM: /^boundary_layer/, shortwaveWm2: /^shortwave/,
  capeJkg: /^cape$/, precipitationMm: /^precipitation$/, precipitationProbabilityPct: /^precipitation_probability$/, weatherCode: /^weather_code$/, visibilityM: /^visibility$/, lowCloudPct: /^cloud_cover_low$/,
};

const launchWind: MarginId[] = ['meanWind', 'gust', 'gustSpread', 'crosswind', 'tailwind', 'offAxis', 'forwardLaunch', 'run', 'sector', 'ridgeLift'];
const groundAir: MarginId[] = ['arrival', 'landingGradient', 'thermal'];
const tow: MarginId[] = ['climbShear', 'towHeight', 'forwardAtRelease', 'cloudBase'];

const expected: Readonly<Record<'launch' | 'strip', Partial<Record<ConditionField | 'referencePressureHpa', readonly MarginId[]>>>> = {
  launch: {
    wind10m: [...launchWind, 'landingGradient'],
    gustMps: ['gust', 'gustSpread', 'crosswind', 'tailwind', 'forwardLaunch', 'landingGradient'],
    nearGround: [...launchWind, 'forwardAloft', 'upperWind', 'overTheBack', 'arrival'],
    levels: [...launchWind, 'forwardAloft', 'upperWind', 'overTheBack', 'arrival', 'landingGradient', 'cloudBase'],
    temperature2mC: groundAir, dewPoint2mC: groundAir, surfacePressureHpa: groundAir,
    seaLevelPressureHpa: [], lowCloudPct: [],
    mixedLayerM: ['thermal', 'arrival'], shortwaveWm2: ['thermal', 'arrival'],
    capeJkg: ['storm'], weatherCode: ['storm'], precipitationMm: ['rain'], precipitationProbabilityPct: ['rainChance'], visibilityM: ['visibility'], referencePressureHpa: ['pressureStep'],
  },
  strip: {
    wind10m: ['stripWind', 'stripGust', 'gustSpread', 'stripCross', 'stripTail', 'offAxis', 'landingGradient', 'sector', ...tow],
    gustMps: ['stripGust', 'gustSpread', 'stripCross', 'stripTail', 'landingGradient'],
    nearGround: tow,
    levels: tow,
    temperature2mC: [...tow, 'landingGradient', 'thermal'], dewPoint2mC: [...tow, 'landingGradient', 'thermal'], surfacePressureHpa: [...tow, 'landingGradient', 'thermal'],
    seaLevelPressureHpa: [], lowCloudPct: [],
    mixedLayerM: ['thermal'], shortwaveWm2: ['thermal'],
    capeJkg: ['storm'], weatherCode: ['storm'], precipitationMm: ['rain'], precipitationProbabilityPct: ['rainChance'], visibilityM: ['visibility'], referencePressureHpa: ['pressureStep'],
  },
};

function dayWithout(place: Site, field: ConditionField | null) {
  const location = cleanLocation(entry, place);
  const columns = field === null ? undefined : everyColumn[field];
  for (const name of Object.keys(location.hourly)) {
    if (columns?.test(name)) {
      delete location.hourly[name];
      delete location.hourly_units[name];
    }
  }
  const pressures = field === 'referencePressureHpa' ? { a: null, b: null } : { a: 1016, b: 1017 };
  return judge([answer(entry, read(textOf(location), entry, { site: place, pressures }))], { site: place, sheet: fullest(place.kind) });
}

const printed: string[] = [];

describe.each([['launch', launch], ['strip', strip]] as const)('on a %s', (kind, place) => {
  const clean = dayWithout(place, null);
  const ids = new Set(clean.hours.flatMap(({ margins }) => margins.map(({ id }) => id)));

  test('clean, every margin is known in every hour, and every margin of the kind is judged', () => {
    expect(clean.hours.flatMap(({ margins }) => margins.filter(({ status }) => status === 'unknown').map(({ id }) => id))).toEqual([]);
    expect(clean.notJudged.map(({ id }) => id)).toEqual(['agreement']);
  });

  test.each(Object.keys(expected[kind]) as ConditionField[])('without %s', (field) => {
    const day = dayWithout(place, field);
    const unknown = [...ids].filter((id) => day.hours.some(({ margins }) => margins.some((margin) => margin.id === id && margin.status === 'unknown')));
    printed.push(`${kind.padEnd(7)} ${field.padEnd(28)} ${unknown.join(' ') || '-'}`);
    expect(unknown.sort()).toEqual([...(expected[kind][field] ?? [])].sort());
    for (const { margins } of day.hours) {
      for (const margin of margins) {
        const needs = unknown.includes(margin.id);
        expect(margin.status === 'unknown', `${margin.id}`).toBe(needs);
        if (needs) expect(margin.missing.length, `${margin.id} says what it misses`).toBeGreaterThan(0);
      }
    }
  });

  test('no declared field is left out of this table', () => {
    expect([...entry.declares].filter((field) => expected[kind][field] === undefined)).toEqual([]);
  });
});

afterAll(() => console.log(`field taken out -> margins that cannot be said\n${printed.join('\n')}`));
