// Spoilt answers of MET Norway and the NWS: any node of the JSON lost, doubled, moved or of another type. Nothing throws,
// every number that comes out is finite, and no hour comes out within or close that the clean answer would not give.
import { expect, test } from 'vitest';
import type { ConditionField, Conditions, Forecast } from '../../../lib/forecast/conditions.ts';
import type { SourceFailure } from '../../../lib/forecast/failure.ts';
import { checkFrame } from '../../../lib/forecast/frame.ts';
import { checkHour } from '../../../lib/forecast/ranges.ts';
import type { Verdict } from '../../../lib/margin/ids.ts';
import { alone, judgedRules, measure, viewsOf } from '../../../lib/margin/judge-member.ts';
import { setUp } from '../../../lib/margin/setup.ts';
import { worstVerdict } from '../../../lib/margin/verdict.ts';
import type { Result } from '../../../lib/result.ts';
import type { Site } from '../../../lib/site.ts';
import { HOUR_MS, hourlyInstants, isoUtc } from '../../../lib/time.ts';
import { metNorway } from '../../support/forecast-server/met-norway.ts';
import { gridAnswer } from '../../support/forecast-server/nws.ts';
import { chosenHours } from '../../../worker/sources/hours.ts';
import { toMetForecast } from '../../../worker/sources/met-norway/to-forecast.ts';
import { toNwsForecast } from '../../../worker/sources/nws/to-forecast.ts';
import { readJson } from '../../../worker/sources/read-json.ts';
import { enB, order, sheets, site } from './pipeline.ts';
import { seeded } from './mutate.ts';

const ROUNDS = process.env['DAWNMARGIN_PROVE'] === '1' ? 100_000 : 5000;
const SEED = Number(process.env['DAWNMARGIN_SEED'] ?? 20_271_222);
const nowMs = Date.parse('2027-05-14T02:40:00Z');
const terrain = { groundAtM: () => 1180 };
const judgedMs = hourlyInstants(nowMs + 2 * HOUR_MS, nowMs + 4 * HOUR_MS);
const sheet = sheets.find(({ id }) => id === 'ground-handling')!;
const place: Site = { ...site, latDeg: 60.1, lonDeg: 9.1, timeZone: 'UTC' };
const setup = setUp({ site: place, wing: enB, sheet });
const { rules } = judgedRules(setup);

interface Read {
  readonly runAt: string | null;
  readonly hours: readonly Conditions[];
}

function verdictsOf(read: Read, source: string, declares: readonly ConditionField[]): Verdict[] | null {
  const chosen = chosenHours(read.hours, { fromUtc: isoUtc(nowMs - 3 * HOUR_MS), toUtc: isoUtc(nowMs + 9 * HOUR_MS), declares });
  if (!chosen.ok) return null;
  const forecast: Forecast = { source, kind: 'deterministic', runAt: read.runAt, fetchedAt: isoUtc(nowMs), declares, members: [chosen.value], gridDistanceM: 0, demo: false, trustedWithoutRunTime: false };
  const frame = checkFrame(forecast, { now: isoUtc(nowMs), site: place, storedGroundM: { [source]: 1180 }, judgedInstants: judgedMs.map(isoUtc) });
  if (!frame.ok) return null;
  const views = viewsOf(setup, frame.value.members[0]!.map(checkHour), alone(declares));
  return views.filter(({ hour }) => judgedMs.includes(hour.validAtMs)).map((view) =>
    worstVerdict(rules.flatMap((rule) => measure(rule, view) ?? []).filter(({ noVote }) => !noVote).map(({ status }) => status)),
  );
}

const strange: readonly unknown[] = [null, '', '15.2', true, false, [], [5], {}, -999, 9999, 32767, 9.96921e36, '<script>', 'PT1H', '2027-05-14'];

/** Every place in a JSON value where something may go wrong, picked at random on the way down. */
function spoil(value: unknown, random: () => number): void {
  let node = value;
  for (let depth = 0; depth < 12; depth += 1) {
    if (typeof node !== 'object' || node === null) return;
    const keys = Object.keys(node);
    if (keys.length === 0) return;
    const key = keys[Math.floor(random() * keys.length)]!;
    const parent = node as Record<string, unknown>;
    const child = parent[key];
    const isLeaf = typeof child !== 'object' || child === null;
    if (!isLeaf && random() < 0.9) {
      node = child;
      continue;
    }
    const action = Math.floor(random() * 4);
    if (action === 0) delete parent[key];
    else if (action === 1 && Array.isArray(parent)) parent.splice(Number(key), 0, structuredClone(child));
    else if (action === 2 && Array.isArray(parent)) parent.splice(Number(key), 1);
    else if (action === 3 && !isLeaf) parent[key] = null;
    else parent[key] = strange[Math.floor(random() * strange.length)];
    return;
  }
}

function numbersIn(value: unknown): number[] {
  if (typeof value === 'number') return [value];
  return typeof value === 'object' && value !== null ? Object.values(value).flatMap(numbersIn) : [];
}

/** The hours around the judged ones, so that they are what is hit. */
function shortSeries(): unknown {
  const whole = metNorway({ latDeg: 60.1, lonDeg: 9.1 }, nowMs, terrain);
  return { ...whole, properties: { ...whole.properties, timeseries: whole.properties.timeseries.slice(0, 9) } };
}

const severity: readonly Verdict[] = ['within', 'close', 'unknown', 'beyond'];
const declaresOf = (id: string) => order.sources.find((entry) => entry.id === id)!.declares;

test.each<[string, unknown, (json: unknown) => Result<Read, SourceFailure>]>([
  ['met-norway:locationforecast', shortSeries(), (json) => toMetForecast(json, nowMs)],
  ['nws:gridpoints', gridAnswer(2720, 5208, nowMs, terrain), toNwsForecast],
])(`${ROUNDS} spoilt answers of %s`, { timeout: 1_800_000 }, (id, payload, read) => {
  const text = JSON.stringify(payload);
  const random = seeded(SEED);
  const declares = declaresOf(id);
  const cleanRead = read(readJson(text));
  const clean = cleanRead.ok ? verdictsOf(cleanRead.value, id, declares) : null;
  expect(clean).toHaveLength(2);
  expect(clean).not.toContain('unknown');
  const outcomes = { 'not read': 0, 'no vote': 0, 'as clean': 0, 'less said': 0 };
  const wrong: string[] = [];
  for (let round = 0; round < ROUNDS; round += 1) {
    const spoilt: unknown = JSON.parse(text);
    for (let count = 1 + Math.floor(random() ** 3 * 30); count > 0; count -= 1) spoil(spoilt, random);
    const result = read(JSON.parse(JSON.stringify(spoilt)));
    if (!result.ok) {
      outcomes['not read'] += 1;
      continue;
    }
    if (numbersIn(result.value).some((number) => !Number.isFinite(number))) wrong.push(`round ${round}: a number that is not finite`);
    const judged = verdictsOf(result.value, id, declares);
    outcomes[judged === null ? 'no vote' : String(judged) === String(clean) ? 'as clean' : 'less said'] += 1;
    const isAllowed = judged === null || judged.every((verdict, i) => severity.indexOf(verdict) >= Math.min(severity.indexOf(clean![i]!), 2));
    if (!isAllowed) wrong.push(`round ${round}: ${String(judged)} for ${String(clean)}`);
  }
  console.log(`${ROUNDS} spoilt answers of ${id}, seed ${SEED}: ${Object.entries(outcomes).map(([what, count]) => `${count} ${what}`).join(', ')}`);
  expect(wrong.slice(0, 5)).toEqual([]);
});
