// Random sites, wings, sheets and hours as the judge gets them: made by the second opinion's generator, awkward ones
// included, and read by the same gate as a request from outside. The numbers of fast-check are the generator's seeds.
import fc from 'fast-check';
import wingClassesJson from '../../../config/wing-classes.json' with { type: 'json' };
import type { HoursInput } from '../../../lib/brief/judge-hours.ts';
import { parseAssessRequest } from '../../../lib/config/assess-request.ts';
import { parseWingClasses } from '../../../lib/config/wing-classes.ts';
import { randomCase } from '../../support/second-opinion/random-hours.ts';

const classes = parseWingClasses(wingClassesJson);
if (!classes.ok) throw new Error('config/wing-classes.json does not parse');
const wingClasses = classes.value;

/** Laws look at few hours of many days: those a margin sees are this one and the next two. */
const HOURS = 3;

/** Laws draw the same seeds: a case is made once for all of them. */
const kept = new Map<number, HoursInput>();
const MOST_KEPT = 2000;

export function requestOf(seed: number): HoursInput {
  const known = kept.get(seed);
  if (known !== undefined) return known;
  const { site, wing, sheet, hours, declares } = randomCase(seed);
  const body = { site, wing, sheet, hours: hours.slice(0, HOURS), ...(declares === undefined ? {} : { declares }) };
  const request = parseAssessRequest(JSON.parse(JSON.stringify(body)), { sites: [], sheets: [], wingClasses, nowMs: Date.UTC(2026, 11, 1) });
  if (!request.ok) throw new Error(`seed ${seed} refused: ${request.error.map(({ path, problem }) => `${path} ${problem}`).join('; ')}`);
  if (kept.size >= MOST_KEPT) kept.clear();
  kept.set(seed, request.value);
  return request.value;
}

/** Shown by its seed when a law breaks: `requestOf(seed)` gives the case again. */
export const requests = fc.noBias(fc.integer({ min: 1, max: 2 ** 30 }));
