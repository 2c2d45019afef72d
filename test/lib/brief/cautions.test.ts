// Every caution: it holds just past its threshold, with its number and its hours, and is silent just short of it.
import { describe, expect, test } from 'vitest';
import { airAt } from '../../../lib/air/column.ts';
import { CAUTION_IDS, type Caution, type CautionId } from '../../../lib/brief/cautions.ts';
import type { DayInput } from '../../../lib/brief/day-input.ts';
import type { JudgedDay } from '../../../lib/brief/day.ts';
import { judgeDay } from '../../../lib/brief/judge-day.ts';
import { windChillC } from '../../../lib/air/wind-chill.ts';
import { legalDay, sunAt } from '../../../lib/sky/sun.ts';
import type { Forecast } from '../../../lib/forecast/conditions.ts';
import type { Site } from '../../../lib/site.ts';
import { HOUR_MS, isoUtc, MINUTE_MS } from '../../../lib/time.ts';
import {
  ALPINE, ALPINE_GROUND_M, DATE, forecastOf, inputOf, instantAt, ISSUED_AT, QUIET, sheetOf, STRIP, STRIP_GROUND_M, thresholds, type Day, type Sky,
} from '../../support/typical-days.ts';

/** A quiet day with a fresh enough wind to have a direction, changing a little from hour to hour as weather does. */
const usual: Day = (hour) => ({ ...QUIET, wind: [2 + hour / 100, 250], gustMps: 3.2 + hour / 100, temperatureC: 12 + hour / 100 });

/** The usual day with other words in some hours, the others as they are. */
function changed(words: Partial<Sky>, fromHour = -Infinity, toHour = Infinity): Day {
  return (hour) => (hour >= fromHour && hour <= toHour ? { ...usual(hour), ...words } : usual(hour));
}

interface Given {
  readonly site?: Site;
  readonly sheet?: string;
  readonly groundM?: number;
  readonly sources?: (tell: (source: string, day?: Day, more?: Partial<Forecast>) => Forecast) => readonly Forecast[];
  readonly input?: Partial<DayInput>;
}

/** The day as two sources tell it alike. */
function dayOf(day: Day, given: Given = {}): JudgedDay {
  const site = given.site ?? ALPINE;
  const groundM = given.groundM ?? (site.kind === 'strip' ? STRIP_GROUND_M : ALPINE_GROUND_M);
  const tell = (source: string, told: Day = day, more: Partial<Forecast> = {}) => forecastOf({ groundM, day: told, source, ...more });
  const forecasts = given.sources?.(tell) ?? [tell('one'), tell('other')];
  const sheet = given.sheet ?? (site.kind === 'strip' ? 'solo-tow' : 'descent-experienced');
  return judgeDay({ ...inputOf({ site, sheet, forecasts }), ...given.input });
}

const covered = new Set<CautionId>();

function found(id: CautionId, day: Day, given: Given = {}): Caution[] {
  covered.add(id);
  return dayOf(day, given).cautions.filter((caution) => caution.id === id);
}

const at = (localHour: number) => isoUtc(instantAt(localHour));

/** First and last judged hour: on the hour, inside the legal day. */
const FIRST_H = 6;
const LAST_H = 20;

test('the usual day has nothing to say but its end', () => {
  expect(dayOf(usual).cautions.map(({ id }) => id)).toEqual(['lastLight']);
  expect([dayOf(usual).hours[0]!.validAt, dayOf(usual).hours.at(-1)!.validAt]).toEqual([at(FIRST_H), at(LAST_H)]);
});

describe('of the sky', () => {
  test('storm by CAPE, with the most of it and the hours', () => {
    const rising: Day = (hour) => ({ ...usual(hour), capeJkg: hour === 14 ? 740 : hour === 15 ? 500 : hour === 16 ? 499 : 100 });
    expect(found('storm', rising)).toEqual([{ id: 'storm', value: 740, unit: 'J/kg', from: at(14), to: at(15), subject: null }]);
    expect(found('storm', changed({ capeJkg: 499 }))).toEqual([]);
  });

  test.each([[95, true], [91, true], [99, true], [17, true], [29, true], [82, false], [90, false], [16, false], [18, false]])('storm by weather code %i: %s', (weatherCode, said) => {
    const caution = { id: 'storm', value: null, unit: null, from: at(15), to: at(16), subject: null };
    expect(found('storm', changed({ weatherCode }, 15, 16))).toEqual(said ? [caution] : []);
  });

  test('strong thermals, at the threshold or at three quarters of what the sheet allows, whichever is less', () => {
    const hot = changed({ shortwaveWm2: 620, mixedLayerM: 1200 }, 12, 14);
    const [strength] = found('strongThermals', hot, { input: { thresholds: { ...thresholds, thermalMps: 0.5 } } });
    const mps = strength!.value!;
    expect(strength).toMatchObject({ unit: 'm/s', from: at(12), to: at(14) });
    const by = (thermalMps: number, maxThermalMps: number) => {
      const sheet = sheetOf('descent-experienced');
      return found('strongThermals', hot, { input: { thresholds: { ...thresholds, thermalMps }, sheet: { ...sheet, limits: { ...sheet.limits, maxThermalMps } } } });
    };
    expect(by(mps - 0.01, 9)).toHaveLength(1);
    expect(by(mps + 0.01, 9)).toEqual([]);
    expect(by(9, (mps - 0.01) / 0.75)).toHaveLength(1);
    expect(by(9, (mps + 0.01) / 0.75)).toEqual([]);
    const { maxThermalMps: _, ...limits } = sheetOf('descent-experienced').limits;
    const silent = { ...sheetOf('descent-experienced'), limits };
    expect(found('strongThermals', hot, { input: { thresholds: { ...thresholds, thermalMps: mps - 0.01 }, sheet: silent } })).toHaveLength(1);
    expect(found('strongThermals', hot, { input: { thresholds: { ...thresholds, thermalMps: mps + 0.01 }, sheet: silent } })).toEqual([]);
  });

  test('low cloud, by the base above the launch, the lowest of the day', () => {
    // Two kelvin of spread over the whole layer: the base a good two hundred metres above the launch, at nine only.
    const humid: Day = (hour) => (hour === 9 ? { ...usual(hour), temperatureC: 12, dewPointC: 10, air: [[2500, 3.4, 87]] } : usual(hour));
    const [low] = found('lowCloud', humid);
    expect(low).toMatchObject({ unit: 'm', from: at(9), to: at(9), subject: null });
    expect(low!.value).toBeGreaterThan(200);
    expect(low!.value).toBeLessThanOrEqual(300);
    const by = (lowCloudM: number) => found('lowCloud', humid, { input: { thresholds: { ...thresholds, lowCloudM } } });
    expect(by(low!.value!)).toHaveLength(1);
    expect(by(low!.value! - 0.001)).toEqual([]);
  });

  test('fog, by visibility, the worst of it', () => {
    const foggy: Day = (hour) => ({ ...usual(hour), visibilityM: hour === 6 ? 200 : hour === 7 ? 1000 : hour === 8 ? 1001 : 40_000 });
    expect(found('lowCloud', foggy)).toEqual([{ id: 'lowCloud', value: 200, unit: 'm', from: at(6), to: at(7), subject: 'visibility' }]);
  });

  test('foehn, by the step between the two reference points, either way', () => {
    const points = { a: { name: 'South', lonDeg: 11, latDeg: 46.5 }, b: { name: 'North', lonDeg: 11, latDeg: 47.8 } };
    const site = { ...ALPINE, pressureStep: points };
    for (const step of [[1019, 1016], [1016, 1019]] as const) {
      expect(found('foehn', changed({ pressureStep: step }, 10, 12), { site })).toEqual([{ id: 'foehn', value: 3, unit: 'hPa', from: at(10), to: at(12), subject: 'South to North' }]);
    }
    expect(found('foehn', changed({ pressureStep: [1019, 1016.01] }), { site })).toEqual([]);
    expect(found('foehn', changed({ pressureStep: [1019, 1010] }))).toEqual([]);
  });

  test('cold, by the wind chill at trim speed, the coldest of it', () => {
    const cold: Day = (hour) => ({ ...usual(hour), temperatureC: hour === 7 ? -3 : hour === 8 ? -2 : 6 + hour / 100, dewPointC: -12, air: [[2500, -8, 40]] });
    const [chill] = found('cold', cold);
    expect(chill).toMatchObject({ unit: '°C', from: at(7), to: at(8) });
    // At the launch, some degrees of the lapse below the model's 2 m, and in 10 to 11 m/s of airspeed.
    const column = { altitudeM: [1180, 2500], temperatureC: [-3, -8], dewPointC: [-12, -20], pressureHpa: [880, 750], carriesUp: false };
    expect(chill!.value).toBeCloseTo(windChillC(airAt(column, 1340).temperatureC, 10.9), 0);
    const by = (chillC: number) => found('cold', cold, { input: { thresholds: { ...thresholds, windChillC: chillC } } });
    expect(by(chill!.value!)).toHaveLength(1);
    expect(by(chill!.value! - 0.001)).toEqual([]);
  });

  test('a front by falling pressure, over three hours', () => {
    const falling = (hpa: number): Day => (hour) => ({ ...usual(hour), seaLevelHpa: hour < 12 ? 1016 : 1016 - hpa });
    expect(found('front', falling(2))).toEqual([{ id: 'front', value: 2, unit: 'hPa', from: at(12), to: at(14), subject: null }]);
    expect(found('front', falling(1.99))).toEqual([]);
    expect(found('front', falling(-3))).toEqual([]);
  });

  test('a front by the turn of the wind, over two hours and only while it blows', () => {
    const turning = (deg: number, speedMps = 3.1): Day => (hour) => ({ ...usual(hour), wind: [speedMps + hour / 1000, hour < 13 ? 240 : 240 + deg], gustMps: 4 + hour / 1000 });
    expect(found('front', turning(60))).toEqual([{ id: 'front', value: expect.closeTo(60, 9), unit: '°', from: at(13), to: at(14), subject: null }]);
    expect(found('front', turning(59))).toEqual([]);
    expect(found('front', turning(80, 2.9))).toEqual([]);
  });

  test('falling pressure is said before the turn', () => {
    const both: Day = (hour) => ({ ...usual(hour), seaLevelHpa: hour < 12 ? 1016 : 1011, wind: [4 + hour / 1000, hour < 13 ? 200 : 300], gustMps: 6 + hour / 1000 });
    expect(found('front', both).map(({ unit }) => unit)).toEqual(['hPa']);
  });

  test('a wet wing after rain, for two hours', () => {
    expect(found('wet', changed({ rainMm: 0.2 }, 10, 10))).toEqual([{ id: 'wet', value: 0.2, unit: 'mm', from: at(12), to: at(12), subject: null }]);
    expect(found('wet', changed({ rainMm: 0.19 }, 10, 10))).toEqual([]);
  });

  test('a wet wing from the dew of the first hours of light', () => {
    const dewy = (spreadK: number, hour: number) => changed({ temperatureC: 8, dewPointC: 8 - spreadK, air: [[1500, 9, 40], [2500, 3, 40]] }, hour, hour);
    expect(found('wet', dewy(1, FIRST_H))).toEqual([{ id: 'wet', value: expect.closeTo(1, 9), unit: 'K', from: at(FIRST_H), to: at(FIRST_H), subject: null }]);
    expect(found('wet', dewy(0.5, FIRST_H + 1))).toHaveLength(1);
    expect(found('wet', dewy(0.5, FIRST_H + 2))).toEqual([]);
    expect(found('wet', dewy(1.01, FIRST_H))).toEqual([]);
  });
});

describe('of the wind', () => {
  test('light wind at launch: below its bound in every source, said with the bound', () => {
    const still = (speedMps: number) => changed({ wind: [speedMps, 160], gustMps: 2.5, aloft: [[1300, speedMps, 160], [3000, 3, 250]] }, 9, 10);
    expect(found('lightWind', still(1.33))).toEqual([{ id: 'lightWind', value: 1.34, unit: 'm/s', from: at(9), to: at(10), subject: null }]);
    expect(found('lightWind', still(1.35))).toEqual([]);
    const oneBlows = { sources: (tell: (source: string, day?: Day) => Forecast) => [tell('one'), tell('other', usual)] };
    expect(found('lightWind', still(0.5), oneBlows)).toEqual([]);
  });

  test('wind across or behind above the launch, up to three hundred metres', () => {
    const across = (speedMps: number, fromDeg: number) => changed({ aloft: [[1345, 2, 250], [1441, speedMps, fromDeg], [1990, speedMps, fromDeg], [3000, 3, 250]] }, 15, 16);
    for (const fromDeg of [70, 160, 340]) expect(found('windAloft', across(5.6, fromDeg))).toEqual([{ id: 'windAloft', value: expect.any(Number), unit: 'm/s', from: at(15), to: at(16), subject: null }]);
    const [aloft] = found('windAloft', across(5.6, 160));
    const by = (mps: number) => found('windAloft', across(5.6, 160), { input: { thresholds: { ...thresholds, windAloftMps: mps } } });
    expect(aloft!.value).toBeGreaterThan(5);
    expect(aloft!.value).toBeLessThan(5.6);
    expect(by(aloft!.value!)).toHaveLength(1);
    expect(by(aloft!.value! + 0.001)).toEqual([]);
    // From straight ahead it is the business of other margins.
    expect(found('windAloft', across(9, 250))).toEqual([]);
    expect(found('windAloft', across(9, 70), { site: { ...STRIP, elevationM: 1340 }, groundM: 1300 })).toEqual([]);
  });

  test('a gradient at the landing, by the log law over its ground', () => {
    // Over 0.03 m of roughness the wind loses 27.7 % from 10 m to 2 m.
    const [gradient] = found('landingGradient', changed({ wind: [7.3, 250], gustMps: 9 }, 15, 17));
    expect(gradient).toMatchObject({ unit: 'm/s', from: at(15), to: at(17), subject: null });
    expect(gradient!.value).toBeCloseTo(7.3 * 0.27706, 3);
    expect(found('landingGradient', changed({ wind: [7.2, 250], gustMps: 9 }))).toEqual([]);
    expect(found('landingGradient', changed({ wind: [5.6, 250], gustMps: 7 }, 15, 15), { site: { ...ALPINE, landing: { ...ALPINE.landing, roughnessM: 0.3 } } })).toHaveLength(1);
    expect(found('landingGradient', changed({ wind: [5.6, 250], gustMps: 7 }, 15, 15), { site: { ...STRIP, roughnessM: 0.3 } })).toHaveLength(1);
  });

  test('a gust below its mean that was raised to it', () => {
    expect(found('lowQualityGust', changed({ wind: [3, 250], gustMps: 2.4 }, 11, 12))).toEqual([{ id: 'lowQualityGust', value: null, unit: null, from: at(11), to: at(12), subject: null }]);
    expect(found('lowQualityGust', changed({ wind: [3, 250], gustMps: 3 }, 11, 12))).toEqual([]);
  });
});

describe('just outside a window', () => {
  /** Open until two in the afternoon, then closed by haze; two hours later the day is what `after` says. */
  const closing = (after: (hour: number) => Partial<Sky>): Day => (hour) => ({ ...usual(hour), ...(hour > 14 ? { visibilityM: 3000, ...after(hour) } : {}) });
  const end = { from: at(14), to: null, subject: null };

  test('the wind rises within two hours of its end', () => {
    const rising = (byMps: number, when = 16) => closing((hour) => (hour === when ? { wind: [2.14 + byMps, 250], gustMps: 9 } : {}));
    expect(dayOf(rising(3)).windows).toHaveLength(1);
    expect(found('windRising', rising(3.001))).toEqual([{ id: 'windRising', value: expect.closeTo(3.001, 9), unit: 'm/s', ...end }]);
    expect(found('windRising', rising(3.5, 15))).toHaveLength(1);
    expect(found('windRising', rising(2.999))).toEqual([]);
    expect(found('windRising', rising(5, 17))).toEqual([]);
  });

  test('the wind turns within two hours of its end', () => {
    const turning = (deg: number, when = 16): Day => (hour) => ({ ...closing(() => ({}))(hour), wind: [3.1 + hour / 1000, hour === when ? 250 + deg : 250], gustMps: 4.2 + hour / 1000 });
    expect(found('windTurning', turning(45.001))).toEqual([{ id: 'windTurning', value: expect.closeTo(45.001, 9), unit: '°', ...end }]);
    expect(found('windTurning', turning(-50))).toHaveLength(1);
    expect(found('windTurning', turning(44.99))).toEqual([]);
    expect(found('windTurning', turning(80, 17))).toEqual([]);
  });

  test('rain falls in the two hours before or after', () => {
    const span = { from: at(FIRST_H), to: at(14), subject: null };
    for (const when of [4, 5, 15, 16]) {
      const wet: Day = (hour) => ({ ...closing(() => ({}))(hour), rainMm: hour === when ? 0.2 : 0 });
      expect(found('rainNear', wet)).toEqual([{ id: 'rainNear', value: 0.2, unit: 'mm', ...span }]);
    }
    for (const [when, rainMm] of [[15, 0.19], [17, 2], [3, 2]] as const) {
      expect(found('rainNear', (hour) => ({ ...closing(() => ({}))(hour), rainMm: hour === when ? rainMm : 0 }))).toEqual([]);
    }
  });

  test('the light goes within the hour', () => {
    const day = legalDay(ALPINE, DATE);
    if ('none' in day) throw new Error('no legal day');
    const toDarkMin = (day.toMs - instantAt(LAST_H)) / MINUTE_MS;
    expect(found('lastLight', usual)).toEqual([{ id: 'lastLight', value: toDarkMin, unit: 'min', from: at(LAST_H), to: isoUtc(day.toMs), subject: null }]);
    const by = (lastLightMin: number) => found('lastLight', usual, { input: { thresholds: { ...thresholds, lastLightMin } } });
    expect(by(toDarkMin)).toHaveLength(1);
    expect(by(toDarkMin - 0.01)).toEqual([]);
    expect(found('lastLight', closing(() => ({})))).toEqual([]);
  });
});

describe('of the place', () => {
  const known = [{ fromHour: 12, toHour: 17, speedMps: 7, fromDeg: 20 }];
  const site = { ...ALPINE, localWind: known };

  test('the wind it is known for, where no source has half of it from near there', () => {
    const said = [{ id: 'localWind', value: 7, unit: 'm/s', from: at(12), to: at(17), subject: null }];
    expect(found('localWind', usual, { site })).toEqual(said);
    expect(found('localWind', changed({ wind: [3.49, 20], gustMps: 5 }, 14, 14), { site })).toEqual(said);
    expect(found('localWind', changed({ wind: [3.5, 20], gustMps: 5 }, 14, 14), { site })).toEqual([]);
    expect(found('localWind', changed({ wind: [3.5, 80], gustMps: 5 }, 14, 14), { site })).toEqual([]);
    expect(found('localWind', changed({ wind: [3.5, 80.1], gustMps: 5 }, 14, 14), { site })).toEqual(said);
    expect(found('localWind', changed({ wind: [5, 20], gustMps: 6 }, 11, 11), { site })).toEqual(said);
    expect(found('localWind', usual)).toEqual([]);
  });

  test('over midnight its hours are those of the evening and the morning', () => {
    const nightly = { ...ALPINE, localWind: [{ ...known[0]!, fromHour: 19, toHour: 7 }] };
    expect(found('localWind', usual, { site: nightly })).toEqual([expect.objectContaining({ from: at(FIRST_H), to: at(LAST_H) })]);
    expect(found('localWind', changed({ wind: [4, 20], gustMps: 5 }, 19, 19), { site: nightly })).toEqual([]);
    expect(found('localWind', changed({ wind: [4, 20], gustMps: 5 }, 12, 12), { site: nightly })).toHaveLength(1);
  });

  test('thin air, with the density altitude it is like', () => {
    const warm: Day = (hour) => ({ ...usual(hour), temperatureC: hour >= 13 && hour <= 15 ? 26 + hour / 100 : 12 + hour / 100, air: [[2500, 8, 40]] });
    const [thin] = found('thinAir', warm);
    expect(thin).toMatchObject({ unit: 'm', from: at(13), to: at(15), subject: null });
    // Some 35 m a kelvin above the standard 6 °C of that height, a little less for the high pressure, more for the vapour.
    expect(thin!.value).toBeGreaterThan(1340 + 500);
    expect(thin!.value).toBeLessThan(1340 + 750);
    const by = (thinAirM: number) => found('thinAir', warm, { input: { thresholds: { ...thresholds, thinAirM } } });
    expect(by(thin!.value! - 1340 - 0.5)).toHaveLength(1);
    expect(by(thin!.value! - 1340 + 0.5)).toEqual([]);
  });

  test('low sun in the direction of launch', () => {
    const facing = (facingDeg: number) => found('lowSun', usual, { site: { ...ALPINE, facingDeg } });
    const dazzling = Array.from({ length: LAST_H - FIRST_H + 1 }, (_, i) => instantAt(FIRST_H + i)).filter((atMs) => {
      const { altitudeDeg, azimuthDeg } = sunAt(atMs, ALPINE);
      return altitudeDeg > 0 && altitudeDeg <= 15 && Math.abs(azimuthDeg - 290) <= 30;
    });
    expect(dazzling.length).toBeGreaterThan(0);
    expect(facing(290)).toEqual([{ id: 'lowSun', value: Math.min(...dazzling.map((atMs) => sunAt(atMs, ALPINE).altitudeDeg)), unit: '°', from: isoUtc(dazzling[0]!), to: isoUtc(dazzling.at(-1)!), subject: null }]);
    expect(facing(180)).toEqual([]);
    const { altitudeDeg, azimuthDeg } = sunAt(dazzling.at(-1)!, ALPINE);
    const by = (lowSunDeg: number, lowSunOffAxisDeg: number) => found('lowSun', usual, { site: { ...ALPINE, facingDeg: azimuthDeg - 20 }, input: { thresholds: { ...thresholds, lowSunDeg, lowSunOffAxisDeg } } });
    expect(by(altitudeDeg, 20.001)).toHaveLength(1);
    expect(by(altitudeDeg - 0.001, 20.001)).toEqual([]);
    expect(by(altitudeDeg, 19.999)).toEqual([]);
  });

  test('low sun in the direction of tow', () => {
    expect(found('lowSun', usual, { site: { ...STRIP, headingDeg: 290, usableBothWays: false } })).toHaveLength(1);
    expect(found('lowSun', usual, { site: { ...STRIP, headingDeg: 180, usableBothWays: false } })).toEqual([]);
  });

  test('a line that falls outside the clear strip', () => {
    const blowing = changed({ wind: [3, 200], gustMps: 4, aloft: [[1500, 4, 200], [3000, 5, 210]] }, 10, 12);
    const heights = dayOf(blowing, { site: STRIP }).hours.map(({ heading, validAt }) => ({ validAt, driftM: heading!.lineDriftM! }));
    const most = Math.max(...heights.map(({ driftM }) => driftM));
    const line = (lineClearM: number | null) => found('lineDrift', blowing, { site: { ...STRIP, lineClearM } });
    expect(line(most - 0.001)).toEqual([{ id: 'lineDrift', value: most, unit: 'm', from: expect.any(String), to: expect.any(String), subject: null }]);
    expect(line(most - 0.001)[0]!.from! >= at(10) && line(most - 0.001)[0]!.to! <= at(12)).toBe(true);
    expect(line(most)).toEqual([]);
    expect(line(null)).toEqual([]);
  });
});

describe('of the sources', () => {
  const whole = { from: null, to: null };

  test('one that has no vote', () => {
    const answers: DayInput['answers'] = [
      { source: 'gone', kind: 'deterministic', outcome: { ok: false, error: { kind: 'unreachable' } } },
      ...inputOf({ site: ALPINE, sheet: 'descent-experienced', forecasts: [forecastOf({ groundM: ALPINE_GROUND_M, day: usual, source: 'one' })] }).answers,
    ];
    expect(found('noVote', usual, { input: { answers } })).toEqual([{ id: 'noVote', value: null, unit: null, ...whole, subject: 'gone' }]);
    expect(found('noVote', usual)).toEqual([]);
  });

  test('they disagree on the mean wind', () => {
    const apart = (byMps: number): Given => ({ site: STRIP, sources: (tell) => [tell('one', changed({ wind: [2, 250] }, 9, 9)), tell('other', changed({ wind: [2 + byMps, 250], gustMps: 7 }, 9, 9))] });
    expect(found('disagree', usual, apart(3.0001))).toEqual([{ id: 'disagree', value: expect.closeTo(3.0001, 9), unit: 'm/s', from: at(9), to: at(9), subject: null }]);
    expect(found('disagree', usual, apart(2.999))).toEqual([]);
  });

  test('a run is older than twelve hours', () => {
    const aged = (minutes: number): Given => ({ sources: (tell) => [tell('young'), tell('aged', usual, { runAt: isoUtc(Date.parse(ISSUED_AT) - 12 * HOUR_MS - minutes * MINUTE_MS) })] });
    expect(found('oldForecast', usual, aged(6))).toEqual([{ id: 'oldForecast', value: expect.closeTo(12.1, 9), unit: 'h', ...whole, subject: 'aged' }]);
    expect(found('oldForecast', usual, aged(0))).toEqual([]);
  });

  test('only one speaks; one that just lends a depth does not', () => {
    const said = [{ id: 'singleSource', value: null, unit: null, ...whole, subject: 'one' }];
    expect(found('singleSource', usual, { sources: (tell) => [tell('one')] })).toEqual(said);
    expect(found('singleSource', usual, { sources: (tell) => [tell('one'), tell('lender', usual, { declares: ['mixedLayerM'] })] })).toEqual(said);
    expect(found('singleSource', usual)).toEqual([]);
  });

  test('one is trusted without a run time', () => {
    const given: Given = { sources: (tell) => [tell('one'), tell('undated', usual, { runAt: null, trustedWithoutRunTime: true })] };
    expect(found('noRunTime', usual, given)).toEqual([{ id: 'noRunTime', value: null, unit: null, ...whole, subject: 'undated' }]);
    expect(found('noRunTime', usual, { sources: (tell) => [tell('one'), tell('dated', usual, { trustedWithoutRunTime: true })] })).toEqual([]);
  });

  test('the weather is invented', () => {
    const said = [{ id: 'demo', value: null, unit: null, ...whole, subject: null }];
    expect(found('demo', usual, { sources: (tell) => [tell('one'), tell('other', usual, { demo: true })] })).toEqual(said);
    expect(found('demo', usual, { input: { demo: true } })).toEqual(said);
    expect(found('demo', usual)).toEqual([]);
  });
});

test('cautions come in one order, whatever found them', () => {
  const day = dayOf(changed({ capeJkg: 900, visibilityM: 500, wind: [8, 160], gustMps: 7.5, rainMm: 1 }, 10, 12), { input: { demo: true } });
  const order = day.cautions.map(({ id }) => CAUTION_IDS.indexOf(id));
  expect(order).toEqual([...order].sort((a, b) => a - b));
  expect(new Set(order).size).toBeGreaterThan(5);
});

test('every caution there is has been tried', () => {
  expect(CAUTION_IDS.filter((id) => !covered.has(id))).toEqual([]);
});
