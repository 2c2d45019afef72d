// The frame of a forecast. Rows of the assurance table 4-A and faults F17-F30 that belong to the frame are named by id.
import { describe, expect, test } from 'vitest';
import type { Conditions, Forecast } from '../../../lib/forecast/conditions.ts';
import { checkFrame, type FrameContext } from '../../../lib/forecast/frame.ts';
import { HOUR_MS } from '../../../lib/time.ts';
import { dayStartMs, forecast, hour, hours, judgedInstants, now, place } from './make.ts';

function check(changes: Partial<Forecast>, context: Partial<FrameContext> = {}) {
  return checkFrame(forecast(changes), { now, site: place, storedGroundM: { test: 1180 }, judgedInstants, ...context });
}

function faultOf(changes: Partial<Forecast>, context: Partial<FrameContext> = {}) {
  const result = check(changes, context);
  return result.ok ? null : result.error;
}

function edited(edit: (hours: Conditions[]) => Conditions[]): Partial<Forecast> {
  return { members: [edit(hours())] };
}

test('a clean frame keeps every hour as it came', () => {
  expect(check({})).toEqual({ ok: true, value: forecast() });
});

describe('the run', () => {
  test.each([
    ['A51: exactly 18 h old is allowed', '2027-05-13T09:00:00Z', null],
    ['A51: 18 h 01 min is not', '2027-05-13T08:59:00Z', { kind: 'run-old', ageHours: 18 + 1 / 60 }],
    ['F17: a run 30 h old', '2027-05-12T21:00:00Z', { kind: 'run-old', ageHours: 30 }],
    ['A50: exactly 1 h ahead of our clock is allowed', '2027-05-14T04:00:00Z', null],
    ['A50: more is not', '2027-05-14T04:01:00Z', { kind: 'run-future', aheadHours: 61 / 60 }],
    ['F30: a provider clock 3 h ahead', '2027-05-14T06:00:00Z', { kind: 'run-future', aheadHours: 3 }],
    ['A49: no run time', null, { kind: 'run-missing' }],
    ['a run time that is no UTC instant', '2027-05-14 02:00', { kind: 'run-missing' }],
  ])('%s', (_, runAt, fault) => {
    const found = faultOf({ runAt });
    if (fault !== null && 'ageHours' in fault) expect(found).toEqual({ kind: 'run-old', ageHours: expect.closeTo(Number(fault.ageHours), 9) });
    else expect(found).toEqual(fault);
  });

  test('F18: a fresh fetch does not make an old run young', () => {
    expect(faultOf({ runAt: '2027-05-12T21:00:00Z', fetchedAt: now })).toMatchObject({ kind: 'run-old' });
    expect(faultOf({ runAt: null, fetchedAt: now })).toEqual({ kind: 'run-missing' });
  });

  test('an operator may trust a service that has no run time to give', () => {
    expect(faultOf({ runAt: null, trustedWithoutRunTime: true })).toBeNull();
    expect(faultOf({ runAt: '2027-05-12T21:00:00Z', trustedWithoutRunTime: true })).toMatchObject({ kind: 'run-old' });
  });

  test('without a clock nothing is trusted', () => {
    expect(faultOf({}, { now: 'soon' })).toEqual({ kind: 'run-missing' });
  });
});

describe('the times', () => {
  test.each<[string, (hours: Conditions[]) => Conditions[], string]>([
    ['A13: no hours at all', () => [], 'empty'],
    ['A16: unsorted', ([a, b, ...rest]) => [b!, a!, ...rest], 'unsorted'],
    ['A17: the same hour twice', ([a, ...rest]) => [a!, a!, ...rest], 'duplicate'],
    ['A22: the repeated hour of an autumn night', (all) => [...all.slice(0, 4), all[3]!, ...all.slice(4)], 'duplicate'],
    ['A19: three-hourly', (all) => all.filter((_, i) => i % 3 === 0), 'not-hourly'],
    ['A19: two-hourly', (all) => all.filter((_, i) => i % 2 === 0), 'not-hourly'],
    ['half past the hour', (all) => all.map((_, i) => hour(dayStartMs + (i - 0.5) * HOUR_MS)), 'not-hourly'],
    ['A20: local times without offset', (all) => all.map((one) => ({ ...one, validAt: one.validAt.slice(0, -4) })), 'not-utc'],
    ['A25: all of it yesterday', (all) => all.map((_, i) => hour(dayStartMs + (i - 25) * HOUR_MS)), 'wrong-day'],
    ['A23: milliseconds where seconds were meant', (all) => all.map((_, i) => hour((dayStartMs + (i - 1) * HOUR_MS) * 1000)), 'not-utc'],
    ['a two-day-old answer', (all) => all.map((_, i) => hour(dayStartMs + (i - 49) * HOUR_MS)), 'wrong-day'],
  ])('%s costs the frame', (_, edit, why) => {
    expect(faultOf(edited(edit))).toEqual({ kind: 'times', why });
  });

  test('A18: a missing hour in the middle comes back without fields, and costs nothing else', () => {
    const result = check(edited((all) => all.filter((one) => one.validAt !== '2027-05-14T12:00:00Z')));
    const expected = hours().map((one) =>
      one.validAt === '2027-05-14T12:00:00Z' ? { validAt: one.validAt, gridElevationM: 1180 } : one,
    );
    expect(result.ok && result.value.members[0]).toEqual(expected);
  });

  test('A26: where the frame ends, the rest of the judged day, and the two hours that look ahead from it, have no fields', () => {
    const result = check(edited((all) => all.slice(0, 12)));
    const members = result.ok ? result.value.members[0]! : [];
    expect(members.at(-1)?.validAt).toBe('2027-05-14T21:00:00Z');
    expect(judgedInstants.at(-1)).toBe('2027-05-14T19:00:00Z');
    expect(members.filter((one) => one.wind10m !== undefined)).toHaveLength(12);
    expect(members.slice(12).every((one) => one.wind10m === undefined)).toBe(true);
  });

  test('hours that have passed and that the source begins after are not its to vote on; hours to come are', () => {
    const first = (now: string, from: number) => {
      const result = check(edited((all) => all.slice(from)), { now });
      return result.ok ? result.value.members[0]![0] : result.error;
    };
    expect(first('2027-05-14T10:20:00Z', 11)).toMatchObject({ validAt: '2027-05-14T10:00:00Z', gustMps: expect.any(Number) });
    expect(first('2027-05-14T10:20:00Z', 13)).toEqual({ validAt: '2027-05-14T10:00:00Z', gridElevationM: 1180 });
    expect(first('2027-05-14T03:00:00Z', 13)).toEqual({ validAt: '2027-05-14T04:00:00Z', gridElevationM: 1180 });
  });

  test('one stamp in a far century does not make an endless frame', () => {
    const result = check(edited((all) => [...all, hour(dayStartMs + 1e7 * HOUR_MS)]));
    expect(result.ok && result.value.members[0]).toHaveLength(26);
  });

  test('members of an ensemble share their hours', () => {
    expect(faultOf({ kind: 'ensemble', members: [hours(), hours().slice(1)] })).toEqual({ kind: 'times', why: 'gap' });
    expect(faultOf({ kind: 'ensemble', members: [hours(), hours()] })).toBeNull();
    expect(faultOf({ kind: 'ensemble', members: [] })).toEqual({ kind: 'times', why: 'empty' });
  });

  test('a place without a legal day has nothing to judge and no fault', () => {
    expect(faultOf({}, { judgedInstants: [] })).toBeNull();
  });
});

describe('the place', () => {
  test.each([
    ['the next cell of a coarse grid', 19_700, null],
    ['exactly 20 km', 20_000, null],
    ['F22: 40 km away', 40_000, { kind: 'place', distanceKm: 40 }],
    ['A47: 60 km away', 60_000, { kind: 'place', distanceKm: 60 }],
    ['300 km away', 300_000, { kind: 'place', distanceKm: 300 }],
    ['no number', NaN, { kind: 'place', distanceKm: NaN }],
    ['a service that does not say', null, null],
  ])('%s', (_, gridDistanceM, fault) => {
    expect(faultOf({ gridDistanceM })).toEqual(fault);
  });

  test('the tolerance can be set for a coarser grid', () => {
    expect(faultOf({ gridDistanceM: 24_000 }, { maxGridDistanceM: 25_000 })).toBeNull();
  });
});

describe("the model's ground", () => {
  const ground = (gridElevationM: unknown) => edited((all) => all.map((one) => ({ ...one, gridElevationM: gridElevationM as number })));

  test.each([
    ['200 m higher than stored is allowed', 1380, null],
    ['F22: 201 m higher is another place', 1381, { kind: 'ground', why: 'changed', byM: 201 }],
    ['F22: 201 m lower too', 979, { kind: 'ground', why: 'changed', byM: 201 }],
    ['A48: none', null, { kind: 'ground', why: 'missing', byM: null }],
    ['not finite', Infinity, { kind: 'ground', why: 'missing', byM: null }],
  ])('%s', (_, gridElevationM, fault) => {
    expect(faultOf(ground(gridElevationM))).toEqual(fault);
  });

  test('a ground that was never stored is taken', () => {
    expect(faultOf(ground(400), { storedGroundM: {} })).toBeNull();
    expect(faultOf(ground(400), { storedGroundM: { other: 1180 } })).toBeNull();
  });

  test('a model whose ground is far above the site has no air there', () => {
    expect(faultOf(ground(1320 + 1500), { storedGroundM: {} })).toBeNull();
    expect(faultOf(ground(1320 + 1501), { storedGroundM: {} })).toEqual({ kind: 'ground', why: 'above-site', byM: 1501 });
  });

  test('a ground that changes from hour to hour is none', () => {
    expect(faultOf(edited((all) => all.map((one, i) => ({ ...one, gridElevationM: 1180 + i }))))).toMatchObject({ kind: 'ground', why: 'changed' });
  });
});

describe('suspicious constants', () => {
  test.each([
    ['wind10m', { wind10m: { speedMps: 3.1, fromDeg: 250 } }],
    ['wind10m', { wind10m: { speedMps: 0, fromDeg: null } }],
    ['gustMps', { gustMps: 5 }],
    ['temperature2mC', { temperature2mC: 0 }],
  ] as const)('A52, F24: one %s all day costs the frame', (field, changes) => {
    expect(faultOf({ members: [hours(changes)] })).toEqual({ kind: 'constant', field });
  });

  test('only these three: no rain and no cloud all day is weather', () => {
    expect(faultOf({ members: [hours({ precipitationMm: 0, lowCloudPct: 0, weatherCode: 0, wind10m: null, gustMps: null })] })).toBeNull();
  });

  const stuckFor = (count: number) => hours().map((one, i) => (i < count ? { ...one, gustMps: 5 } : { ...one, gustMps: 6 + i }));

  test('24 hours of one value are a day, 23 are not', () => {
    expect(faultOf({ members: [stuckFor(24)] })).toEqual({ kind: 'constant', field: 'gustMps' });
    expect(faultOf({ members: [stuckFor(23)] })).toBeNull();
  });

  test('a frame that is shorter than a day counts as a whole, from eighteen hours on', () => {
    expect(faultOf({ members: [stuckFor(23).slice(0, 23)] })).toEqual({ kind: 'constant', field: 'gustMps' });
    expect(faultOf({ members: [stuckFor(18).slice(0, 18)] })).toEqual({ kind: 'constant', field: 'gustMps' });
    expect(faultOf({ members: [stuckFor(17).slice(0, 17)] })).toBeNull();
    expect(faultOf({ members: [stuckFor(18).slice(0, 19)] })).toBeNull();
  });

  test('holes do not hide a stuck feed', () => {
    const holed = stuckFor(26).map((one, i) => (i % 5 === 3 ? { ...one, gustMps: null } : one));
    expect(faultOf({ members: [holed] })).toEqual({ kind: 'constant', field: 'gustMps' });
    expect(faultOf({ members: [holed.filter((_, i) => i % 5 !== 3)] })).toEqual({ kind: 'constant', field: 'gustMps' });
  });

  test('A28: a day of nothing is unknown, not stuck', () => {
    expect(faultOf({ members: [hours({ gustMps: null, wind10m: null, temperature2mC: null })] })).toBeNull();
  });

  test('one stuck member of an ensemble costs the ensemble', () => {
    expect(faultOf({ kind: 'ensemble', members: [hours(), hours({ gustMps: 5 })] })).toEqual({ kind: 'constant', field: 'gustMps' });
  });
});

test('stamps may be written with fractions of a second', () => {
  expect(faultOf(edited((all) => all.map((one) => ({ ...one, validAt: one.validAt.replace('00Z', '00.000Z') }))))).toBeNull();
});
