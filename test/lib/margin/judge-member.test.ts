// One margin of one hour as one source sees it: whether it has a vote, whether the margin applies, what it lacks, and the
// working that is written out only for a number.
import { describe, expect, test } from 'vitest';
import type { ConditionField, Conditions, Level } from '../../../lib/forecast/conditions.ts';
import { checkHour } from '../../../lib/forecast/ranges.ts';
import type { MarginId } from '../../../lib/margin/ids.ts';
import { alone, judgedRules, measure, viewsOf, workingOf } from '../../../lib/margin/judge-member.ts';
import { LAUNCH_RULES, STRIP_RULES } from '../../../lib/margin/rules.ts';
import { setUp } from '../../../lib/margin/setup.ts';
import type { Site } from '../../../lib/site.ts';
import { HOUR_MS } from '../../../lib/time.ts';
import { ALPINE, ALPINE_GROUND_M, conditions, instantAt, QUIET, sheetOf, STRIP, STRIP_GROUND_M, wings } from '../../support/typical-days.ts';

const NEAR_GROUND = [{ heightAglM: 80, speedMps: 2, fromDeg: 250 }];
const ALL: readonly ConditionField[] = [
  'wind10m', 'gustMps', 'nearGround', 'levels', 'temperature2mC', 'dewPoint2mC', 'surfacePressureHpa', 'mixedLayerM', 'shortwaveWm2', 'capeJkg',
  'precipitationMm', 'precipitationProbabilityPct', 'weatherCode', 'visibilityM', 'referencePressureHpa',
];

const pressureStep = { a: { name: 'South', lonDeg: 11, latDeg: 46 }, b: { name: 'North', lonDeg: 11, latDeg: 48 } };
const LAUNCH: Site = { ...ALPINE, pressureStep };

function hourAt(localHour: number, changes: Partial<Conditions> = {}, site: Site = LAUNCH): Conditions {
  return { ...conditions(instantAt(localHour), site.kind === 'strip' ? STRIP_GROUND_M : ALPINE_GROUND_M, QUIET), nearGround: NEAR_GROUND, ...changes };
}

interface Asked {
  readonly hours?: readonly Conditions[];
  readonly declares?: readonly ConditionField[];
  readonly site?: Site;
  readonly sheet?: string;
}

function viewOf({ hours = [hourAt(12)], declares = ALL, site = LAUNCH, sheet = site.kind === 'strip' ? 'solo-tow' : 'descent-experienced' }: Asked) {
  const setup = setUp({ site, wing: wings['EN B'], sheet: sheetOf(sheet) });
  return viewsOf(setup, hours.map(checkHour), alone(declares))[0]!;
}

function ruleOf(id: MarginId, site: Site = LAUNCH) {
  return (site.kind === 'strip' ? STRIP_RULES : LAUNCH_RULES).find((rule) => rule.id === id)!;
}

function marginOf(id: MarginId, asked: Asked = {}) {
  return measure(ruleOf(id, asked.site), viewOf(asked));
}

function without(...fields: readonly ConditionField[]): readonly ConditionField[] {
  return ALL.filter((field) => !fields.includes(field));
}

const missing = (id: MarginId, changes: Partial<Conditions>) => marginOf(id, { hours: [hourAt(12, changes)] })?.missing;

describe('which rules are judged', () => {
  test('those the sheet and the site have a limit for; of the others the reason', () => {
    const setup = setUp({ site: ALPINE, wing: wings['EN B'], sheet: sheetOf('ground-handling') });
    const { rules, notJudged } = judgedRules(setup);
    expect(rules.map(({ id }) => id)).toEqual(['meanWind', 'gust', 'gustSpread', 'thermal', 'storm', 'rain', 'rainChance', 'visibility', 'daylight']);
    expect(notJudged).toContainEqual({ id: 'arrival', why: 'the sheet has no minArrivalM' });
    expect(notJudged).toContainEqual({ id: 'sector', why: 'the site has no sectors of its own' });
    expect(notJudged).toContainEqual({ id: 'pressureStep', why: 'the site has no pair of reference points' });
    expect(rules.length + notJudged.length).toBe(LAUNCH_RULES.length);
  });

  test('a strip has its own', () => {
    const ids = judgedRules(setUp({ site: STRIP, wing: wings['EN B'], sheet: sheetOf('solo-tow') })).rules.map(({ id }) => id);
    expect(ids).toEqual(expect.arrayContaining(['stripWind', 'towHeight', 'climbShear', 'forwardAtRelease']));
    expect(ids).not.toContain('meanWind');
  });
});

describe('the vote', () => {
  test('a source that declares what a margin needs has one', () => {
    expect(marginOf('visibility')).toEqual({ id: 'visibility', spare: 35_000, limit: 5000, demand: 40_000, unit: 'm', status: 'within', missing: [], noVote: false });
  });

  test('one that does not has none, and says what it does not declare, each once', () => {
    expect(marginOf('visibility', { declares: without('visibilityM') })).toEqual({ id: 'visibility', spare: null, limit: 5000, demand: null, unit: 'm', status: 'unknown', missing: ['visibilityM'], noVote: true });
    expect(marginOf('forwardAloft', { declares: without('surfacePressureHpa', 'dewPoint2mC') })).toMatchObject({ noVote: true, missing: ['dewPoint2mC', 'surfacePressureHpa'] });
  });

  test('a declared field that is missing does not take it', () => {
    expect(marginOf('visibility', { hours: [hourAt(12, { visibilityM: null })] })).toMatchObject({ status: 'unknown', noVote: false, limit: 5000, demand: null, missing: ['visibilityM'] });
  });

  test('levels that reach less far than a margin looks have no vote on it; levels that end this hour are missing', () => {
    const low = (hour: Conditions): Conditions => ({ ...hour, levels: hour.levels!.filter(({ pressureHpa }) => pressureHpa >= 800) });
    expect(marginOf('upperWind', { hours: [low(hourAt(12)), low(hourAt(13))] })).toMatchObject({ status: 'unknown', noVote: false, missing: ['levels (do not reach)'] });
    expect(marginOf('upperWind', { declares: without('levels') })).toMatchObject({ noVote: true, missing: ['levels'] });
  });
});

describe('a margin that does not apply', () => {
  const site = { ...LAUNCH, sectors: [{ fromDeg: 300, toDeg: 20, maxMps: 2, why: 'trees' }] };

  test('a sector that the wind does not blow from is no margin in that hour', () => {
    expect(marginOf('sector', { site })).toBeNull();
  });

  test('neither is one that the sheet has no limit for', () => {
    expect(marginOf('arrival', { sheet: 'ground-handling' })).toBeNull();
  });

  test('one that it does blow from is held to its own limit', () => {
    expect(marginOf('sector', { site: { ...site, sectors: [{ ...site.sectors[0]!, fromDeg: 200 }] } })).toMatchObject({ limit: 2, unit: 'm/s', noVote: false });
  });

  test('without the field it has no vote rather than no margin', () => {
    expect(marginOf('sector', { site, declares: without('wind10m', 'levels', 'nearGround') })).toMatchObject({ noVote: true });
  });

  test('a wind whose direction is missing cannot say which sector it is: unknown, of no limit', () => {
    expect(marginOf('sector', { site, hours: [hourAt(12, { wind10m: { speedMps: 3, fromDeg: null } })] })).toMatchObject({ status: 'unknown', limit: null, noVote: false });
  });
});

describe('no solution', () => {
  test('is beyond, with the limit and no number', () => {
    const blown = { wind10m: { speedMps: 16, fromDeg: 340 }, gustMps: 20, levels: hourAt(12).levels!.map((level) => ({ ...level, speedMps: 16, fromDeg: 340 })) };
    expect(marginOf('forwardLaunch', { hours: [hourAt(12, blown)] })).toMatchObject({ status: 'beyond', spare: null, demand: null, limit: 2, missing: [] });
  });
});

describe('what is missing, by name', () => {
  test('of a wind its speed, or the direction of one that has any', () => {
    expect(missing('run', { wind10m: null })).toEqual(['wind10m.speedMps']);
    expect(missing('run', { wind10m: { speedMps: 3, fromDeg: null } })).toEqual(['wind10m.fromDeg']);
    expect(missing('run', { wind10m: { speedMps: 80, fromDeg: 250 } })).toEqual(['wind10m.speedMps']);
    expect(missing('run', { wind10m: { speedMps: 0.3, fromDeg: null } })).toEqual(['wind10m.fromDeg']);
    // Below 0.3 m/s a wind has no direction to miss.
    expect(missing('run', { wind10m: { speedMps: 0.29, fromDeg: null }, temperature2mC: null })).toEqual(['temperature2mC']);
  });

  test('of winds near the ground the height they miss it at, or all of them', () => {
    expect(missing('meanWind', { nearGround: [{ heightAglM: 80, speedMps: null, fromDeg: 250 }] })).toEqual(['nearGround 80 m.speedMps']);
    expect(missing('meanWind', { nearGround: [{ heightAglM: 180, speedMps: 4, fromDeg: null }] })).toEqual(['nearGround 180 m.fromDeg']);
    expect(missing('forwardAloft', { nearGround: null })).toContain('nearGround');
  });

  test('of levels the pressure and the value, above the ground only, or all of them', () => {
    const spoilt = (hpa: number, changes: Partial<Level>) => ({ levels: hourAt(12).levels!.map((level) => (level.pressureHpa === hpa ? { ...level, ...changes } : level)) });
    expect(missing('upperWind', spoilt(800, { speedMps: null }))).toEqual(['levels 800 hPa.speedMps']);
    expect(missing('cloudBase', { ...spoilt(850, { temperatureC: null }) })).toEqual(['levels 850 hPa.temperatureC']);
    expect(missing('cloudBase', spoilt(850, { relativeHumidityPct: 130 }))).toEqual(['levels 850 hPa.relativeHumidityPct']);
    expect(missing('upperWind', { levels: null })).toEqual(['levels']);
    // A level under the ground of the model, or just on it, is missed by nobody.
    const onGround = { levels: hourAt(12).levels!.map((level) => (level.pressureHpa === 900 ? { ...level, altitudeM: ALPINE_GROUND_M, speedMps: null } : level.pressureHpa === 800 ? { ...level, speedMps: null } : level)) };
    expect(missing('upperWind', onGround)).toEqual(['levels 800 hPa.speedMps']);
    const both = { levels: hourAt(12).levels!.map((level) => (level.pressureHpa === 800 || level.pressureHpa === 1000 ? { ...level, speedMps: null } : level)) };
    expect(missing('upperWind', both)).toEqual(['levels 800 hPa.speedMps']);
  });

  test('of the two reference pressures the one that is', () => {
    expect(missing('pressureStep', { referencePressureHpa: { a: null, b: 1015 } })).toEqual(['referencePressureHpa.a']);
    expect(missing('pressureStep', { referencePressureHpa: { a: 1015, b: 700 } })).toEqual(['referencePressureHpa.b']);
    expect(missing('pressureStep', { referencePressureHpa: null })).toEqual(['referencePressureHpa.a', 'referencePressureHpa.b']);
  });

  test('a weather code of this hour or of the next two', () => {
    const codeless = (localHour: number) => hourAt(localHour, { weatherCode: null });
    for (const hours of [[codeless(12)], [hourAt(12), codeless(13)], [hourAt(12), hourAt(13), codeless(14)]]) {
      expect(marginOf('storm', { hours })).toMatchObject({ status: 'unknown', missing: ['weatherCode'] });
    }
    expect(marginOf('storm', { hours: [hourAt(12), hourAt(13), hourAt(14), codeless(15)] })).toMatchObject({ status: 'within', missing: [] });
    expect(marginOf('storm', { hours: [hourAt(12, { capeJkg: null })] })?.missing).toEqual(['capeJkg']);
  });

  test('first of all the ground of the model, each name once, and nothing of a margin that is known', () => {
    expect(missing('landingGradient', { gridElevationM: -600, temperature2mC: null })?.[0]).toBe('gridElevationM');
    expect(missing('forwardAloft', { temperature2mC: null })).toEqual(['temperature2mC']);
    expect(missing('rain', { visibilityM: null })).toEqual([]);
  });

  test('a margin of the law needs nothing: where there is no legal day nothing is missing', () => {
    const polar = { ...LAUNCH, latDeg: 75, lonDeg: 15 };
    expect(marginOf('daylight', { site: polar })).toMatchObject({ status: 'unknown', missing: [], limit: 0 });
  });
});

describe('the next two hours', () => {
  test('are those of the member, by their instants', () => {
    const setup = setUp({ site: LAUNCH, wing: wings['EN B'], sheet: sheetOf('descent-experienced') });
    const hours = [12, 13, 15, 16].map((localHour) => checkHour(hourAt(localHour)));
    const views = viewsOf(setup, hours, alone(ALL));
    expect(views.map(({ context: { next } }) => next.map(({ validAtMs }) => (validAtMs - instantAt(0)) / HOUR_MS))).toEqual([[13], [15], [16], []]);
    expect(views.map(({ context }) => [context.borrowedMixedLayer, context.setHeading])).toEqual([[null, null], [null, null], [null, null], [null, null]]);
  });
});

describe('the working', () => {
  const working = (id: MarginId, asked: Asked = {}) => workingOf(ruleOf(id, asked.site), viewOf(asked));

  test('of a margin with a number is its sum', () => {
    const terms = working('visibility');
    expect(terms.map(({ value }) => value)).toEqual([-5000, 40_000]);
  });

  test('of one that is unknown, has no solution or does not apply there is none', () => {
    expect(working('visibility', { hours: [hourAt(12, { visibilityM: null })] })).toEqual([]);
    expect(working('visibility', { declares: without('visibilityM') })).toEqual([]);
    expect(working('storm', { hours: [hourAt(12, { weatherCode: 95 })] })).toEqual([]);
    expect(working('sector', { site: { ...LAUNCH, sectors: [{ fromDeg: 300, toDeg: 20, maxMps: 2, why: 'trees' }] } })).toEqual([]);
  });

  test('lists only numbers', () => {
    for (const rule of LAUNCH_RULES) for (const { value } of workingOf(rule, viewOf({}))) expect(Number.isFinite(value)).toBe(true);
    const doubtful = { ...ruleOf('visibility'), terms: () => [{ term: 'known', value: 1, unit: 'm', origin: 'here' }, { term: 'not known', value: NaN, unit: 'm', origin: 'nowhere' }] };
    expect(workingOf(doubtful, viewOf({})).map(({ term }) => term)).toEqual(['known']);
    // By night a thermal of nothing, without the depth that it did not need.
    const terms = working('thermal', { hours: [hourAt(12, { shortwaveWm2: 0, mixedLayerM: null, temperature2mC: null })] });
    expect(terms.map(({ term }) => term)).toEqual(['heat flux', 'limit of the sheet', 'thermal strength w*']);
  });
});
