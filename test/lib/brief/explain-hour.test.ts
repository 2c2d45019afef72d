// An hour explained: the workings, the wind ladder and the pictures of the hour that was judged, by the same code.
import { describe, expect, test } from 'vitest';
import { explainHour, type HourExplained } from '../../../lib/brief/explain-hour.ts';
import { judgeDay } from '../../../lib/brief/judge-day.ts';
import type { Forecast } from '../../../lib/forecast/conditions.ts';
import { isoUtc } from '../../../lib/time.ts';
import { ALPINE, ALPINE_GROUND_M, forecastOf, hourAt, inputOf, instantAt, QUIET, sheetOf, STRIP, STRIP_GROUND_M, type Day } from '../../support/typical-days.ts';

const fresh: Day = (hour) => ({ ...QUIET, wind: [2.5 + hour / 100, 240], gustMps: 4 + hour / 100, temperatureC: 12 + hour / 100, shortwaveWm2: 200 });
const fresher: Day = (hour) => ({ ...fresh(hour), wind: [3 + hour / 100, 260], gustMps: 5 + hour / 100 });

const NOON = isoUtc(instantAt(12));

function launchInput(forecasts: readonly Forecast[], site = ALPINE) {
  return inputOf({ site, sheet: 'descent-experienced', forecasts });
}

const told = (day: Day, source = 'told') => forecastOf({ groundM: ALPINE_GROUND_M, day, source });

function sumOf(explained: HourExplained, id: string, unit: string): number {
  return explained.workings.find((each) => each.id === id)!.working.filter((term) => term.unit === unit).reduce((sum, { value }) => sum + value, 0);
}

test('every margin that somebody has a vote on is worked out by the source whose number it is, and adds up to it', () => {
  const input = launchInput([told(fresh, 'one'), told(fresher, 'two')]);
  const hour = hourAt(judgeDay(input), 12);
  const explained = explainHour(input, NOON);
  expect(explained.workings.map(({ id }) => id)).toEqual(hour.margins.map(({ id }) => id));
  for (const { id, source, spare, unit } of hour.margins) {
    expect([id, explained.workings.find((each) => each.id === id)!.source]).toEqual([id, source]);
    expect(sumOf(explained, id, unit), id).toBeCloseTo(spare!, 6);
  }
  expect(new Set(explained.workings.map(({ source }) => source))).toEqual(new Set(['one', 'two']));
});

test('every term says where it is from', () => {
  for (const { working } of explainHour(launchInput([told(fresh)]), NOON).workings) {
    for (const { term, origin } of working) expect(origin.length, term).toBeGreaterThan(2);
  }
});

test('a shipped limit is told with its basis', () => {
  const { workings } = explainHour(launchInput([told(fresh)]), NOON);
  const limit = workings.find(({ id }) => id === 'meanWind')!.working[0]!;
  expect(limit).toEqual({ term: 'limit of the sheet', value: 6.71, unit: 'm/s', origin: `maxMeanMps of descent-experienced (${sheetOf('descent-experienced').basis.maxMeanMps})` });
});

describe('the ladder of a launch', () => {
  const { ladder } = explainHour(launchInput([told(fresh)]), NOON);

  test('rises from around the launch to two thousand metres over it, the launch among its rungs', () => {
    const heights = ladder.map(({ altitudeM }) => altitudeM);
    expect(heights).toEqual([...heights].sort((a, b) => a - b));
    expect(heights).toContain(1350);
    expect(heights).toContain(ALPINE_GROUND_M + 10);
    expect(heights[0]!).toBeGreaterThanOrEqual(1340 - 600);
    expect(heights.at(-1)!).toBeLessThanOrEqual(1340 + 2000);
  });

  test('carries wind by parts along and across the launch axis, and the trim of that height, faster the higher', () => {
    for (const { headMps, crossMps, speedMps } of ladder) expect(Math.hypot(headMps, crossMps)).toBeCloseTo(speedMps, 9);
    const trims = ladder.map(({ trimMps }) => trimMps!);
    expect(trims.every((trimMps, i) => i === 0 || trimMps > trims[i - 1]!)).toBe(true);
    const ground = ladder.find(({ altitudeM }) => altitudeM === ALPINE_GROUND_M + 10)!;
    expect(ground.headMps).toBeCloseTo(2.62 * Math.cos(Math.PI / 18), 9);
    expect(ground.crossMps).toBeCloseTo(-2.62 * Math.sin(Math.PI / 18), 9);
  });

  test('has no rung where the wind is not known', () => {
    const forecast = told(fresh);
    const holed = { ...forecast, members: forecast.members.map((hours) => hours.map((hour) => ({ ...hour, wind10m: null, levels: hour.levels!.map((level) => ({ ...level, speedMps: level.pressureHpa === 800 ? null : level.speedMps })) }))) };
    const rungs = explainHour(launchInput([holed]), NOON).ladder;
    expect(rungs.length).toBeGreaterThan(0);
    expect(rungs.some(({ altitudeM }) => altitudeM === ALPINE_GROUND_M + 10)).toBe(false);
    expect(rungs.every(({ speedMps }) => Number.isFinite(speedMps))).toBe(true);
  });
});

test('both glides of a launch begin at its height; the one through the wind ends at the arrival that was judged', () => {
  const input = launchInput([told(fresh)]);
  const { glide, tow } = explainHour(input, NOON);
  expect(tow).toBeNull();
  expect(glide).toMatchObject({ launchM: 1340, landingM: 1185, distanceM: 430 });
  for (const path of [glide!.still, glide!.forecast]) {
    expect(path[0]).toEqual({ alongM: 0, altitudeM: 1340 });
    expect(path.at(-1)!.alongM).toBe(430);
  }
  const arrival = hourAt(judgeDay(input), 12).margins.find(({ id }) => id === 'arrival')!;
  expect(glide!.forecast.at(-1)!.altitudeM - 1185).toBeCloseTo(arrival.demand!, 9);
  expect(glide!.still.at(-1)!.altitudeM).toBeCloseTo(1340 - 430 / 9, 9);
  expect(glide!.forecast.at(-1)!.altitudeM).toBeLessThan(glide!.still.at(-1)!.altitudeM);
});

describe('a strip', () => {
  const input = inputOf({ site: STRIP, sheet: 'solo-tow', forecasts: [forecastOf({ groundM: STRIP_GROUND_M, day: fresh })] });
  const explained = explainHour(input, NOON);
  const hour = hourAt(judgeDay(input), 12);

  test('shows its climb, from the ground to the release that was judged, on the heading that was recommended', () => {
    expect(explained.glide).toBeNull();
    expect(explained.tow).toMatchObject({ headingDeg: hour.heading!.headingDeg, lineLengthM: 900 });
    expect(explained.tow!.points[0]).toMatchObject({ heightM: 0, toWinchM: 900, timeS: 0 });
    expect(explained.tow!.points.at(-1)!.heightM).toBeCloseTo(hour.heading!.releaseM!, 6);
    expect(explained.tow!.points.at(-1)!.lineAngleDeg).toBeCloseTo(70, 3);
  });

  test('shows its surface wind by parts of the tow', () => {
    expect(explained.tow!.surface.headMps).toBeCloseTo(2.62 * Math.cos(Math.PI / 18), 9);
    expect(explained.ladder.find(({ altitudeM }) => altitudeM === STRIP_GROUND_M + 10)!.headMps).toBeCloseTo(explained.tow!.surface.headMps, 9);
  });

  test('has no climb to show while a wind on the way is missing', () => {
    const forecast = forecastOf({ groundM: STRIP_GROUND_M, day: fresh });
    const holed = { ...forecast, members: forecast.members.map((hours) => hours.map((each) => ({ ...each, wind10m: null }))) };
    expect(explainHour(inputOf({ site: STRIP, sheet: 'solo-tow', forecasts: [holed] }), NOON).tow).toBeNull();
  });
});

test('an hour nobody gives has nothing to explain', () => {
  expect(explainHour(launchInput([]), NOON)).toEqual({ validAt: NOON, source: null, workings: [], ladder: [], glide: null, tow: null });
  expect(explainHour(launchInput([told(fresh)]), '2027-05-20T12:00:00Z')).toMatchObject({ source: null, workings: [], ladder: [] });
});

test('the pictures are of the first source that speaks, not of one that lends a depth', () => {
  const lender = forecastOf({ groundM: ALPINE_GROUND_M, day: fresh, source: 'lender', declares: ['mixedLayerM'] });
  expect(explainHour(launchInput([lender, told(fresh, 'one'), told(fresher, 'two')]), NOON)).toMatchObject({ source: 'one', glide: { launchM: 1340 } });
});
