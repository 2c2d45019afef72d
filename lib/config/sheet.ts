/**
 * A limit sheet. A shipped sheet names the basis of every number; in a request the sheet may be short: name, version and
 * for are optional there, and kind is the site's. A limit that is misspelt, without a number or out of range is an error:
 * dropped in silence it would let everything pass.
 */
import * as z from 'zod/mini';
import { MARGIN_IDS, type MarginId } from '../margin/ids.ts';
import { LIMIT_NAMES, PARAMETER_NAMES, type LimitName, type LimitSheet, type ParameterName } from '../margin/sheet.ts';
import { failure, success, type Issue, type Result } from '../result.ts';
import { check, issue, issuesIn } from './check.ts';
import { fields, list, number, once, oneOf, rangeText, wholeNumber } from './fields.ts';
import { numberAt, valueAt, type Path } from './path.ts';
import { CLOSE_BAND_RANGE, LIMIT_RANGES, PARAMETER_DEFAULTS, PARAMETER_RANGES } from './sheet-ranges.ts';
import { repeatedIds } from './sites.ts';
import { kebabId, line, lineOrNothing } from './text.ts';

export type SheetRules =
  | { readonly basis: 'required' }
  | { readonly basis: 'optional'; /** Of a sheet that does not say it. */ readonly kind?: LimitSheet['kind'] };

const ALL_NAMES = [...LIMIT_NAMES, ...PARAMETER_NAMES];

function optionalOf<K extends string, T extends z.ZodMiniType>(names: readonly K[], build: (name: K) => T): Record<K, z.ZodMiniOptional<T>> {
  return Object.fromEntries(names.map((name) => [name, z.optional(build(name))])) as Record<K, z.ZodMiniOptional<T>>;
}

function limits() {
  return fields({
    ...optionalOf(LIMIT_NAMES, (name) => number(LIMIT_RANGES[name])),
    ...optionalOf(PARAMETER_NAMES, (name) => number(PARAMETER_RANGES[name])),
  });
}

function shared() {
  return {
    id: kebabId(),
    limits: limits(),
    closeBands: z._default(fields(optionalOf(MARGIN_IDS, () => number(CLOSE_BAND_RANGE))), {}),
    basis: z._default(fields(optionalOf(ALL_NAMES, () => line(200))), {}),
  };
}

const version = () => wholeNumber({ min: 1, max: 1_000_000, unit: '' });
const kind = () => oneOf(['launch', 'strip']);

const shippedSchema = once(() => fields({ ...shared(), name: line(80), version: version(), kind: kind(), for: line(500) }));

const requestSchema = once(() =>
  fields({ ...shared(), name: z.optional(line(80)), version: z._default(version(), 1), kind: z.optional(kind()), for: z._default(lineOrNothing(500), '') }),
);

type Shape = z.output<ReturnType<typeof requestSchema>>;

export function parseSheet(json: unknown, rules: SheetRules, path: Path = []): Result<LimitSheet, Issue[]> {
  const isShipped = rules.basis === 'required';
  const shape: Result<Shape, Issue[]> = check(isShipped ? shippedSchema() : requestSchema(), json, path);
  const issues = [...issuesIn(shape), ...limitIssues(json, path), ...(isShipped ? basisIssues(json, path) : [])];
  const fallbackKind = isShipped ? undefined : rules.kind;
  if (shape.ok && shape.value.kind === undefined && fallbackKind === undefined) {
    issues.push(issue([...path, 'kind'], undefined, { problem: 'this is missing', allowed: '"launch", "strip"' }));
  }
  if (!shape.ok || issues.length > 0) return failure(issues);
  const { id, closeBands, basis } = shape.value;
  const kindOfSheet = shape.value.kind ?? fallbackKind ?? 'launch';
  return success({
    id,
    name: shape.value.name ?? id,
    version: shape.value.version,
    kind: kindOfSheet,
    for: shape.value.for,
    limits: numbersOf<LimitName>(LIMIT_NAMES, shape.value.limits),
    parameters: { ...PARAMETER_DEFAULTS, ...numbersOf<ParameterName>(PARAMETER_NAMES, shape.value.limits) },
    closeBands: numbersOf<MarginId>(MARGIN_IDS, closeBands),
    basis: Object.fromEntries(Object.entries(basis).filter(([, text]) => text !== undefined)),
  });
}

function numbersOf<K extends string>(names: readonly K[], from: Readonly<Partial<Record<K, number | undefined>>>): Partial<Record<K, number>> {
  const found: Partial<Record<K, number>> = {};
  for (const name of names) {
    const value = from[name];
    if (value !== undefined) found[name] = value;
  }
  return found;
}

/** At least one limit, and none that contradicts another. */
function limitIssues(json: unknown, path: Path): Issue[] {
  const at = ['limits'];
  const given = valueAt(json, at);
  if (typeof given !== 'object' || given === null || Array.isArray(given)) return [];
  const issues: Issue[] = [];
  if (!Object.keys(given).some((key) => (LIMIT_NAMES as readonly string[]).includes(key))) {
    issues.push(issue([...path, ...at], given, { problem: 'a sheet without a limit would let everything pass', allowed: `at least one of ${LIMIT_NAMES.join(', ')}` }));
  }
  const meanMps = numberAt(given, ['maxMeanMps']);
  const gustMps = numberAt(given, ['maxGustMps']);
  if (meanMps !== undefined && gustMps !== undefined && gustMps < meanMps) {
    issues.push(issue([...path, ...at, 'maxGustMps'], gustMps, {
      problem: `the gust limit is below the mean wind limit of ${meanMps} m/s`,
      allowed: `${rangeText({ ...LIMIT_RANGES.maxGustMps, min: Math.max(LIMIT_RANGES.maxGustMps.min, meanMps) })}`,
    }));
  }
  return issues;
}

/** Shipped: every number has its basis, and every basis its number. */
function basisIssues(json: unknown, path: Path): Issue[] {
  return ALL_NAMES.flatMap((name) => {
    const hasNumber = valueAt(json, ['limits', name]) !== undefined;
    const basis = valueAt(json, ['basis', name]);
    if (hasNumber === (basis !== undefined)) return [];
    const problem = hasNumber ? 'this number has no basis' : 'a basis without its number';
    return [issue([...path, 'basis', name], basis, { problem, allowed: 'where the number in limits comes from, for every number there' })];
  });
}

const sheetsSchema = once(() => list(z.unknown(), { min: 1, max: 200 }));

/** A file of sheets: a list, ids unique. */
export function parseSheets(json: unknown, rules: SheetRules, path: Path = []): Result<LimitSheet[], Issue[]> {
  const shape = check(sheetsSchema(), json, path);
  const items: readonly unknown[] = shape.ok ? shape.value : [];
  const parsed = items.map((item, index) => parseSheet(item, rules, [...path, index]));
  const issues = [...issuesIn(shape), ...parsed.flatMap(issuesIn), ...repeatedIds(items, path)];
  if (issues.length > 0) return failure(issues);
  return success(parsed.flatMap((sheet) => (sheet.ok ? [sheet.value] : [])));
}
