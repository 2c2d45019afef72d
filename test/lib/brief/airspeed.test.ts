// The column of airspeed: what an hour's trim is spent on, from the source that leaves least, and that it adds up.
import { expect, test } from 'vitest';
import type { AirspeedColumn } from '../../../lib/brief/day.ts';
import { judgeDay } from '../../../lib/brief/judge-day.ts';
import type { Site } from '../../../lib/site.ts';
import { ALPINE, ALPINE_GROUND_M, forecastOf, hourAt, inputOf, QUIET, sheetOf, STRIP, STRIP_GROUND_M, type Day, type Sky } from '../../support/typical-days.ts';

/** On a flat place at the model's ground nothing speeds the wind up: what the forecast says is what the launch gets. */
const FLAT = { ...ALPINE, elevationM: ALPINE_GROUND_M, hill: { form: 'flat', heightM: 0, halfLengthM: 1000 }, landing: { ...ALPINE.landing, elevationM: 1100 } } as const;

const blowing = (words: Partial<Sky>): Day => (hour) => ({ ...QUIET, temperatureC: 12 + hour / 100, ...words, wind: [(words.wind?.[0] ?? 3) + hour / 10_000, words.wind?.[1] ?? 250], gustMps: (words.gustMps ?? 5) + hour / 10_000 });

function columnOf(days: readonly Day[], site: Site = FLAT, sheet = 'descent-experienced'): AirspeedColumn {
  const groundM = site.kind === 'strip' ? STRIP_GROUND_M : ALPINE_GROUND_M;
  const forecasts = days.map((day, i) => forecastOf({ groundM, day, source: `source ${i}` }));
  const { airspeed } = hourAt(judgeDay(inputOf({ site, sheet, forecasts })), 12);
  if (airspeed === null) throw new Error('no column');
  return airspeed;
}

function sum({ headMps, crabMps, gustMps, reserveMps, spareMps }: AirspeedColumn): number {
  return headMps + crabMps + gustMps + reserveMps + (spareMps ?? NaN);
}

test('straight on the wind is all head: three of mean, two of gust, two of reserve, the rest is spare', () => {
  const column = columnOf([blowing({ wind: [3, 250], gustMps: 5 })]);
  expect(column.headMps).toBeCloseTo(3, 2);
  expect(column.gustMps).toBeCloseTo(2, 2);
  expect(column.crabMps).toBeCloseTo(0, 6);
  expect(column.reserveMps).toBe(2);
  expect(sum(column)).toBeCloseTo(column.trimMps, 9);
  // The wing of the page at 1,180 m: 10.56 m/s on the ground of the standard, some six percent faster up here.
  expect(column.trimMps / (38 / 3.6)).toBeCloseTo(1.06, 1);
});

test('straight across nothing is head and all is crab: what the gust costs of the trim is lost to the angle', () => {
  const column = columnOf([blowing({ wind: [3, 340], gustMps: 5 })]);
  expect(column.headMps).toBeCloseTo(0, 6);
  expect(column.gustMps).toBeCloseTo(0, 6);
  expect(column.crabMps).toBeCloseTo(column.trimMps - Math.sqrt(column.trimMps ** 2 - 25), 2);
  expect(sum(column)).toBeCloseTo(column.trimMps, 9);
});

test('from behind the head is negative: it carries, and the column still adds up', () => {
  const column = columnOf([blowing({ wind: [3, 70], gustMps: 4 })]);
  expect(column.headMps).toBeCloseTo(-3, 2);
  expect(column.gustMps).toBeCloseTo(-1, 2);
  expect(sum(column)).toBeCloseTo(column.trimMps, 9);
});

test('in a calm the gust may come from anywhere and counts in full', () => {
  const column = columnOf([blowing({ wind: [0.1, 160], gustMps: 2.5 })]);
  expect(column).toMatchObject({ headMps: 0 });
  expect(column.gustMps).toBeCloseTo(2.5, 2);
  expect(sum(column)).toBeCloseTo(column.trimMps, 9);
});

test('a deficit hangs below the line', () => {
  const column = columnOf([blowing({ wind: [8, 250], gustMps: 12 })]);
  expect(column.spareMps).toBeLessThan(0);
  expect(sum(column)).toBeCloseTo(column.trimMps, 9);
});

test('where the cross part is the whole airspeed there is no solution: all of it is crab and the spare is none', () => {
  const column = columnOf([blowing({ wind: [9, 340], gustMps: 14 })]);
  expect(column).toMatchObject({ spareMps: null });
  expect(column.crabMps).toBe(column.trimMps);
});

test('of several sources the one that leaves least is shown, no solution before any number', () => {
  const [light, fresh, across] = [blowing({ wind: [2, 250], gustMps: 3 }), blowing({ wind: [4, 250], gustMps: 6 }), blowing({ wind: [9, 340], gustMps: 14 })];
  expect(columnOf([light, fresh])).toEqual(columnOf([fresh]));
  expect(columnOf([fresh, light])).toEqual(columnOf([fresh]));
  expect(columnOf([across, fresh])).toEqual(columnOf([across]));
  expect(columnOf([fresh, across, light])).toEqual(columnOf([across]));
});

test('the spare of the column is the spare of the forward margin', () => {
  for (const words of [{ wind: [3, 250], gustMps: 5 }, { wind: [3, 300], gustMps: 6 }, { wind: [0.1, 0], gustMps: 2 }] as const) {
    const day = judgeDay(inputOf({ site: FLAT, sheet: 'descent-experienced', forecasts: [forecastOf({ groundM: ALPINE_GROUND_M, day: blowing(words) })] }));
    const hour = hourAt(day, 12);
    expect(hour.airspeed!.spareMps).toBeCloseTo(hour.margins.find(({ id }) => id === 'forwardLaunch')!.spare!, 9);
  }
});

test('a sheet that asks no forward speed reserves none', () => {
  const sheet = sheetOf('descent-experienced');
  const { minForwardMps: _, ...limits } = sheet.limits;
  const day = judgeDay(inputOf({ site: FLAT, sheet: { ...sheet, limits }, forecasts: [forecastOf({ groundM: ALPINE_GROUND_M, day: blowing({}) })] }));
  expect(hourAt(day, 12).airspeed).toMatchObject({ reserveMps: 0 });
});

test('a missing gust leaves no column', () => {
  const forecast = forecastOf({ groundM: ALPINE_GROUND_M, day: blowing({}) });
  const holed = { ...forecast, members: forecast.members.map((hours) => hours.map((hour) => ({ ...hour, gustMps: null }))) };
  expect(hourAt(judgeDay(inputOf({ site: FLAT, sheet: 'descent-experienced', forecasts: [holed] })), 12).airspeed).toBeNull();
});

test('a strip spends its trim at release: the wind up there, straight or across, no gust, and the reserve aloft', () => {
  const day: Day = blowing({ wind: [2, 250], gustMps: 3, aloft: [[700, 4, 280], [2000, 4, 280]] });
  const judgedDay = judgeDay(inputOf({ site: STRIP, sheet: 'solo-tow', forecasts: [forecastOf({ groundM: STRIP_GROUND_M, day })] }));
  const { airspeed, margins, heading } = hourAt(judgedDay, 12);
  expect(heading).toMatchObject({ headingDeg: 250 });
  expect(airspeed).toMatchObject({ gustMps: 0, reserveMps: 2 });
  expect(airspeed!.headMps).toBeCloseTo(4 * Math.cos(Math.PI / 6), 1);
  expect(airspeed!.headMps + airspeed!.crabMps).toBeCloseTo(4, 2);
  expect(airspeed!.spareMps).toBeCloseTo(margins.find(({ id }) => id === 'forwardAtRelease')!.spare!, 9);
  expect(sum(airspeed!)).toBeCloseTo(airspeed!.trimMps, 9);
});
