// The clock: due times and local days on the days on which clocks change, and where there is no day.
import { describe, expect, test } from 'vitest';
import { judgeDay } from '../../../lib/brief/judge-day.ts';
import { inputFor } from '../../../lib/brief/self-test/self-test.ts';
import { forecast, LAUNCH, LAUNCH_SHEET } from '../../../lib/brief/self-test/places.ts';
import { briefText } from '../../../lib/brief/words/index.ts';
import { HOUR_MS, hourlyInstants, isoUtc, localClock, localDate, localDay, shiftDate } from '../../../lib/time.ts';
import { followingDueMs, instantsAround, judgedDate } from '../../../worker/morning/times.ts';
import { FastHouse, hook } from '../../support/fast-house.ts';
import { thresholds } from '../../support/typical-days.ts';

/** The instants at which somebody is told, a week long, as the house itself counts them. */
function dues(timeZone: string, deliverMinute: number, fromIso: string, count: number): string[] {
  const found: string[] = [];
  let at = Date.parse(fromIso);
  for (let index = 0; index < count; index += 1) {
    at = followingDueMs({ timeZone, deliverMinute }, at);
    found.push(isoUtc(at));
  }
  return found;
}

describe('a brief set for half past two', () => {
  test('F78: comes once at 3:30 when clocks go forward over it', async () => {
    expect(dues('Europe/Vienna', 150, '2026-03-28T00:00:00Z', 3)).toEqual(['2026-03-28T01:30:00Z', '2026-03-29T01:30:00Z', '2026-03-30T00:30:00Z']);
    expect(localClock(Date.parse('2026-03-29T01:30:00Z'), 'Europe/Vienna')).toBe('03:30');
    const house = new FastHouse({ nowIso: '2026-03-29T00:25:00Z' });
    await house.seed([{ id: 'ana', sites: ['north'], urls: [hook('ana')], deliverMinute: 150, dueIso: '2026-03-29T01:30:00Z' }]);
    await house.minutes(120);
    expect(house.posts.filter(({ type }) => type === 'brief.issued').map(({ atMs }) => isoUtc(atMs))).toEqual(['2026-03-29T01:30:00Z']);
  });

  test('F79: comes once, the first time, when the hour comes twice', async () => {
    expect(dues('Europe/Vienna', 150, '2026-10-24T12:00:00Z', 2)).toEqual(['2026-10-25T00:30:00Z', '2026-10-26T01:30:00Z']);
    const house = new FastHouse({ nowIso: '2026-10-25T00:25:00Z' });
    await house.seed([{ id: 'ana', sites: ['north'], urls: [hook('ana')], deliverMinute: 150, dueIso: '2026-10-25T00:30:00Z' }]);
    await house.minutes(90);
    expect(house.posts.filter(({ type }) => type === 'brief.issued').map(({ atMs }) => isoUtc(atMs))).toEqual(['2026-10-25T00:30:00Z']);
  });
});

test.each([
  ['Europe/Vienna', '2026-03-29', 23], ['Europe/Vienna', '2026-10-25', 25], ['Australia/Lord_Howe', '2026-10-04', 23.5],
  ['Australia/Lord_Howe', '2026-04-05', 24.5], ['Asia/Kathmandu', '2026-03-29', 24],
])('F80: the day of %s on %s has %f hours, and is asked for whole', (timeZone, date, hours) => {
  const { fromMs, toMs } = localDay(date, timeZone);
  expect((toMs - fromMs) / HOUR_MS).toBe(hours);
  const around = instantsAround({ ...LAUNCH, timeZone }, date);
  expect(around.fromMs).toBeLessThanOrEqual(fromMs - HOUR_MS + 1);
  expect(around.toMs).toBeGreaterThanOrEqual(toMs);
  expect(hourlyInstants(around.fromMs, around.toMs)).toHaveLength((around.toMs - around.fromMs) / HOUR_MS + 1);
});

test.each([
  ['Africa/Cairo', '2026-04-24'], ['Asia/Beirut', '2026-03-29'], ['America/Santiago', '2026-09-06'], ['America/Havana', '2026-03-08'],
])('F81: in %s %s begins at one, and midnight is asked for all the same', (timeZone, date) => {
  const { fromMs, toMs } = localDay(date, timeZone);
  expect(localClock(fromMs, timeZone)).toBe('01:00');
  expect((toMs - fromMs) / HOUR_MS).toBe(23);
  expect(localDate(fromMs, timeZone)).toBe(date);
  expect(localDate(fromMs - 1000, timeZone)).toBe(shiftDate(date, -1));
  const told = dues(timeZone, 0, `${shiftDate(date, -2)}T12:00:00Z`, 3);
  expect(new Set(told.map((at) => localDate(Date.parse(at), timeZone))).size).toBe(3);
});

test('F82: at +5:45 the hours are those of UTC, and the clocks beside them show it', () => {
  const site = { ...LAUNCH, timeZone: 'Asia/Kathmandu', lonDeg: 84, latDeg: 28.2 };
  const around = instantsAround(site, '2026-12-21');
  expect(around.fromMs % HOUR_MS).toBe(0);
  expect(localClock(around.fromMs, site.timeZone)).toMatch(/:45$/);
  expect(dues('Asia/Kathmandu', 360, '2026-12-21T12:00:00Z', 2)).toEqual(['2026-12-22T00:15:00Z', '2026-12-23T00:15:00Z']);
});

test('F84: year ends, leap days and the 53rd week go by one date at a time', () => {
  for (const [from, days] of [['2026-12-29', 6], ['2028-02-27', 4], ['2027-02-27', 4]] as const) {
    const told = dues('Europe/Vienna', 360, `${from}T00:00:00Z`, days).map((at) => localDate(Date.parse(at), 'Europe/Vienna'));
    expect(told).toEqual(Array.from({ length: days }, (_, index) => shiftDate(from, index)));
  }
});

test('the date line: one instant, two dates, each its own morning', () => {
  const east = dues('Pacific/Kiritimati', 360, '2026-06-30T00:00:00Z', 1)[0]!;
  const west = dues('Pacific/Pago_Pago', 360, '2026-06-30T00:00:00Z', 1)[0]!;
  expect([east, localDate(Date.parse(east), 'Pacific/Kiritimati')]).toEqual(['2026-06-30T16:00:00Z', '2026-07-01']);
  expect([west, localDate(Date.parse(west), 'Pacific/Pago_Pago')]).toEqual(['2026-06-30T17:00:00Z', '2026-06-30']);
  // A date that was skipped whole is an empty day.
  const { fromMs, toMs } = localDay('2011-12-30', 'Pacific/Apia');
  expect(toMs).toBe(fromMs);
});

describe('F86: where the sun does not rise or does not set', () => {
  const polar = { ...LAUNCH, latDeg: 71, lonDeg: 25.8, timeZone: 'Europe/Oslo' };

  test.each([['2026-12-21', 'polar night'], ['2026-06-21', 'polar day']])('on %s nothing can be said, because of the %s', (localDate_, why) => {
    const value = forecast();
    const day = judgeDay({ ...inputFor({ site: polar, sheet: LAUNCH_SHEET }, [{ source: value.source, kind: value.kind, outcome: { ok: true, value } }], thresholds), localDate: localDate_ });
    expect(day).toMatchObject({ verdict: 'unknown', windows: [], hours: [], legalDay: { none: why } });
    expect(briefText([day], { units: { speed: 'km/h', height: 'm' } })).toMatch(new RegExp(`^Self-test: cannot say: ${why}`));
    expect(judgedDate(polar, Date.parse(`${localDate_}T05:00:00Z`))).toBe(localDate_);
  });
});
