// How the sources of a day make one verdict: who has a vote, what a missing field costs, what the members agree about.
import { describe, expect, test } from 'vitest';
import type { DayInput } from '../../../lib/brief/day-input.ts';
import type { CombinedMargin, JudgedDay } from '../../../lib/brief/day.ts';
import { judgeDay } from '../../../lib/brief/judge-day.ts';
import type { ConditionField, Conditions, Forecast } from '../../../lib/forecast/conditions.ts';
import type { MarginId } from '../../../lib/margin/ids.ts';
import type { LimitSheet } from '../../../lib/margin/sheet.ts';
import { isoUtc } from '../../../lib/time.ts';
import { ALPINE, ALPINE_GROUND_M, forecastOf, hourAt, inputOf, instantAt, QUIET, sheetOf, STRIP, STRIP_GROUND_M, type Day, type Sky } from '../../support/typical-days.ts';

/** A quiet day that still changes from hour to hour, as weather does. */
const quiet: Day = (hour) => ({ ...QUIET, wind: [1.5 + hour / 100, 250], gustMps: 2.6 + hour / 100, temperatureC: 12 + hour / 100 });

function source(name: string, changes: Partial<Sky> = {}, more: Partial<Forecast> = {}): Forecast {
  return forecastOf({ groundM: ALPINE_GROUND_M, day: (hour) => ({ ...quiet(hour), ...changes }), source: name, ...more });
}

function gusty(name: string, gustMps: number): Forecast {
  return forecastOf({ groundM: ALPINE_GROUND_M, day: (hour) => ({ ...quiet(hour), gustMps: gustMps + hour / 1000 }), source: name });
}

/** The source with its hours edited. */
function edited(forecast: Forecast, edit: (hour: Conditions) => Conditions): Forecast {
  return { ...forecast, members: forecast.members.map((hours) => hours.map(edit)) };
}

/** The source as one that does not have these fields to give. */
function without(forecast: Forecast, ...fields: readonly ConditionField[]): Forecast {
  const declares = forecast.declares.filter((field) => !fields.includes(field));
  const bare = (hour: Conditions) => Object.fromEntries(Object.entries(hour).filter(([key]) => !(fields as readonly string[]).includes(key))) as unknown as Conditions;
  return { ...edited(forecast, bare), declares };
}

const SHEET = 'descent-experienced';
const NOON = 13;

function dayOf(forecasts: readonly Forecast[], changes: Partial<DayInput> = {}): JudgedDay {
  return judgeDay({ ...inputOf({ site: ALPINE, sheet: SHEET, forecasts }), ...changes });
}

function marginOf(day: JudgedDay, id: MarginId, hour = NOON): CombinedMargin {
  const margin = hourAt(day, hour).margins.find((each) => each.id === id);
  if (margin === undefined) throw new Error(`${id} is not judged`);
  return margin;
}

test('the quiet day is within or close all day long, in one window that covers the legal day', () => {
  const day = dayOf([source('one')]);
  const verdicts = new Set(day.hours.map(({ verdict }) => verdict));
  expect([...verdicts].every((verdict) => verdict === 'within' || verdict === 'close'), [...verdicts].join()).toBe(true);
  expect(day.windows).toHaveLength(1);
  expect(day.windows[0]).toMatchObject({ from: day.hours[0]!.validAt, to: day.hours.at(-1)!.validAt });
});

describe('the sources of a margin', () => {
  test('one that is beyond makes it beyond, and the number shown is its own', () => {
    const day = dayOf([source('calm'), gusty('windy', 9)]);
    expect(marginOf(day, 'gust')).toMatchObject({ status: 'beyond', source: 'windy' });
    expect(hourAt(day, NOON).verdict).toBe('beyond');
    expect(hourAt(day, NOON).bySource).toEqual([{ source: 'calm', verdict: expect.stringMatching(/within|close/) }, { source: 'windy', verdict: 'beyond' }]);
  });

  test('of two that are within the tighter one is shown', () => {
    expect(marginOf(dayOf([source('calm'), gusty('fresher', 4)]), 'gust')).toMatchObject({ status: 'within', source: 'fresher' });
    expect(marginOf(dayOf([gusty('fresher', 4), source('calm')]), 'gust')).toMatchObject({ status: 'within', source: 'fresher' });
  });

  test('one with the declared field missing makes it unknown against any that is within, but not against a proof', () => {
    const holed = edited(source('holed'), (hour) => ({ ...hour, visibilityM: null }));
    expect(marginOf(dayOf([source('clear'), holed]), 'visibility')).toMatchObject({ status: 'unknown', source: 'holed', missing: ['visibilityM'] });
    expect(marginOf(dayOf([source('hazy', { visibilityM: 800 }), holed]), 'visibility')).toMatchObject({ status: 'beyond', source: 'hazy' });
  });

  test('one that has no such field to give has no vote on it', () => {
    const blind = without(source('blind'), 'visibilityM');
    expect(marginOf(dayOf([blind, source('clear')]), 'visibility')).toMatchObject({ status: 'within', source: 'clear' });
    expect(marginOf(dayOf([blind]), 'visibility')).toMatchObject({ status: 'unknown', source: null, missing: ['visibilityM'] });
    expect(hourAt(dayOf([blind]), NOON).verdict).toBe('unknown');
  });

  test('without any vote every margin is unknown, with its limit', () => {
    const day = judgeDay({ ...inputOf({ site: ALPINE, sheet: SHEET, forecasts: [] }), answers: [{ source: 'silent', kind: 'deterministic', outcome: { ok: false, error: { kind: 'unreachable' } } }] });
    expect(day.hours.length).toBeGreaterThan(12);
    for (const { verdict, margins, bySource } of day.hours) {
      expect(verdict).toBe('unknown');
      expect(bySource).toEqual([]);
      expect(margins.every(({ status, source: from, spare, missing }) => status === 'unknown' && from === null && spare === null && missing.length === 0)).toBe(true);
    }
    expect(marginOf(day, 'gust')).toMatchObject({ limit: 8.05, demand: null });
    expect(marginOf(day, 'daylight')).toMatchObject({ limit: 0 });
    expect(day.sources).toEqual([expect.objectContaining({ source: 'silent', state: 'no vote', why: 'it could not be reached' })]);
    expect(day.verdict).toBe('unknown');
  });

  test('an hour that a source did not deliver is unknown, the others are not', () => {
    const at = isoUtc(instantAt(NOON));
    const holed: Forecast = { ...source('holed'), members: source('holed').members.map((hours) => hours.filter(({ validAt }) => validAt !== at)) };
    const day = dayOf([holed]);
    expect(hourAt(day, NOON).verdict).toBe('unknown');
    expect(hourAt(day, NOON - 3).verdict).not.toBe('unknown');
    expect(day.windows).toHaveLength(2);
  });
});

describe('a declared field that is missing is never mistaken for one that is not there to give', () => {
  const nearGround = [80, 180].map((heightAglM) => ({ heightAglM, speedMps: 3, fromDeg: 250 }));
  const site = { ...STRIP, usableBothWays: false, lineLengthM: 250 };
  const strip = (name: string, day: Day = quiet) => forecastOf({ groundM: STRIP_GROUND_M, day, source: name });
  /** A source whose winds end 180 m over the ground: enough for a short line. */
  const low = (edit: (hour: Conditions) => Conditions = (hour) => hour) => {
    const base = without(strip('low'), 'levels');
    return { ...edited(base, (hour) => edit({ ...hour, nearGround })), declares: [...base.declares, 'nearGround' as const] };
  };
  const towOf = (forecasts: readonly Forecast[]) => marginOf(judgeDay(inputOf({ site, sheet: 'solo-tow', forecasts })), 'towHeight');

  test('a tow that the declared winds carry is judged by them', () => {
    expect(towOf([low()])).toMatchObject({ status: 'beyond', source: 'low' });
  });

  test.each<[string, (hour: Conditions) => Conditions]>([
    ['the 10 m wind', (hour) => ({ ...hour, wind10m: null })],
    ['a wind on the way', (hour) => ({ ...hour, nearGround: [{ heightAglM: 80, speedMps: null, fromDeg: null }, nearGround[1]!] })],
    ['every wind near the ground', (hour) => ({ ...hour, nearGround: null })],
    ['the temperature', (hour) => ({ ...hour, temperature2mC: null })],
  ])('%s missing makes it unknown, and no source that is within decides alone', (_, edit) => {
    expect(towOf([low(edit)])).toMatchObject({ status: 'unknown', source: 'low' });
    const longer = { ...site, lineLengthM: 900 };
    const day = judgeDay(inputOf({ site: longer, sheet: 'solo-tow', forecasts: [low(edit), strip('high')] }));
    expect(marginOf(day, 'towHeight').status).toBe('unknown');
  });

  test('a climb that ends above the declared winds has no vote', () => {
    const day = judgeDay(inputOf({ site: { ...site, lineLengthM: 900 }, sheet: 'solo-tow', forecasts: [low(), strip('high')] }));
    expect(marginOf(day, 'towHeight')).toMatchObject({ status: 'within', source: 'high' });
  });

  test('a heat that is missing makes thermals unknown, also for a source without the depth they mix', () => {
    const dark = without(source('dark', { shortwaveWm2: 0 }), 'mixedLayerM', 'levels');
    expect(marginOf(dayOf([dark, source('clear')]), 'thermal').status).toBe('within');
    const holed = edited(dark, (hour) => ({ ...hour, shortwaveWm2: null }));
    expect(marginOf(dayOf([holed, source('clear')]), 'thermal')).toMatchObject({ status: 'unknown', source: 'dark', missing: ['shortwaveWm2'] });
  });

  test('a source without the temperature on the ground has no vote on speeds that begin below its lowest level, levels missing or not', () => {
    const cold = without(source('cold', { wind: [9, 250] }), 'temperature2mC');
    const holed = edited(cold, (hour) => ({ ...hour, levels: null }));
    for (const each of [cold, holed]) expect(marginOf(dayOf([each, source('one')]), 'forwardAloft')).toMatchObject({ status: 'within', source: 'one' });
  });

  test('levels that did not come are missing, also for a source that gives no air on the ground', () => {
    const high = { ...ALPINE, elevationM: 1700, landing: { ...ALPINE.landing, elevationM: 1560 } };
    const above = without(source('above'), 'temperature2mC', 'dewPoint2mC', 'surfacePressureHpa');
    const holed = edited(above, (hour) => (Date.parse(hour.validAt) === instantAt(NOON) ? { ...hour, levels: null } : hour));
    const day = judgeDay(inputOf({ site: high, sheet: SHEET, forecasts: [holed, source('one')] }));
    expect(marginOf(day, 'run', NOON - 1)).toMatchObject({ status: expect.stringMatching(/within|close/) });
    expect(marginOf(day, 'run')).toMatchObject({ status: 'unknown', source: 'above', missing: ['levels'] });
  });

  test('a ground that no place has is no ground', () => {
    const sunken = edited(source('sunken'), (hour) => ({ ...hour, gridElevationM: -600 }));
    expect(dayOf([sunken, source('one')], { storedGroundM: {} }).sources[0]).toMatchObject({ state: 'no vote', why: 'it does not say how high its ground is' });
  });
});

describe('the mixed-layer depth', () => {
  const hot: Partial<Sky> = { shortwaveWm2: 800, mixedLayerM: 2200 };
  const strengthOf = (forecasts: readonly Forecast[]) => marginOf(dayOf(forecasts), 'thermal').demand;

  test('is borrowed from the first that gives it', () => {
    const bare = without(source('bare', hot), 'mixedLayerM');
    const lender = source('lender', { ...hot, mixedLayerM: 1100 }, { declares: ['mixedLayerM'] });
    const own = strengthOf([source('own', { ...hot, mixedLayerM: 1100 })]);
    expect(strengthOf([bare, lender])).toBeCloseTo(own!, 9);
    expect(strengthOf([bare])).not.toBeCloseTo(own!, 3);
  });

  test('a source that only lends it has no vote on anything and no verdict of its own', () => {
    const lender = source('lender', hot, { declares: ['mixedLayerM'] });
    const day = dayOf([source('own', hot), lender]);
    expect(hourAt(day, NOON).bySource.map((each) => each.source)).toEqual(['own']);
    expect(hourAt(day, NOON).wind?.bySource.map((each) => each.source)).toEqual(['own']);
  });

  test('lent without a number it leaves the thermal unknown', () => {
    const bare = without(source('bare', hot), 'mixedLayerM');
    const lender = edited(source('lender', hot, { declares: ['mixedLayerM'] }), (hour) => ({ ...hour, mixedLayerM: null }));
    expect(marginOf(dayOf([bare, lender]), 'thermal').status).toBe('unknown');
  });
});

describe('the members of an ensemble', () => {
  /** Ten members, that many of them too windy and that many without a gust. */
  function ensemble(beyond: number, missing: number): Forecast {
    const members = Array.from({ length: 10 }, (_, i) => {
      const [hours] = gusty('member', i < beyond ? 9 + i / 100 : 3 + i / 100).members;
      return hours!.map((hour) => ({ ...hour, gustMps: i >= beyond && i < beyond + missing ? null : hour.gustMps! }));
    });
    return { ...without(source('many'), 'levels'), kind: 'ensemble', declares: ['wind10m', 'gustMps'], members };
  }
  const agreementOf = (beyond: number, missing = 0, sheet: LimitSheet | string = SHEET) => judgeDay(inputOf({ site: ALPINE, sheet, forecasts: [source('one'), ensemble(beyond, missing)] }));

  test.each([
    ['all agree', 0, 0, 'within', 1],
    ['one in four may differ and it is still within', 2, 0, 'within', 0.8],
    ['at seven in ten the sheet is just met, but close', 3, 0, 'close', 0.7],
    ['at six in ten they do not agree', 4, 0, 'beyond', 0.6],
    ['an unknown member does not agree', 1, 2, 'close', 0.7],
    ['two unknown in ten are borne', 0, 2, 'within', 0.8],
    ['three are not', 0, 3, 'unknown', null],
    ['three are not, whatever the others say', 7, 3, 'unknown', null],
  ] as const)('%s', (_, beyond, missing, status, demand) => {
    const margin = marginOf(agreementOf(beyond, missing), 'agreement');
    expect(margin).toMatchObject({ status, source: 'many', limit: 0.7, unit: 'share' });
    if (demand === null) expect(margin).toMatchObject({ demand: null, spare: null, missing: [`${missing} of 10 members`] });
    else expect(margin.demand).toBeCloseTo(demand, 9);
  });

  test('make the hour as tight as any margin does', () => {
    expect(hourAt(agreementOf(4), NOON)).toMatchObject({ verdict: 'beyond', causes: ['agreement'] });
    expect(hourAt(agreementOf(0, 3), NOON)).toMatchObject({ verdict: 'unknown', causes: ['agreement'] });
  });

  test('are asked about the margins that their fields feed, and no others', () => {
    const about = hourAt(agreementOf(0), NOON).ensemble?.about;
    expect(about).toEqual(expect.arrayContaining(['meanWind', 'gust', 'gustSpread', 'crosswind', 'tailwind', 'offAxis']));
    for (const id of ['daylight', 'slope', 'arrival', 'thermal', 'rain'] as const) expect(about).not.toContain(id);
  });

  test('are heard on a sector of the site whichever of them blows from it', () => {
    const site = { ...ALPINE, sectors: [{ fromDeg: 262, toDeg: 320, maxMps: 1, why: 'trees' }] };
    const members = [250, 251, 252, 285, 286].map((fromDeg) => without(source('member', { wind: [2, fromDeg] }), 'levels').members[0]!.map((hour, i) => ({ ...hour, wind10m: { speedMps: 2 + i / 100, fromDeg } })));
    const ensembleOf = (order: readonly (readonly Conditions[])[]): Forecast => ({ ...source('many'), kind: 'ensemble', declares: ['wind10m'], members: order });
    const shareOf = (order: readonly (readonly Conditions[])[], at = site) => marginOf(judgeDay(inputOf({ site: at, sheet: SHEET, forecasts: [source('one'), ensembleOf(order)] })), 'agreement').demand;
    expect(shareOf(members, { ...ALPINE, sectors: [] as never })).toBe(1);
    expect(shareOf(members)).toBeCloseTo(0.6, 9);
    expect(shareOf([...members].reverse())).toBeCloseTo(0.6, 9);
  });

  test('show the median and the spare that nine in ten exceed', () => {
    const spreads = hourAt(agreementOf(2), NOON).ensemble?.spreads ?? [];
    const gust = spreads.find(({ id }) => id === 'gust')!;
    expect(gust.unit).toBe('m/s');
    expect(gust.medianSpare).toBeGreaterThan(3);
    expect(gust.adverseSpare).toBeLessThan(0);
  });

  test('have no say where the sheet asks for no agreement, and it is said', () => {
    const sheet = sheetOf(SHEET);
    const { minAgreement: _, ...limits } = sheet.limits;
    const day = agreementOf(4, 0, { ...sheet, limits });
    expect(hourAt(day, NOON).margins.some(({ id }) => id === 'agreement')).toBe(false);
    expect(day.notJudged).toContainEqual({ id: 'agreement', why: 'the sheet has no minAgreement' });
    expect(hourAt(day, NOON).ensemble?.about.length).toBeGreaterThan(0);
  });

  test('without an ensemble agreement is not judged, and it is said', () => {
    expect(dayOf([source('one')]).notJudged).toContainEqual({ id: 'agreement', why: 'no ensemble has a vote' });
  });

  test('an ensemble alone judges nothing else: the day cannot be said', () => {
    const day = dayOf([ensemble(0, 0)]);
    expect(marginOf(day, 'gust')).toMatchObject({ status: 'unknown', source: null });
    expect(day.verdict).toBe('unknown');
  });

  test('of two ensembles the one that agrees less decides', () => {
    const day = dayOf([source('one'), ensemble(0, 0), { ...ensemble(4, 0), source: 'doubtful' }]);
    expect(marginOf(day, 'agreement')).toMatchObject({ status: 'beyond', source: 'doubtful' });
  });
});

describe('a strip', () => {
  const day = (forecasts: readonly Forecast[]) => judgeDay(inputOf({ site: STRIP, sheet: 'solo-tow', forecasts }));
  const blowing = (name: string, fromDeg: number, speedMps = 3) => forecastOf({
    groundM: STRIP_GROUND_M, source: name, day: (hour) => ({ ...quiet(hour), wind: [speedMps + hour / 100, fromDeg], gustMps: speedMps + 1.2 + hour / 100, aloft: [[1500, speedMps + 1, fromDeg]] }),
  });

  test('is towed into the wind, with the reason', () => {
    expect(hourAt(day([blowing('one', 245)]), NOON).heading).toMatchObject({ headingDeg: 250, reason: { kind: 'larger spare', of: 'stripTail', otherHeadingDeg: 70 } });
    expect(hourAt(day([blowing('one', 75)]), NOON).heading).toMatchObject({ headingDeg: 70, reason: { kind: 'larger spare', of: 'stripTail', otherHeadingDeg: 250 } });
  });

  test('all sources judge the end that the first one sets', () => {
    const both = day([blowing('first', 245), blowing('other', 75)]);
    expect(hourAt(both, NOON).heading?.headingDeg).toBe(250);
    expect(marginOf(both, 'stripTail')).toMatchObject({ status: 'beyond', source: 'other' });
  });

  test('with one usable end is towed there whatever blows', () => {
    const one = judgeDay(inputOf({ site: { ...STRIP, usableBothWays: false }, sheet: 'solo-tow', forecasts: [blowing('one', 75)] }));
    expect(hourAt(one, NOON).heading).toMatchObject({ headingDeg: 250, reason: { kind: 'only one' } });
    expect(marginOf(one, 'stripTail').status).toBe('beyond');
  });
});

test('where the sun does not set there is no legal day: nothing is judged and the day cannot be said', () => {
  const day = judgeDay(inputOf({ site: { ...ALPINE, latDeg: 75, lonDeg: 15 }, sheet: SHEET, forecasts: [source('one')] }));
  expect(day).toMatchObject({ legalDay: { none: 'polar day' }, hours: [], windows: [], verdict: 'unknown', cause: null });
});

test('the cause of a day is its tightest margin of the worst kind, the earliest among equals', () => {
  const worse = source('worse');
  const day = dayOf([{ ...worse, members: worse.members.map((hours) => hours.map((hour) => {
    const at = Date.parse(hour.validAt);
    if (at === instantAt(11)) return { ...hour, precipitationMm: 0.5 };
    return at === instantAt(15) ? { ...hour, precipitationMm: 2 } : at === instantAt(16) ? { ...hour, precipitationMm: 2 } : hour;
  })) }]);
  expect(day.verdict).toBe('beyond');
  expect(day.cause).toEqual({ id: 'rain', validAt: isoUtc(instantAt(15)) });
});
