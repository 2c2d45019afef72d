// Table 4-A of the assurance page, row by row, from a provider's text to the verdicts of the day. The rows about bytes
// and JSON (A2-A10) are in read-json.test.ts and, over real sockets, in test/faults/forecast/wire.test.ts.
import { afterAll, describe, expect, test } from 'vitest';
import type { Verdict } from '../../../lib/margin/ids.ts';
import { openMeteoFaults } from '../../support/forecast-server/payload-faults.ts';
import { answer, cleanLocation, entryOf, judge, read, runAt, textOf } from './pipeline.ts';

const entry = entryOf('open-meteo:icon_d2');
const sheetId = 'descent-experienced';

function dayOf(text: string, run: string | null = runAt) {
  return judge([answer(entry, read(text, entry, { run }))], { sheetId });
}

function spoilt(fault: string) {
  const location = cleanLocation(entry);
  openMeteoFaults[fault]!(location);
  return dayOf(textOf(location));
}

const clean = dayOf(textOf(cleanLocation(entry)));
const count = (verdicts: readonly Verdict[], ...wanted: Verdict[]) => verdicts.filter((verdict) => wanted.includes(verdict)).length;
const verdicts = (day: typeof clean) => day.hours.map(({ verdict }) => verdict);

const covered = new Set<string>(['A2', 'A3', 'A4', 'A5', 'A6', 'A7', 'A8', 'A9', 'A10']);
function row(name: string): string {
  for (const id of name.match(/A\d+/g) ?? []) covered.add(id);
  return name;
}

test('the clean day has no unknown hour and nothing beyond', () => {
  expect(verdicts(clean).length).toBe(15);
  expect(count(verdicts(clean), 'unknown', 'beyond')).toBe(0);
});

describe('costs the source its vote: the whole day cannot be said', () => {
  const said: [string, string, string][] = [
    ['A11: hourly missing', 'no-hourly', 'its answer lacked what was asked for ($.hourly)'],
    ['A11: hourly null', 'hourly-null', 'its answer lacked what was asked for ($.hourly)'],
    ['A11: hourly a list', 'hourly-list', 'its answer lacked what was asked for ($.hourly)'],
    ['A12: no times', 'no-time', 'its answer lacked what was asked for ($.hourly.time)'],
    ['A13: empty lists are not a calm day', 'nothing-in-it', 'it gave no hours'],
    ['A16: times unsorted', 'unsorted', 'its hours are out of order'],
    ['A17: a time twice', 'same-hour-twice', 'an hour comes twice'],
    ['A19: three-hourly, never interpolated', 'three-hourly', 'its hours are not an hour apart'],
    ['A20, A21: local times without offset, in a week with or without a clock change', 'local-times', 'its hours are not in UTC'],
    ['A22, A24: an answer in another zone, shifted by an hour', 'offset', 'its hours are not in UTC'],
    ['A23: milliseconds for seconds', 'milliseconds', 'its hours are not an hour apart'],
    ['A25: all of it yesterday', 'yesterday', 'its hours are of another day'],
    ['a two-day-old answer', 'two-days-old', 'its hours are of another day'],
    ['A42: km/h where m/s were asked for', 'kmh', 'wind_speed_10m: in km/h, m/s was asked for'],
    ['A42, F23: only the unit says km/h', 'kmh-labels-only', 'wind_speed_10m: in km/h, m/s was asked for'],
    ['A43: no unit', 'unit-missing', 'wind_gusts_10m: unit not given, m/s was asked for'],
    ['A44: knots', 'knots', 'wind_speed_10m: in kn, m/s was asked for'],
    ['A45: inches', 'inch', 'precipitation: in inch, mm was asked for'],
    ['A46: latitude and longitude swapped', 'swapped', 'its grid point is'],
    ['A47: a grid point 60 km away', 'far-60-km', 'its grid point is 60 km away'],
    ['F22: a grid point 40 km away', 'far-40-km', 'its grid point is 40 km away'],
    ['a grid point 300 km away', 'far-300-km', 'its grid point is 300 km away'],
    ['a place without latitude', 'no-place', 'its answer lacked what was asked for ($.latitude)'],
    ['A48: no elevation', 'no-elevation', 'it does not say how high its ground is'],
    ['A48: elevation null', 'elevation-null', 'it does not say how high its ground is'],
    ['A52, F24: the same wind all day', 'constant-wind', 'the same'],
    ['A52, F24: the same gust all day', 'constant-gusts', 'the same'],
    ['A52: the same temperature all day', 'constant-temperature', 'the same'],
    ['A52: all zeros', 'all-zero', 'the same'],
  ];
  test.each(said.map(([name, fault, why]) => [row(name), fault, why] as const))('%s', (_, fault, why) => {
    const day = spoilt(fault);
    expect(verdicts(day)).toEqual(clean.hours.map(() => 'unknown'));
    expect(day.sources[0]).toMatchObject({ state: 'no vote' });
    expect(day.sources[0]?.why?.startsWith(why), day.sources[0]?.why ?? '').toBe(true);
  });

  test.each([
    [row('A49: no run time'), null, 'it does not say when its run was made'],
    [row('A50, F30: a run three hours in the future'), '2027-05-14T06:00:00Z', 'its run lies 3 h in the future'],
    [row('A51: a run 18 h 01 min old'), '2027-05-13T08:59:00Z', 'its run is 18 h old'],
    [row('F17: a run 30 h old'), '2027-05-12T21:00:00Z', 'its run is 30 h old'],
  ])('%s', (_, run, why) => {
    const day = dayOf(textOf(cleanLocation(entry)), run);
    expect(verdicts(day)).toEqual(clean.hours.map(() => 'unknown'));
    expect(day.sources[0]?.why).toBe(why);
  });

  test.each(['null', '[]', '"x"', '42', 'true', '{}', '[null]', '[[]]'])(row('A1: %s as the whole body'), (body) => {
    expect(verdicts(dayOf(body))).toEqual(clean.hours.map(() => 'unknown'));
  });

  test('F16: an error under status 200', () => {
    const day = dayOf('{"error":true,"reason":"<script>alert(1)</script>"}');
    expect(day.sources[0]?.why).toBe('it refused the question (status 200)');
    expect(JSON.stringify(day)).not.toContain('script');
  });
});

describe('costs its fields: every hour that needs them cannot be said, and the field is named', () => {
  test.each(
    (
      [
        ['A14: columns one shorter than the times', 'short-columns', 'wind10m.speedMps'],
        ['A15: columns one longer', 'long-columns', 'wind10m.speedMps'],
        ['no columns at all', 'missing-columns', 'wind10m.speedMps'],
        ['A28: null everywhere', 'all-null', 'wind10m.speedMps'],
        ['F20: no gusts', 'no-gusts', 'gustMps'],
        ['all gusts null', 'all-null-gusts', 'gustMps'],
        ['gusts whose unit is "undefined"', 'undefined-gusts', 'gustMps'],
        ['A29: numbers as texts', 'strings', 'wind10m.speedMps'],
        ['A30: "", [], [5], {}, true for numbers', 'odd-types', 'wind10m.speedMps'],
        ['A31: 1e999 and -1e999', 'infinite', 'wind10m.speedMps'],
        ['A33: sentinels', 'sentinels', 'wind10m.speedMps'],
        ['A34: a wind of -3', 'negative-wind', 'wind10m.speedMps'],
        ['A35: a wind of 400 km/h', 'absurd-wind', 'wind10m.speedMps'],
        ['A36: gusts 1.5 m/s below the mean', 'gust-below-mean', 'gustMps'],
        ['A37: directions of 361, -10 and 720', 'absurd-direction', 'wind10m.fromDeg'],
        ['A40: a humidity of 130 %', 'humidity-130', 'relativeHumidityPct'],
        ['A40: a probability of -1', 'probability-minus-1', 'precipitationProbabilityPct'],
        ['A41: kelvin under °C', 'kelvin', 'temperature2mC'],
      ] as [string, string, string][]
    ).map(([name, fault, field]) => [row(name), fault, field] as const),
  )('%s', (_, fault, field) => {
    const day = spoilt(fault);
    expect(count(verdicts(day), 'within', 'close')).toBe(0);
    expect(day.sources[0]).toMatchObject({ state: 'voted' });
    for (const { margins } of day.hours) expect(margins.flatMap(({ missing }) => missing).join(' ')).toContain(field);
  });

  test.each([
    [row('A18: the missing hour in the middle only'), 'hour-missing', 1],
    [row('A27, F19: the hour that is null'), 'null-hour', 1],
    [row('A26: the half that is not covered'), 'half-day', 8],
  ])('%s', (_, fault, atLeast) => {
    const day = spoilt(fault);
    const unknown = day.hours.filter(({ verdict }) => verdict === 'unknown');
    expect(unknown.length).toBeGreaterThanOrEqual(atLeast);
    expect(unknown.length).toBeLessThanOrEqual(atLeast + 3);
    expect(count(verdicts(day), 'within', 'close')).toBe(15 - unknown.length);
    expect(day.verdict).toBe('unknown');
  });

  test('F21: the last three hours null after a failed update', () => {
    const location = cleanLocation(entry);
    for (const column of Object.values(location.hourly).slice(1)) column.fill(null, column.length - 9);
    const day = dayOf(textOf(location));
    expect(verdicts(day).slice(-3)).toEqual(['unknown', 'unknown', 'unknown']);
    expect(day.verdict).toBe('unknown');
  });
});

describe('is accepted', () => {
  test.each([
    [row('A32: -0 and 1e-320'), 'tiny-numbers'],
    [row('A36: gusts half a metre a second below the mean count as equal to it'), 'gust-just-below-mean'],
  ])('%s', (_, fault) => {
    const day = spoilt(fault);
    expect(count(verdicts(day), 'unknown')).toBe(0);
  });

  test(row('A38: a direction of 360 is 0'), () => {
    const [north, full] = [0, 360].map((deg) => {
      const location = cleanLocation(entry);
      for (const [name, column] of Object.entries(location.hourly)) if (name.startsWith('wind_direction')) column.fill(deg);
      return read(textOf(location), entry);
    });
    expect(full).toEqual(north);
    expect(full?.ok).toBe(true);
  });

  test(row('A39: a calm has no direction to be missing'), () => {
    const location = cleanLocation(entry);
    location.hourly['wind_speed_10m']![12] = 0.2;
    location.hourly['wind_direction_10m']![12] = null;
    expect(count(verdicts(dayOf(textOf(location))), 'unknown')).toBe(0);
    location.hourly['wind_speed_10m']![12] = 1.4;
    expect(count(verdicts(dayOf(textOf(location))), 'unknown')).toBe(1);
  });

  test(row('A51: a run of exactly 18 h'), () => {
    expect(verdicts(dayOf(textOf(cleanLocation(entry)), '2027-05-13T09:00:00Z'))).toEqual(verdicts(clean));
  });
});

test(row('A53: exactly on a limit is not beyond it, a hundredth more is'), () => {
  const at = (capeJkg: number) => {
    const location = cleanLocation(entry);
    location.hourly['cape']![12] = capeJkg;
    const day = dayOf(textOf(location));
    return day.hours.flatMap(({ margins }) => margins.filter(({ id, spare }) => id === 'storm' && (spare ?? 9999) <= 0.1)).map(({ status, spare }) => [status, spare]);
  };
  expect(at(800)).toEqual([['close', 0]]);
  expect(at(800.01)).toEqual([['beyond', expect.closeTo(-0.01, 6)]]);
});

test(row('A54: one hour beyond while another is null: the day is beyond, and the null is named'), () => {
  const location = cleanLocation(entry);
  location.hourly['wind_gusts_10m']![9] = null;
  location.hourly['wind_gusts_10m']![14] = 19;
  const day = dayOf(textOf(location));
  expect(day.verdict).toBe('beyond');
  expect(day.hours.filter(({ margins }) => margins.some(({ id, missing }) => id === 'gust' && missing.includes('gustMps')))).toHaveLength(2);
  expect(day.hours.filter(({ causes }) => causes[0] === 'gust' || causes.includes('gust')).length).toBeGreaterThanOrEqual(4);
});

test('a hostile text in every place where a text can stand reaches nothing', () => {
  const location = cleanLocation(entry);
  openMeteoFaults['hostile-text']!(location);
  const day = dayOf(textOf(location));
  expect(day.sources[0]?.why).toBe('wind_gusts_10m: in another unit, m/s was asked for');
  expect(JSON.stringify(day)).not.toMatch(/script|BEGIN:|evil|<b>/);
});

afterAll(() => {
  const missing = Array.from({ length: 54 }, (_, i) => `A${i + 1}`).filter((id) => !covered.has(id));
  expect(missing, 'rows of table 4-A without a test').toEqual([]);
});
