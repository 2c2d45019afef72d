// "All four verdicts on any date of the year": judged from the invented forecasts with the published pairs, no worker.
import { beforeAll, describe, expect, test } from 'vitest';
import type { JudgedDay } from '../../../lib/brief/day.ts';
import type { Verdict } from '../../../lib/margin/ids.ts';
import { datesOf2028, judged } from './scenario.ts';

/** The training slope, the strip and the withheld bowl: between them they show all four. */
const byDate = new Map<string, readonly JudgedDay[]>();

beforeAll(() => {
  for (const date of datesOf2028()) byDate.set(date, ['wennet-meadow', 'tivvern-strip', 'maddle-bowl'].map((id) => judged(id, date)));
}, 240_000);

function missingDates(holds: (days: readonly JudgedDay[]) => boolean): string[] {
  return [...byDate].filter(([, days]) => !holds(days)).map(([date]) => date);
}

function hasHour(verdict: Verdict) {
  return (days: readonly JudgedDay[]): boolean => days.some(({ hours }) => hours.some((hour) => hour.verdict === verdict));
}

describe('on each of the 366 dates of a leap year', () => {
  test('are 366', () => {
    expect(byDate.size).toBe(366);
  });

  test.each(['within', 'close', 'beyond', 'unknown'] as const)('some judged hour is %s', (verdict) => {
    expect(missingDates(hasHour(verdict))).toEqual([]);
  });

  test.each(['within', 'close'] as const)('some window reads %s', (verdict) => {
    expect(missingDates((days) => days.some(({ windows }) => windows.some((window) => window.verdict === verdict)))).toEqual([]);
  });

  test('some day reads beyond a limit', () => {
    expect(missingDates((days) => days.some(({ verdict }) => verdict === 'beyond'))).toEqual([]);
  });

  test('the withheld site cannot say, all day, and names no other cause', () => {
    const odd = missingDates(([, , withheld]) => {
      return withheld !== undefined && withheld.verdict === 'unknown' && withheld.windows.length === 0 && withheld.sources.every(({ state }) => state === 'no vote');
    });
    expect(odd).toEqual([]);
  });

  test('every day is marked as invented', () => {
    expect(missingDates((days) => days.every(({ demo }) => demo))).toEqual([]);
  });

  test('the strip\'s window ends before the front of the afternoon', () => {
    const odd = missingDates(([, strip]) => strip?.windows.at(-1)?.to !== strip?.hours.at(-1)?.validAt);
    expect(odd).toEqual([]);
  });
});

describe('through the year, every twentieth date', { timeout: 60_000 }, () => {
  const sample = datesOf2028(20);

  test('the mountain launch has a window in the morning and is beyond a limit in the afternoon', () => {
    for (const date of sample) {
      const day = judged('orlask-shoulder', date);
      expect(day.windows[0]?.from, date).toBe(day.hours[0]?.validAt);
      expect(day.hours.at(-2)?.verdict, date).toBe('beyond');
    }
  });

  test('the ridge waits for its wind and then has a window', () => {
    for (const date of sample) {
      const day = judged('quorrin-edge', date);
      expect(day.hours[0]?.causes, date).toContain('ridgeLift');
      expect(day.windows.length, date).toBeGreaterThan(0);
    }
  });

  test('nothing but the withheld data is ever unknown', () => {
    for (const date of sample) {
      for (const id of ['wennet-meadow', 'orlask-shoulder', 'tivvern-strip', 'quorrin-edge']) {
        const unknown = judged(id, date).hours.flatMap(({ margins }) => margins.filter(({ status }) => status === 'unknown').map((margin) => margin.id));
        expect([...new Set(unknown)], `${id} ${date}`).toEqual([]);
      }
    }
  });

  test('the sources disagree somewhere on every date', () => {
    for (const date of sample) {
      const days = ['wennet-meadow', 'tivvern-strip', 'orlask-shoulder'].map((id) => judged(id, date));
      expect(days.some(({ hours }) => hours.some(({ bySource }) => new Set(bySource.map(({ verdict }) => verdict)).size > 1)), date).toBe(true);
    }
  });
});
