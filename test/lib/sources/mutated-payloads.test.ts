// A hundred thousand spoilt answers (a million with DAWNMARGIN_PROVE=1): not one hour comes out within or close that the
// clean answer would not give, and nothing throws. The seed is printed; DAWNMARGIN_SEED repeats a run.
import { describe, expect, test } from 'vitest';
import { legalDay } from '../../../lib/sky/sun.ts';
import type { Verdict } from '../../../lib/margin/ids.ts';
import type { OpenMeteoSource } from '../../../lib/config/source-order.ts';
import type { Forecast } from '../../../lib/forecast/conditions.ts';
import { checkFrame } from '../../../lib/forecast/frame.ts';
import { checkHour } from '../../../lib/forecast/ranges.ts';
import { alone, judgedRules, measure, viewsOf } from '../../../lib/margin/judge-member.ts';
import { setUp } from '../../../lib/margin/setup.ts';
import { worstVerdict } from '../../../lib/margin/verdict.ts';
import { hourlyInstants, isoUtc } from '../../../lib/time.ts';
import type { Site } from '../../../lib/site.ts';
import { answer, cleanLocation, enB, entryOf, groundM, judge, readFor, sheets, site, textOf, type Window } from './pipeline.ts';
import { breakText, isWhole, mutations, seeded, type Spoilt } from './mutate.ts';

const ROUNDS = process.env['DAWNMARGIN_PROVE'] === '1' ? 1_000_000 : 100_000;
const SEED = Number(process.env['DAWNMARGIN_SEED'] ?? 20_271_221);

/** A northern launch on the shortest day: three legal hours, so that a round is short. */
const north: Site = { ...site, id: 'short-day', latDeg: 65.5, lonDeg: -19, timeZone: 'Atlantic/Reykjavik' };
const localDate = '2027-12-21';
const now = '2027-12-21T08:00:00Z';
const window: Window = { fromUtc: '2027-12-21T09:00:00Z', toUtc: '2027-12-21T18:00:00Z' };
const run = '2027-12-21T03:00:00Z';
const entry: OpenMeteoSource = { ...entryOf('open-meteo:gfs_global'), levelsHpa: [850, 700], nearGroundM: [80] };
const sheet = { ...sheets.find(({ id }) => id === 'descent-experienced')! };

const day = legalDay(north, localDate);
const judgedMs = 'none' in day ? [] : hourlyInstants(day.fromMs, day.toMs);
const judgedInstants = judgedMs.map(isoUtc);
const setup = setUp({ site: north, wing: enB, sheet });
const { rules } = judgedRules(setup);
const storedGroundM = { [entry.id]: groundM };

/** Verdicts that are known already, by everything an hour is judged from: the hour, the two after it, how high the winds reach. */
type Known = ReadonlyMap<string, Verdict>;

interface Judged {
  readonly verdicts: readonly Verdict[];
  readonly known: Known;
}

/** The judged hours by the judge's own parts, without the words and cautions around them; null: no vote. */
function judgedBy(forecast: Forecast, clean: Known = new Map()): Judged | null {
  const frame = checkFrame(forecast, { now, site: north, storedGroundM, judgedInstants });
  if (!frame.ok) return null;
  const hours = frame.value.members[0] ?? [];
  const views = viewsOf(setup, hours.map(checkHour), alone(forecast.declares));
  const known = new Map<string, Verdict>();
  const verdicts = views.flatMap((view, i) => {
    if (!judgedMs.includes(view.hour.validAtMs)) return [];
    const key = JSON.stringify([view.context.reachM, hours.slice(i, i + 3)]);
    const verdict = clean.get(key) ?? worstVerdict(rules.flatMap((rule) => measure(rule, view) ?? []).filter(({ noVote }) => !noVote).map(({ status }) => status));
    known.set(key, verdict);
    return [verdict];
  });
  return { verdicts, known };
}

/** Clean days that differ in what is wrong with their weather, so that losing it from the answer would show. */
const troubles: readonly (readonly [string, string, (hour: number) => number])[] = [
  ['none', 'temperature_2m', (hour) => 4 + hour / 10],
  ['a gust at noon', 'wind_gusts_10m', (hour) => (hour === 5 ? 14 : 4 + hour / 10)],
  ['thunder two hours later', 'weather_code', (hour) => (hour === 7 ? 95 : 1)],
  ['a strong wind aloft', 'wind_speed_700hPa', (hour) => (hour > 4 ? 22 : 9 + hour / 10)],
  ['a wind on the limit', 'wind_speed_10m', (hour) => 6.3 + hour / 50],
  ['rain', 'precipitation', (hour) => (hour === 6 ? 2 : 0)],
  ['fog', 'visibility', (hour) => (hour < 5 ? 800 : 20_000)],
  ['storms possible', 'cape', (hour) => (hour === 5 ? 1200 : 40)],
  ['a deep mixed layer', 'boundary_layer_height', (hour) => 400 + 90 * hour],
  ['a back wind', 'wind_direction_10m', (hour) => (hour === 5 ? 80 : 250 + hour)],
  ['warm air', 'shortwave_radiation', (hour) => 300 + 10 * hour],
  ['saturated air', 'relative_humidity_850hPa', (hour) => (hour > 3 ? 97 : 60)],
];

const days = troubles.map(([name, column, value]) => {
  const location = cleanLocation(entry, north, window);
  location.hourly[column] = location.hourly[column]!.map((_, hour) => value(hour));
  const text = textOf(location);
  const clean = readFor(text, entry, { site: north, window, run });
  if (!clean.ok) throw new Error(`${name}: ${JSON.stringify(clean.error)}`);
  const judged = judgedBy(clean.value);
  if (judged === null) throw new Error(`${name}: no vote`);
  return { name, text, clean: clean.value, ...judged };
});

const severity: readonly Verdict[] = ['within', 'close', 'unknown', 'beyond'];
const names = Object.keys(mutations);

/** What a spoilt answer may say: nothing, or no more than the clean one. */
function isAllowed(spoilt: readonly Verdict[] | null, clean: readonly Verdict[]): boolean {
  if (spoilt === null) return true;
  return spoilt.length === clean.length && spoilt.every((verdict, i) => severity.indexOf(verdict) >= Math.min(severity.indexOf(clean[i]!), 2));
}

describe('the clean days', () => {
  test('are judged as whole days are, without an unknown hour, and hold every kind of verdict', () => {
    for (const { clean, verdicts } of days) {
      const whole = judge([answer(entry, { ok: true, value: clean })], { site: north, localDate, issuedAt: now, storedGroundM, sheetId: sheet.id });
      expect(verdicts).toEqual(whole.hours.map(({ verdict }) => verdict));
      expect(verdicts).not.toContain('unknown');
    }
    const all = days.flatMap(({ verdicts }) => verdicts);
    expect(new Set(all)).toEqual(new Set(['within', 'close', 'beyond']));
  });
});

test(`T1 ${ROUNDS} spoilt answers, none of which may read as within`, { timeout: 1_800_000 }, () => {
  const startedMs = performance.now();
  const random = seeded(SEED);
  const pick = <T>(list: readonly T[]): T => list[Math.floor(random() * list.length)]!;
  const outcomes = { 'not read': 0, 'no vote': 0, 'as clean': 0, 'less said': 0 };
  const wrong: string[] = [];
  for (let round = 0; round < ROUNDS; round += 1) {
    const { name, text, verdicts, known } = pick(days);
    const spoilt: Spoilt = { location: JSON.parse(text) as Spoilt['location'], run };
    const done: string[] = [];
    for (let count = 1 + Math.floor(random() * random() * 4); count > 0 && isWhole(spoilt); count -= 1) {
      const mutation = pick(names);
      done.push(mutation);
      mutations[mutation]!(spoilt, random);
    }
    let written = textOf(spoilt.location);
    if (random() < 0.1) {
      done.push('broken text');
      written = breakText(written, random);
    }
    const result = readFor(written, entry, { site: north, window, run: spoilt.run });
    if (!result.ok) {
      outcomes['not read'] += 1;
      continue;
    }
    const judged = judgedBy(result.value, known)?.verdicts ?? null;
    outcomes[judged === null ? 'no vote' : String(judged) === String(verdicts) ? 'as clean' : 'less said'] += 1;
    if (!isAllowed(judged, verdicts)) wrong.push(`round ${round}, ${name}: ${done.join(', ')}: ${String(judged)} for ${String(verdicts)}`);
  }
  const seconds = (performance.now() - startedMs) / 1000;
  console.log(`${ROUNDS} spoilt answers, seed ${SEED}, ${seconds.toFixed(1)} s: ${Object.entries(outcomes).map(([what, count]) => `${count} ${what}`).join(', ')}`);
  expect(wrong.slice(0, 5)).toEqual([]);
  for (const count of Object.values(outcomes)) expect(count).toBeGreaterThan(ROUNDS / 1000);
});
