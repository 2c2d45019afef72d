/**
 * Hours of conditions that a caller gives. A wrong type, an unknown key or an instant off the hour is an error; a number
 * that is merely implausible is kept, for it is the judge who makes its margins unknown.
 */
import * as z from 'zod/mini';
import { CONDITION_FIELDS, type ConditionField, type Conditions } from '../forecast/conditions.ts';
import { failure, success, type Issue, type Result } from '../result.ts';
import { HOUR_MS, isoUtc } from '../time.ts';
import { check, issue, issuesIn } from './check.ts';
import { anyNumber, fields, list, once, oneOf } from './fields.ts';
import { instantMs } from './instant.ts';
import { valueAt, type Path } from './path.ts';

/** Sixteen days, as far as any service forecasts by the hour. */
const MOST_HOURS = 400;

const HOUR_FORM = 'ISO 8601 in UTC, on the hour: "2027-05-14T04:00:00Z"';

function maybe(unit: string) {
  return z.nullish(anyNumber(unit));
}

/** Inside a wind or a level: absent reads as null. */
function orNull(unit: string) {
  return z._default(z.nullable(anyNumber(unit)), null);
}

function wind() {
  return { speedMps: orNull('m/s'), fromDeg: orNull('°, where the wind comes from') };
}

function validAt() {
  return z.string({ error: () => HOUR_FORM }).check(
    z.refine((text) => instantMs(text) % HOUR_MS === 0, { error: () => HOUR_FORM, params: { problem: 'no instant on the hour in UTC' } }),
  );
}

const hourSchema = once(() =>
  fields({
    validAt: validAt(),
    gridElevationM: anyNumber("m above sea level, the model's ground"),
    wind10m: z.nullish(fields(wind())),
    gustMps: maybe('m/s'),
    nearGround: z.nullish(list(fields({ heightAglM: anyNumber("m above the model's ground"), ...wind() }), { min: 0, max: 20 })),
    levels: z.nullish(list(
      fields({ pressureHpa: anyNumber('hPa'), altitudeM: orNull('m above sea level'), ...wind(), temperatureC: orNull('°C'), relativeHumidityPct: orNull('%') }),
      { min: 0, max: 60 },
    )),
    temperature2mC: maybe('°C'),
    dewPoint2mC: maybe('°C'),
    surfacePressureHpa: maybe('hPa'),
    seaLevelPressureHpa: maybe('hPa'),
    referencePressureHpa: z.nullish(fields({ a: orNull('hPa'), b: orNull('hPa') })),
    mixedLayerM: maybe("m above the model's ground"),
    shortwaveWm2: maybe('W/m²'),
    sensibleHeatWm2: maybe('W/m², upward positive'),
    capeJkg: maybe('J/kg'),
    precipitationMm: maybe('mm'),
    precipitationProbabilityPct: maybe('%'),
    weatherCode: maybe('WMO code table 4677'),
    visibilityM: maybe('m'),
    lowCloudPct: maybe('%'),
  }),
);

const hoursSchema = once(() => list(z.unknown(), { min: 1, max: MOST_HOURS }));

/** The hours in order of time, each instant once; `validAt` in the one spelling that the library uses. */
export function parseHours(json: unknown, path: Path = []): Result<Conditions[], Issue[]> {
  const outer = check(hoursSchema(), json, path);
  const items: readonly unknown[] = outer.ok ? outer.value : [];
  const parsed = items.map((item, index) => check(hourSchema(), item, [...path, index]));
  const issues = [...issuesIn(outer), ...parsed.flatMap(issuesIn), ...orderIssues(items, path)];
  if (issues.length > 0) return failure(issues);
  return success(parsed.flatMap((hour) => (hour.ok ? [conditions(hour.value)] : [])));
}

/** What is absent stays absent: `undefined` is no value of a Conditions. */
function conditions(hour: z.output<ReturnType<typeof hourSchema>>): Conditions {
  const given = Object.fromEntries(Object.entries(hour).filter(([, value]) => value !== undefined));
  return { ...(given as unknown as Conditions), validAt: isoUtc(instantMs(hour.validAt)) };
}

function orderIssues(items: readonly unknown[], path: Path): Issue[] {
  const issues: Issue[] = [];
  let lastMs = -Infinity;
  items.forEach((item, index) => {
    const text = valueAt(item, ['validAt']);
    const atMs = typeof text === 'string' ? instantMs(text) : NaN;
    if (!Number.isFinite(atMs)) return;
    if (atMs <= lastMs) {
      const problem = atMs === lastMs ? 'this instant is there already' : 'this instant is earlier than the one before';
      issues.push(issue([...path, index, 'validAt'], text, { problem, allowed: `later than ${isoUtc(lastMs)}: hours in order of time, each once` }));
    }
    lastMs = Math.max(lastMs, atMs);
  });
  return issues;
}

/** Every hour has these two: naming them declares nothing more and is no mistake. */
const ALWAYS_THERE = ['validAt', 'gridElevationM'] as const;
const DECLARABLE = [...CONDITION_FIELDS, ...ALWAYS_THERE] as const;

const declaresSchema = once(() => list(oneOf(DECLARABLE), { min: 0, max: DECLARABLE.length }));

/** The fields a source can give at all, as its sender names them. */
export function parseDeclares(json: unknown, path: Path = []): Result<ConditionField[], Issue[]> {
  const shape = check(declaresSchema(), json, path);
  return shape.ok ? success(CONDITION_FIELDS.filter((field) => shape.value.includes(field))) : shape;
}

/** What a sender who names none declares: every field that has a value in at least one of the hours. */
export function declaredBy(hours: readonly Conditions[]): ConditionField[] {
  return CONDITION_FIELDS.filter((field) => hours.some((hour) => hasValue(hour[field])));
}

function hasValue(value: unknown): boolean {
  if (value === null || value === undefined) return false;
  return typeof value === 'object' ? Object.values(value).some(hasValue) : true;
}
