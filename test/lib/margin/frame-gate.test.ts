// The frame of a forecast at its edges: members that share their hours to the last one, how far around the judged day hours
// are of use, and what is put in where none was delivered. The rows of the assurance page are in test/lib/forecast.
import { describe, expect, test } from 'vitest';
import type { Conditions, Forecast } from '../../../lib/forecast/conditions.ts';
import { checkFrame, type FrameContext } from '../../../lib/forecast/frame.ts';
import { HOUR_MS, hourlyInstants, isoUtc } from '../../../lib/time.ts';
import { dayStartMs, forecast, hour, hours, judgedInstants, now, place } from '../forecast/make.ts';

function check(changes: Partial<Forecast>, context: Partial<FrameContext> = {}) {
  return checkFrame(forecast(changes), { now, site: place, storedGroundM: { test: 1180 }, judgedInstants, ...context });
}

function faultOf(changes: Partial<Forecast>, context: Partial<FrameContext> = {}) {
  const result = check(changes, context);
  return result.ok ? null : result.error;
}

/** Hours after midnight UTC of the day, of the first member that comes back. */
function keptHours(changes: Partial<Forecast>, context: Partial<FrameContext> = {}): number[] {
  const result = check(changes, context);
  if (!result.ok) throw new Error(JSON.stringify(result.error));
  return result.value.members[0]!.map(({ validAt }) => (Date.parse(validAt) - dayStartMs) / HOUR_MS);
}

function spanOf(fromHour: number, toHour: number): Conditions[] {
  return hourlyInstants(dayStartMs + fromHour * HOUR_MS, dayStartMs + toHour * HOUR_MS).map((at) => hour(at));
}

describe('the members of an ensemble', () => {
  const gap = { kind: 'times', why: 'gap' };

  test('are refused where one ends sooner, or has another hour in one place', () => {
    expect(faultOf({ members: [hours(), hours().slice(0, -1)] })).toEqual(gap);
    expect(faultOf({ members: [hours().slice(0, -1), hours()] })).toEqual(gap);
    const moved = hours().map((each, i) => (i === 5 ? { ...each, validAt: isoUtc(dayStartMs + 90 * HOUR_MS) } : each));
    expect(faultOf({ members: [hours(), moved] })).toEqual(gap);
    expect(faultOf({ members: [hours(), hours(), hours()] })).toBeNull();
  });
});

describe('the ground', () => {
  test('that the first hour lacks is missing, not another one', () => {
    const members = [hours().map((each, i) => (i === 0 ? { ...each, gridElevationM: null as never } : each))];
    expect(faultOf({ members })).toEqual({ kind: 'ground', why: 'missing', byM: null });
  });

  test.each([[-500, null], [-501, 'missing'], [9000, null], [9001, 'missing']])('of %d m is %s', (gridElevationM, why) => {
    const fault = faultOf({ members: [hours({ gridElevationM })] }, { storedGroundM: {}, site: { ...place, elevationM: gridElevationM } });
    expect(fault === null ? null : fault.kind === 'ground' ? fault.why : fault).toBe(why);
  });
});

describe('the hours of use', () => {
  test('reach 36 hours around the judged ones, both ends included', () => {
    // Judged are 4 to 19 UTC.
    expect(keptHours({ members: [spanOf(-40, 70)] }).at(0)).toBe(4 - 36);
    expect(keptHours({ members: [spanOf(-40, 70)] }).at(-1)).toBe(19 + 36);
  });

  test('go on to two hours after the last that is judged, delivered or not', () => {
    expect(keptHours({ members: [spanOf(2, 19)] })).toEqual(Array.from({ length: 20 }, (_, i) => i + 2));
  });

  test('stay as they are where nothing is judged', () => {
    expect(keptHours({ members: [spanOf(0, 5)] }, { judgedInstants: [] })).toEqual([0, 1, 2, 3, 4, 5]);
  });

  test('of a source that begins with the current hour do not hold those that had passed an hour ago', () => {
    const noon = isoUtc(dayStartMs + 12 * HOUR_MS);
    const runAt = isoUtc(dayStartMs + 6 * HOUR_MS);
    expect(keptHours({ runAt, members: [spanOf(14, 19)] }, { now: noon })[0]).toBe(11);
    expect(keptHours({ runAt, members: [spanOf(9, 19)] }, { now: noon })[0]).toBe(9);
  });

  test('that are put in stand on the ground of those that came, were it only one', () => {
    const result = check({ members: [[hour(dayStartMs + 12 * HOUR_MS)]] });
    const members = result.ok ? result.value.members[0]! : [];
    expect(members.length).toBeGreaterThan(15);
    expect(new Set(members.map(({ gridElevationM }) => gridElevationM))).toEqual(new Set([1180]));
  });
});
