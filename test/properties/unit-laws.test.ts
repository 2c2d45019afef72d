// Laws of units, of time and of the legal day.
import fc from 'fast-check';
import { expect, test } from 'vitest';
import { degrees, radians } from '../../lib/angles.ts';
import { legalDay } from '../../lib/sky/sun.ts';
import { epochOf, HOUR_MS, hourlyInstants, isoUtc, localClock, localDate, localDay, MINUTE_MS, shiftDate } from '../../lib/time.ts';
import * as units from '../../lib/units.ts';
import { direction, from, law, tellSeed } from './support/law.ts';

tellSeed();

const values = from(-1e6, 1e6);

law('a speed, a height and a temperature come back from every unit as they went', [values], (value) => {
  const scale = Math.max(1, Math.abs(value));
  const same = (back: number) => expect(Math.abs(back - value) / scale).toBeLessThan(1e-12);
  same(units.kmhFromMps(value) * units.MPS_PER_KMH);
  same(units.ktFromMps(value) * units.MPS_PER_KT);
  same(units.mphFromMps(value) * units.MPS_PER_MPH);
  same(units.ftFromM(value) * units.M_PER_FT);
  same(units.celsius(units.kelvin(value)));
  same(units.pascal(value) / 100);
});

law('degrees come back from radians', [direction], (deg) => {
  expect(degrees(radians(deg))).toBeCloseTo(deg, 9);
});

test('the factors are those of the standards', () => {
  expect(units.kmhFromMps(10)).toBeCloseTo(36, 12);
  expect(units.ktFromMps(1852 / 3600)).toBeCloseTo(1, 12);
  expect(units.mphFromMps(0.44704)).toBeCloseTo(1, 12);
  expect(units.ftFromM(0.3048)).toBeCloseTo(1, 12);
  expect(units.kelvin(0)).toBe(273.15);
  expect(units.celsius(0)).toBe(-273.15);
  expect(units.pascal(1013.25)).toBe(101_325);
  expect(units.MPS_PER_KMH * 3.6).toBeCloseTo(1, 12);
  expect(units.MPS_PER_KT * 3600).toBeCloseTo(1852, 9);
  expect(units.MPS_PER_MPH * 3600).toBeCloseTo(1609.344, 9);
  expect(units.M_PER_FT * 10_000).toBeCloseTo(3048, 9);
  expect([units.GRAVITY_MPS2, units.GAS_DRY_JKGK, units.GAS_VAPOUR_JKGK, units.HEAT_CAPACITY_JKGK, units.SEA_LEVEL_DENSITY_KGM3, units.ZERO_CELSIUS_K]).toEqual([9.80665, 287.05287, 461.5, 1005, 1.225, 273.15]);
});

const instants = fc.integer({ min: Date.UTC(2020, 0, 1), max: Date.UTC(2040, 0, 1) });
const zones = fc.constantFrom('Europe/Vienna', 'America/Denver', 'Australia/Lord_Howe', 'Asia/Kathmandu', 'Africa/Cairo', 'America/Santiago', 'Pacific/Auckland', 'UTC');

law('an instant in a zone lies on its own local day, which is 23 to 25 hours long and begins where the one before ends', [instants, zones], (atMs, zone) => {
  const date = localDate(atMs, zone);
  const { fromMs, toMs } = localDay(date, zone);
  expect(fromMs).toBeLessThanOrEqual(atMs);
  expect(toMs).toBeGreaterThan(atMs);
  expect((toMs - fromMs) / HOUR_MS).toBeGreaterThanOrEqual(23);
  expect((toMs - fromMs) / HOUR_MS).toBeLessThanOrEqual(25);
  expect(localDay(shiftDate(date, -1), zone).toMs).toBe(fromMs);
  expect(localClock(atMs, zone)).toMatch(/^\d\d:\d\d$/);
});

law('an instant survives being written down, and the hours between two are all of them', [instants, fc.integer({ min: 0, max: 48 * HOUR_MS })], (atMs, spanMs) => {
  expect(epochOf(isoUtc(atMs))).toBe(Math.floor(atMs / 1000) * 1000);
  const hours = hourlyInstants(atMs, atMs + spanMs);
  expect(hours.every((hour, i) => hour % HOUR_MS === 0 && (i === 0 || hour - hours[i - 1]! === HOUR_MS))).toBe(true);
  expect(hours.length).toBe(Math.floor((atMs + spanMs) / HOUR_MS) - Math.ceil(atMs / HOUR_MS) + 1);
});

const places = fc.record({ latDeg: from(-60, 60), lonDeg: from(-180, 180), dayMs: instants });
const minutes = fc.integer({ min: 0, max: 60 });

law('the legal day runs from dawn over sunrise and sunset to dusk, noon is inside, and its minutes move its ends', [places, minutes, minutes], ({ latDeg, lonDeg, dayMs }, beforeMin, afterMin) => {
  const timeZone = 'UTC';
  // Where the date is that of the sun: elsewhere a UTC date holds parts of two solar days.
  const place = { latDeg, lonDeg: lonDeg / 3, timeZone };
  const date = localDate(dayMs, timeZone);
  const ends = (rule: 'sunrise-sunset' | 'civil-twilight', before = 0, after = 0) => {
    const day = legalDay({ ...place, daylight: { rule, beforeMin: before, afterMin: after } }, date);
    if ('none' in day) throw new Error(`no legal day at ${latDeg}° on ${date}`);
    return day;
  };
  const sun = ends('sunrise-sunset');
  const twilight = ends('civil-twilight');
  const noonMs = epochOf(`${date}T12:00:00Z`) - (place.lonDeg / 15) * HOUR_MS;
  const inOrder = [twilight.fromMs, sun.fromMs, noonMs, sun.toMs, twilight.toMs];
  expect(inOrder.every((at, i) => i === 0 || at > inOrder[i - 1]!)).toBe(true);
  const shifted = ends('sunrise-sunset', beforeMin, afterMin);
  expect([sun.fromMs - shifted.fromMs, shifted.toMs - sun.toMs]).toEqual([beforeMin * MINUTE_MS, afterMin * MINUTE_MS]);
});
