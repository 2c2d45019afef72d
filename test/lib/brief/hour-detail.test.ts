// An hour explained on its page: the workings, the wind ladder and the pictures of the hour that was judged, by the same code.
import { describe, expect, test } from 'vitest';
import type { JudgedHour } from '../../../lib/brief/day.ts';
import type { DayInput } from '../../../lib/brief/day-input.ts';
import { judgeDay } from '../../../lib/brief/judge-day.ts';
import type { Forecast } from '../../../lib/forecast/conditions.ts';
import { hourDetail } from '../../../worker/web/hour-detail.ts';
import type { HourDetail } from '../../../worker/web/page-services.ts';
import { ALPINE, ALPINE_GROUND_M, forecastOf, hourAt, inputOf, QUIET, sheetOf, STRIP, STRIP_GROUND_M, type Day } from '../../support/typical-days.ts';

const fresh: Day = (hour) => ({ ...QUIET, wind: [2.5 + hour / 100, 240], gustMps: 4 + hour / 100, temperatureC: 12 + hour / 100, shortwaveWm2: 200 });
const fresher: Day = (hour) => ({ ...fresh(hour), wind: [3 + hour / 100, 260], gustMps: 5 + hour / 100 });

function launchInput(forecasts: readonly Forecast[], site = ALPINE): DayInput {
  return inputOf({ site, sheet: 'descent-experienced', forecasts });
}

function stripInput(forecast: Forecast): DayInput {
  return inputOf({ site: STRIP, sheet: 'solo-tow', forecasts: [forecast] });
}

const told = (day: Day, source = 'told') => forecastOf({ groundM: ALPINE_GROUND_M, day, source });

function atNoon(input: DayInput): { readonly hour: JudgedHour; readonly detail: HourDetail } {
  const hour = hourAt(judgeDay(input), 12);
  return { hour, detail: hourDetail(input)(hour) };
}

test('every margin is worked out from the source whose number it is, and adds up to it', () => {
  const { hour, detail } = atNoon(launchInput([told(fresh, 'one'), told(fresher, 'two')]));
  expect(detail.workings.map(({ id }) => id)).toEqual(hour.margins.map(({ id }) => id));
  for (const { id, spare, unit } of hour.margins) {
    const terms = detail.workings.find((each) => each.id === id)!.terms.filter((term) => term.unit === unit);
    expect(terms.reduce((sum, { value }) => sum + value, 0), id).toBeCloseTo(spare!, 6);
  }
  // Two sources with different winds: a sum of the other one's terms would not give the spare.
  expect(new Set(hour.margins.map(({ source }) => source))).toEqual(new Set(['one', 'two']));
});

test('every term says where it is from', () => {
  for (const { terms } of atNoon(launchInput([told(fresh)])).detail.workings) for (const { term, origin } of terms) expect(origin.length, term).toBeGreaterThan(2);
});

test('a shipped limit is told with its basis', () => {
  const { workings } = atNoon(launchInput([told(fresh)])).detail;
  const limit = workings.find(({ id }) => id === 'meanWind')!.terms[0]!;
  expect(limit).toEqual({ term: 'limit of the sheet', value: 6.71, unit: 'm/s', origin: `maxMeanMps of descent-experienced (${sheetOf('descent-experienced').basis.maxMeanMps})` });
});

test('the number of a stored brief that the forecast of today does not give has no working', () => {
  const input = launchInput([told(fresh)]);
  const hour = hourAt(judgeDay(input), 12);
  const stored = { ...hour, margins: hour.margins.map((margin) => (margin.id === 'meanWind' ? { ...margin, spare: margin.spare! + 0.5 } : margin)) };
  const { workings } = hourDetail(input)(stored);
  expect(workings.map(({ id }) => id)).toEqual(hour.margins.map(({ id }) => id).filter((id) => id !== 'meanWind'));
});

describe('the ladder of a launch', () => {
  const { ladder } = atNoon(launchInput([told(fresh)])).detail;

  test('rises from the landing to fifteen hundred metres over the launch, which is among its rungs', () => {
    const heights = ladder!.rungs.map(({ altitudeM }) => altitudeM);
    expect(heights).toEqual([...heights].sort((a, b) => a - b));
    expect(heights).toContain(1350);
    expect(heights[0]!).toBeGreaterThanOrEqual(1185);
    expect(heights.at(-1)!).toBe(1340 + 1500);
    expect(ladder).toMatchObject({ launchM: 1340, landingM: 1185 });
  });

  test('carries the wind along and across the launch axis', () => {
    // A launch that faces 250 degrees, and one wind at every height, 6.12 m/s at noon: from there, then from its right and from behind.
    for (const [fromDeg, head, cross] of [[250, 6.12, 0], [340, 0, 6.12], [70, -6.12, 0], [160, 0, -6.12]] as const) {
      const day: Day = (hour) => ({ ...fresh(hour), wind: [6 + hour / 100, fromDeg], gustMps: 7 + hour / 100, aloft: [[1500, 6 + hour / 100, fromDeg], [3000, 6 + hour / 100, fromDeg]] });
      const { rungs } = atNoon(launchInput([told(day)])).detail.ladder!;
      const above = rungs.filter(({ altitudeM }) => altitudeM > 1500);
      expect(above.length).toBeGreaterThan(2);
      for (const { headMps, crossMps } of above) {
        expect(headMps, `head of a wind from ${fromDeg}`).toBeCloseTo(head, 2);
        expect(crossMps, `cross of a wind from ${fromDeg}`).toBeCloseTo(cross, 2);
      }
    }
  });

  test('has no rung where the wind is not known', () => {
    const forecast = told(fresh);
    const holed = { ...forecast, members: forecast.members.map((hours) => hours.map((hour) => ({ ...hour, levels: hour.levels!.map((level) => ({ ...level, speedMps: level.pressureHpa === 800 ? null : level.speedMps })) }))) };
    const whole = atNoon(launchInput([forecast])).detail.ladder!.rungs;
    const { rungs } = atNoon(launchInput([holed])).detail.ladder!;
    expect(rungs.length).toBeGreaterThan(0);
    expect(rungs.length).toBeLessThan(whole.length);
    expect(rungs.every(({ headMps, crossMps }) => Number.isFinite(headMps) && Number.isFinite(crossMps))).toBe(true);
  });
});

test('both glides of a launch begin at its height; the one through the wind ends at the arrival that was judged', () => {
  const { hour, detail: { glide, tow } } = atNoon(launchInput([told(fresh)]));
  expect(tow).toBeNull();
  expect(glide).toMatchObject({ launchM: 1340, landingM: 1185, distanceM: 430 });
  for (const path of [glide!.stillAir, glide!.inWind]) {
    expect(path[0]).toEqual({ alongM: 0, altitudeM: 1340 });
    expect(path.at(-1)!.alongM).toBe(430);
  }
  const arrival = hour.margins.find(({ id }) => id === 'arrival')!;
  expect(glide!.inWind.at(-1)!.altitudeM - 1185).toBeCloseTo(arrival.demand!, 9);
  expect(glide!.stillAir.at(-1)!.altitudeM).toBeCloseTo(1340 - 430 / 9, 9);
  expect(glide!.inWind.at(-1)!.altitudeM).toBeLessThan(glide!.stillAir.at(-1)!.altitudeM);
  expect([glide!.arrivalM, glide!.askedM]).toEqual([arrival.demand, arrival.limit]);
});

describe('a strip', () => {
  const forecast = forecastOf({ groundM: STRIP_GROUND_M, day: fresh });
  const { hour, detail } = atNoon(stripInput(forecast));

  test('shows its climb, from the ground to the release that was judged, on the heading that was recommended', () => {
    expect(detail.glide).toBeNull();
    expect(detail.tow).toMatchObject({ headingDeg: hour.heading!.headingDeg, lineLengthM: 900, releaseM: hour.heading!.releaseM });
    expect(detail.tow!.climb[0]).toEqual({ alongM: 0, heightM: 0 });
    expect(detail.tow!.climb.at(-1)!.heightM).toBeCloseTo(hour.heading!.releaseM!, 6);
  });

  test('shows its surface wind by parts of the tow', () => {
    expect(detail.tow!.headMps).toBeCloseTo(2.62 * Math.cos(Math.PI / 18), 9);
    expect(detail.tow!.gustMps).toBeCloseTo(4.12, 9);
  });

  test('has no climb to show while a wind on the way is missing', () => {
    const holed = { ...forecast, members: forecast.members.map((hours) => hours.map((each) => ({ ...each, wind10m: null }))) };
    expect(atNoon(stripInput(holed)).detail.tow).toBeNull();
  });
});

test('an hour nobody gives has nothing to explain', () => {
  const { hour } = atNoon(launchInput([told(fresh)]));
  expect(hourDetail(launchInput([]))(hour)).toMatchObject({ workings: [], ladder: null, glide: null, tow: null, given: null });
  expect(hourDetail(launchInput([told(fresh)]))({ ...hour, validAt: '2027-05-20T12:00:00Z' })).toMatchObject({ workings: [], ladder: null, given: null });
});

test('what a "what if" starts from is of the first source that speaks, not of one that lends a depth', () => {
  const lender = forecastOf({ groundM: ALPINE_GROUND_M, day: fresher, source: 'lender', declares: ['mixedLayerM'] });
  const { detail } = atNoon(launchInput([lender, told(fresh, 'one'), told(fresher, 'two')]));
  expect(detail.given).toMatchObject({ wind: 2.62, from: 240, gust: 4.12 });
});
