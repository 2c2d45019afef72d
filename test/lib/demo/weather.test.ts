// The invented weather hangs together as weather does. Bounds are common practice and textbook shape, no source.
import { describe, expect, test } from 'vitest';
import { checkHour } from '../../../lib/forecast/ranges.ts';
import { constantField } from '../../../lib/forecast/constant.ts';
import { CONDITION_FIELDS } from '../../../lib/forecast/conditions.ts';
import { dateShare } from '../../../lib/forecast/invented/date-share.ts';
import { clearSkyWm2, mixedLayerM, sunDay, throughCloud } from '../../../lib/forecast/invented/sun-day.ts';
import { inventedForecast } from '../../../lib/forecast/invented/forecast.ts';
import { angleBetweenDeg } from '../../../lib/angles.ts';
import { localClock } from '../../../lib/time.ts';
import { answers, config, datesOf2028, forecast, hours, site } from './scenario.ts';

const open = ['wennet-meadow', 'orlask-shoulder', 'tivvern-strip', 'quorrin-edge'];
const sample = datesOf2028(45);

function hourAt(id: string, date: string, clock: string) {
  const found = hours(id, date).find(({ validAt }) => localClock(Date.parse(validAt), site(id).timeZone) === clock);
  if (found === undefined) throw new Error(`${id} has no ${clock} on ${date}`);
  return found;
}

describe('every hour', () => {
  test.each(open)('at %s passes the gate of plausible ranges, in every source', (id) => {
    for (const date of sample) {
      for (const source of config.demo.sources) {
        const { members, declares } = forecast(id, date, source.id);
        for (const hour of members.flat()) {
          const checked = checkHour(hour);
          for (const field of declares) {
            const value: unknown = checked[field];
            if (typeof value === 'number') expect(Number.isFinite(value), `${source.id} ${hour.validAt} ${field}`).toBe(true);
          }
          expect(Number.isFinite(checked.wind10m.speedMps)).toBe(true);
          for (const level of checked.levels) expect(Object.values(level).every((value) => Number.isFinite(value))).toBe(true);
          expect(checked.gustRaised).toBe(false);
        }
      }
    }
  });

  test('of every member differs from a stuck feed', () => {
    for (const id of open) for (const { members } of config.demo.sources.map((source) => forecast(id, '2028-05-14', source.id))) for (const member of members) expect(constantField(member)).toBeNull();
  });

  test('carries what its source declares and nothing else', () => {
    for (const source of config.demo.sources) {
      const { members, declares } = forecast('tivvern-strip', '2028-05-14', source.id);
      const given = CONDITION_FIELDS.filter((field) => members[0]?.[0]?.[field] !== undefined);
      expect([...declares].sort()).toEqual([...given].sort());
    }
  });
});

describe('a summer day in the valley', () => {
  const day = '2028-07-10';

  test('is coldest at sunrise and warmest before the front', () => {
    const temperatures = hours('wennet-meadow', day).map(({ temperature2mC }) => temperature2mC ?? NaN);
    const coldest = temperatures.indexOf(Math.min(...temperatures.slice(0, 12)));
    expect([4, 5, 6]).toContain(coldest);
    expect([12, 13, 14, 15, 16]).toContain(temperatures.indexOf(Math.max(...temperatures)));
  });

  test('digs its mixed layer all morning', () => {
    const depths = ['06:00', '08:00', '10:00'].map((clock) => hourAt('wennet-meadow', day, clock).mixedLayerM ?? NaN);
    expect([...depths].sort((a, b) => a - b)).toEqual(depths);
    expect(depths[0]).toBeLessThan(250);
  });

  test('has a breeze up the valley by noon', () => {
    const noon = hourAt('tivvern-strip', day, '13:00').wind10m;
    expect(noon?.speedMps).toBeGreaterThan(2);
    expect(angleBetweenDeg(noon?.fromDeg ?? NaN, 205)).toBeLessThan(15);
  });

  test('has its front in the afternoon: the wind veers and freshens, rain falls, the pressure turns', () => {
    const [before, after] = [hourAt('wennet-meadow', day, '13:00'), hourAt('wennet-meadow', day, '18:00')];
    expect(angleBetweenDeg(after.wind10m?.fromDeg ?? NaN, 300)).toBeLessThan(20);
    expect(after.wind10m?.speedMps).toBeGreaterThan((before.wind10m?.speedMps ?? NaN) + 2);
    expect(before.precipitationMm).toBe(0);
    expect(after.precipitationMm).toBeGreaterThan(1);
    expect(after.temperature2mC).toBeLessThan((before.temperature2mC ?? NaN) - 2);
    const pressures = hours('wennet-meadow', day).map(({ seaLevelPressureHpa }) => seaLevelPressureHpa ?? NaN);
    const lowest = pressures.indexOf(Math.min(...pressures));
    expect(lowest).toBeGreaterThan(12);
    expect(lowest).toBeLessThan(19);
  });

  test('comes with thunder in July and without in January', () => {
    expect(hours('wennet-meadow', day).some(({ weatherCode }) => weatherCode === 95)).toBe(true);
    expect(hours('wennet-meadow', '2028-01-10').some(({ weatherCode }) => weatherCode === 95)).toBe(false);
  });

  test('begins with fog on the strip that the sun burns off', () => {
    expect(hourAt('tivvern-strip', day, '06:00').visibilityM).toBeLessThan(500);
    expect(hourAt('tivvern-strip', day, '09:00').visibilityM).toBeGreaterThan(20_000);
  });
});

describe('the seasons', () => {
  test('are opposite on either half of the globe', () => {
    const noonC = (id: string, date: string): number => hourAt(id, date, '12:00').temperature2mC ?? NaN;
    expect(noonC('wennet-meadow', '2028-07-10')).toBeGreaterThan(noonC('wennet-meadow', '2028-01-10') + 12);
    expect(noonC('quorrin-edge', '2028-01-10')).toBeGreaterThan(noonC('quorrin-edge', '2028-07-10') + 5);
  });

  test('do not jump from one year to the next', () => {
    const lastHour = hours('wennet-meadow', '2027-12-31').at(-1)?.temperature2mC ?? NaN;
    const firstHour = hours('wennet-meadow', '2028-01-01')[0]?.temperature2mC ?? NaN;
    expect(Math.abs(firstHour - lastHour)).toBeLessThan(5);
  });
});

describe('the same output every run', () => {
  test('for the same site and date, whatever the clock says', () => {
    const [early, late] = [answers('tivvern-strip', '2028-05-14', 2), answers('tivvern-strip', '2028-05-14', 11)];
    expect(early.map(({ outcome }) => (outcome.ok ? outcome.value.members : null))).toEqual(late.map(({ outcome }) => (outcome.ok ? outcome.value.members : null)));
  });

  test('and the hour on either side is that of the day it belongs to', () => {
    const [first, second] = [forecast('wennet-meadow', '2028-05-14', 'invented:valley'), forecast('wennet-meadow', '2028-05-15', 'invented:valley')];
    const later = new Map(second.members[0]?.map((hour) => [hour.validAt, hour]));
    for (const hour of first.members[0] ?? []) if (later.has(hour.validAt)) expect(later.get(hour.validAt)).toEqual(hour);
  });

  test('the run is four to ten hours old', () => {
    for (const clockHour of [0, 3, 5, 9, 16, 23]) {
      for (const { outcome } of answers('tivvern-strip', '2028-05-14', clockHour)) {
        if (!outcome.ok) throw new Error(outcome.error.kind);
        const ageHours = (Date.parse(outcome.value.fetchedAt) - Date.parse(outcome.value.runAt ?? '')) / 3_600_000;
        expect(ageHours).toBeGreaterThanOrEqual(4);
        expect(ageHours).toBeLessThan(10);
      }
    }
  });
});

describe('what it is not', () => {
  test('every answer is marked as demo', () => {
    for (const { outcome } of answers('quorrin-edge', '2028-05-14')) expect(outcome.ok && outcome.value.demo).toBe(true);
  });

  test('the withheld site gets nothing from any source', () => {
    for (const { outcome } of answers('maddle-bowl', '2028-05-14')) expect(outcome).toEqual({ ok: false, error: { kind: 'withheld' } });
  });

  test('a site that the scenario does not know gets nothing either', () => {
    const source = config.demo.sources[0]!;
    const request = { site: { ...site('tivvern-strip'), id: 'a-real-place' }, fromUtc: '2028-05-14T00:00:00Z', toUtc: '2028-05-15T00:00:00Z', now: '2028-05-14T03:00:00Z' };
    expect(inventedForecast(config.demo, source, request)).toEqual({ ok: false, error: { kind: 'not-covered' } });
  });

  test('twenty members, each with a wind of its own', () => {
    const { members } = forecast('tivvern-strip', '2028-05-14', 'invented:ensemble');
    expect(members).toHaveLength(20);
    expect(new Set(members.map((hoursOf) => hoursOf[13]?.wind10m?.speedMps)).size).toBeGreaterThan(15);
  });
});

describe('the parts', () => {
  const place = site('wennet-meadow');

  test('clear sky gives about 900 W/m² on a midsummer noon and 350 on a midwinter one at 44° north', () => {
    const noonOf = (date: string): number => Math.max(...sunDay(place, date).clearWm2);
    expect(noonOf('2028-06-21')).toBeGreaterThan(880);
    expect(noonOf('2028-06-21')).toBeLessThan(1000);
    expect(noonOf('2028-12-21')).toBeGreaterThan(280);
    expect(noonOf('2028-12-21')).toBeLessThan(420);
  });

  test('the sun is down outside its day', () => {
    const day = sunDay(place, '2028-06-21');
    expect(clearSkyWm2(day, day.riseMs - 3_600_000)).toBe(0);
    expect(clearSkyWm2(day, day.toMs + 3_600_000)).toBe(0);
  });

  test('half a sky of cloud costs little, a whole one three quarters', () => {
    expect(throughCloud(0)).toBe(1);
    expect(throughCloud(0.5)).toBeGreaterThan(0.9);
    expect(throughCloud(1)).toBeCloseTo(0.25, 9);
  });

  test('a mixed layer grows with heat, shrinks with stability, and is held up by heating only', () => {
    const air = { lapseKpkm: 6, topM: 3000 };
    const depth = (sinceRiseKm: number, nowWm2 = 200, lapseKpkm = 6): number => mixedLayerM({ sinceRiseKm, nowWm2 }, { ...air, lapseKpkm });
    expect(depth(2000)).toBeGreaterThan(depth(1000));
    expect(depth(2000, 200, 4)).toBeLessThan(depth(2000));
    expect(depth(1e9)).toBe(3000);
    expect(depth(2000, 0)).toBe(80);
  });

  test('dates differ, and fill the whole of zero to one evenly', () => {
    const shares = datesOf2028().map((date) => dateShare(date, 'test'));
    expect(new Set(shares).size).toBe(366);
    for (let tenth = 0; tenth < 10; tenth += 1) {
      const inside = shares.filter((share) => share >= tenth / 10 && share < (tenth + 1) / 10).length;
      expect(inside).toBeGreaterThan(20);
      expect(inside).toBeLessThan(56);
    }
    expect(dateShare('2028-05-14', 'test')).toBe(dateShare('2031-05-14', 'test'));
  });
});
