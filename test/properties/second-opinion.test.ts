// Two implementations of the flight model, written apart from the same page and sharing no code, over random hours.
// It finds slips of hand in either; it is no evidence about nature (see test/reference for that).
import { expect, test } from 'vitest';
import { judgeHours } from '../../lib/brief/judge-hours.ts';
import { parseAssessRequest } from '../../lib/config/assess-request.ts';
import { assess } from '../support/second-opinion/assess.ts';
import { randomCase } from '../support/second-opinion/random-hours.ts';
import { parseWingClasses } from '../../lib/config/wing-classes.ts';
import wingClassesJson from '../../config/wing-classes.json' with { type: 'json' };

const wingClasses = parseWingClasses(wingClassesJson);
if (!wingClasses.ok) throw new Error('config/wing-classes.json does not parse');
const CASES = Number(process.env['SECOND_OPINION_CASES'] ?? 600);
const FIRST_SEED = Number(process.env['SECOND_OPINION_SEED'] ?? 1);

/** Agreement the two must show, by unit: an order of magnitude below what a pilot could read off. */
const TOLERANCE: Readonly<Record<string, number>> = { 'm/s': 0.005, m: 0.5, '°': 0.01, min: 1, 'J/kg': 0.01, mm: 1e-6, '%': 1e-6, hPa: 1e-6 };

interface Difference {
  readonly seed: number;
  readonly what: string;
}

function differences(seed: number): Difference[] {
  const each = randomCase(seed);
  const body = { site: each.site, wing: each.wing, sheet: each.sheet, hours: each.hours, ...(each.declares === undefined ? {} : { declares: each.declares }) };
  const request = parseAssessRequest(JSON.parse(JSON.stringify(body)), { sites: [], sheets: [], wingClasses: wingClasses.ok ? wingClasses.value : ({} as never), nowMs: Date.UTC(2026, 11, 1) });
  if (!request.ok) return [{ seed, what: `refused: ${request.error.map(({ path, problem, value }) => `${path} ${problem} (${value})`).join('; ')}` }];
  const ours = judgeHours(request.value);
  const theirs = assess(each as never);
  const found: Difference[] = [];
  ours.hours.forEach((hour, i) => {
    const other = theirs.hours[i]!;
    const tell = (what: string): void => void found.push({ seed, what: `${hour.validAt} ${what} [${each.site.properties.kind} ${each.sheet.id} ${each.tags.join(',')}]` });
    let statusDiffers = false;
    for (const margin of hour.margins) {
      const same = other.margins.find(({ id }) => id === margin.id);
      if (same === undefined) { tell(`${margin.id} only ours: ${margin.status} ${margin.spare}`); continue; }
      const near = same.spare !== null && margin.spare !== null && Math.abs(same.spare - margin.spare) <= (TOLERANCE[margin.unit] ?? 0.001);
      if (same.status !== margin.status && !(near && margin.spare !== null)) {
        statusDiffers = true;
        tell(`${margin.id} ${margin.status} ${margin.spare} (${margin.missing.join(' ')}) against ${same.status} ${same.spare}`);
      } else if ((same.spare === null) !== (margin.spare === null) || (same.spare !== null && !near)) tell(`${margin.id} spare ${margin.spare} against ${same.spare}`);
    }
    for (const { id, status, spare } of other.margins) if (!hour.margins.some((margin) => margin.id === id)) tell(`${id} only theirs: ${status} ${spare}`);
    if (!statusDiffers && hour.verdict !== other.verdict) tell(`verdict ${hour.verdict} against ${other.verdict}`);
  });
  return found;
}

test(`the two agree on ${CASES} random sites of some hours each, from seed ${FIRST_SEED}`, () => {
  const found = Array.from({ length: CASES }, (_, i) => differences(FIRST_SEED + i)).flat();
  if (process.env['SECOND_OPINION_LIST'] !== undefined) console.log(found.map(({ seed, what }) => `${seed} ${what}`).join('\n'));
  expect(found.slice(0, 20)).toEqual([]);
});
