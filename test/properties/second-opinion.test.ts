// Two implementations of the flight model, written apart from the same page and sharing no code, over random hours.
// It finds slips of hand in either; it is no evidence about nature (see test/reference for that). Where the page leaves
// room and the two chose differently, the case is named below with the reason; anything else is a failure.
import { expect, test } from 'vitest';
import { judgeHours, type AssessedMargin } from '../../lib/brief/judge-hours.ts';
import { parseAssessRequest } from '../../lib/config/assess-request.ts';
import { assess } from '../support/second-opinion/assess.ts';
import { randomCase } from '../support/second-opinion/random-hours.ts';
import { parseWingClasses } from '../../lib/config/wing-classes.ts';
import wingClassesJson from '../../config/wing-classes.json' with { type: 'json' };

const parsedClasses = parseWingClasses(wingClassesJson);
if (!parsedClasses.ok) throw new Error('config/wing-classes.json does not parse');
const wingClasses = parsedClasses.value;
const CASES = Number(process.env['SECOND_OPINION_CASES'] ?? 200);
const FIRST_SEED = Number(process.env['SECOND_OPINION_SEED'] ?? 1);

/** Agreement the two must show, by unit: an order of magnitude below what anyone could read off. */
const TOLERANCE: Readonly<Record<string, number>> = { 'm/s': 0.003, m: 0.3, '°': 0.01, min: 1, 'J/kg': 0.01, mm: 1e-6, '%': 1e-6, hPa: 1e-6 };

type Hour = ReturnType<typeof randomCase>['hours'][number];
type Theirs = ReturnType<typeof assess>['hours'][number]['margins'][number];

interface Pair {
  readonly ours: AssessedMargin;
  readonly theirs: Theirs;
  readonly hour: Hour;
  /** The next two hours of the request, undefined where the request ends or has a hole. */
  readonly next: readonly (Hour | undefined)[];
  readonly allOurs: readonly AssessedMargin[];
  readonly anyHour: (field: 'mixedLayerM' | 'sensibleHeatWm2') => boolean;
}

const isNumber = (value: unknown): value is number => typeof value === 'number';

/** Known differences of reading, each with why ours is as it is. */
const READINGS: readonly { readonly why: string; readonly holds: (pair: Pair) => boolean }[] = [
  { why: 'storm: an hour that the request does not hold signals nothing; one that it holds without a code is unknown', holds: ({ ours, next }) => ours.id === 'storm' && next.some((hour) => hour === undefined) },
  { why: 'storm: a sheet without CAPE still has spare 0 of 0, so that its number and status agree', holds: ({ ours, theirs }) => ours.id === 'storm' && ours.limit === 0 && ours.spare === 0 && theirs.spare === null && theirs.status === 'within' },
  { why: 'a heat flux or mixed layer that is declared and missing is unknown, never replaced by a weaker one', holds: ({ ours, hour }) => ['thermal', 'arrival'].includes(ours.id) && ours.status === 'unknown' && (['mixedLayerM', 'sensibleHeatWm2'] as const).some((field) => ours.missing.includes(field) && !(isNumber(hour[field]) && Math.abs(hour[field]) <= 400)) },
  { why: 'a column without levels has an assumed lapse rate: no mixed layer is looked for in it', holds: ({ ours }) => ['thermal', 'arrival'].includes(ours.id) && ours.status === 'unknown' && ours.missing.includes('mixedLayerM') },
  { why: 'a mixed layer of 0 m with no temperature or pressure known is unknown, not 0', holds: ({ ours, hour }) => ['thermal', 'arrival'].includes(ours.id) && ours.status === 'unknown' && hour.mixedLayerM === 0 },
  { why: 'release height good to 0.2 m, times the shear there', holds: ({ ours, theirs }) => ['climbShear', 'forwardAtRelease'].includes(ours.id) && ours.spare !== null && theirs.spare !== null && Math.abs(ours.spare - theirs.spare) < 0.03 },
  { why: 'a day without sunrise has no legal day to measure from', holds: ({ ours }) => ours.id === 'daylight' && ours.spare === null },
  { why: 'the page names the bulk Richardson depth without its terms: near-critical columns differ', holds: ({ ours, anyHour }) => !anyHour('mixedLayerM') && ['thermal', 'arrival'].includes(ours.id) },
  { why: 'bone-dry air (0 %) is a reading, its dew point taken at 0.01 %', holds: ({ hour }) => (hour.levels ?? []).some(({ relativeHumidityPct }) => relativeHumidityPct === 0) },
  { why: 'a tow the wind ends under 10 m reads its wind at 10 m', holds: ({ ours, allOurs }) => ours.id === 'forwardAtRelease' && (allOurs.find(({ id }) => id === 'towHeight')?.demand ?? 0) < 10.2 },
];

function differences(seed: number): string[] {
  const each = randomCase(seed);
  const body = { site: each.site, wing: each.wing, sheet: each.sheet, hours: each.hours, ...(each.declares === undefined ? {} : { declares: each.declares }) };
  const request = parseAssessRequest(JSON.parse(JSON.stringify(body)), { sites: [], sheets: [], wingClasses, nowMs: Date.UTC(2026, 11, 1) });
  if (!request.ok) return [`seed ${seed} refused: ${request.error.map(({ path, problem, value }) => `${path} ${problem} (${value})`).join('; ')}`];
  const ours = judgeHours(request.value);
  const theirs = assess(each as never);
  const byInstant = new Map(each.hours.map((hour) => [Date.parse(hour.validAt), hour]));
  return ours.hours.flatMap((judged, i) => {
    const hour = each.hours[i]!;
    const at = Date.parse(hour.validAt);
    const other = theirs.hours[i]!;
    const found: string[] = [];
    const tell = (what: string): void => void found.push(`seed ${seed} ${hour.validAt} ${what} [${each.site.properties.kind}, ${each.sheet.id}: ${each.tags.join('; ')}]`);
    let excused = false;
    for (const margin of judged.margins) {
      const same = other.margins.find(({ id }) => id === margin.id);
      if (same === undefined) { tell(`${margin.id} only ours`); continue; }
      const near = same.spare === margin.spare || (same.spare !== null && margin.spare !== null && Math.abs(same.spare - margin.spare) <= Math.max(TOLERANCE[margin.unit] ?? 0.001, margin.unit === 'm' ? 0.005 * Math.abs(same.spare) : 0));
      if (near && (same.status === margin.status || margin.spare !== null)) continue;
      const pair: Pair = { ours: margin, theirs: same, hour, next: [1, 2].map((step) => byInstant.get(at + step * 3_600_000)), allOurs: judged.margins, anyHour: (field) => each.hours.some((one) => isNumber(one[field])) };
      if (READINGS.some(({ holds }) => holds(pair))) excused = true;
      else tell(`${margin.id} ${margin.status} ${margin.spare} against ${same.status} ${same.spare}`);
    }
    for (const { id } of other.margins) if (!judged.margins.some((margin) => margin.id === id)) tell(`${id} only theirs`);
    if (found.length === 0 && !excused && judged.verdict !== other.verdict && judged.margins.every(({ spare }) => spare === null || Math.abs(spare) > 1e-6)) tell(`verdict ${judged.verdict} against ${other.verdict}`);
    return found;
  });
}

test(`the two agree on ${CASES} random sites of some hours each, from seed ${FIRST_SEED}`, () => {
  const found = Array.from({ length: CASES }, (_, i) => differences(FIRST_SEED + i)).flat();
  expect(found.slice(0, 20), `${found.length} differences`).toEqual([]);
}, 240_000);
