/**
 * A wing from a class, from a pilot's own three figures, or from a class with masses. Figures that no polar fits are
 * refused with the reason (flight model, section 4): the speed of least sink must lie between stall and trim.
 */
import * as z from 'zod/mini';
import { failure, success, type Issue, type Result } from '../result.ts';
import type { Wing, WingClass } from '../wing/wing.ts';
import { check, issue, issuesIn } from './check.ts';
import { fields, number, once, oneOf } from './fields.ts';
import { numberAt, valueAt, type Path } from './path.ts';

export const WING_CLASSES = ['EN A', 'EN B', 'EN C', 'EN D', 'tandem'] as const satisfies readonly WingClass[];

export type WingClasses = Readonly<Record<WingClass, Wing>>;

/** Shares of trim where a wing's own figures are not given: common practice, no source (flight model, section 4). */
const STALL_OF_TRIM = 0.62;
const TOP_OF_TRIM = 1.35;

const massRange = { min: 20, max: 500, unit: 'kg' };

function masses() {
  return { referenceMassKg: z.nullish(number(massRange)), allUpMassKg: z.nullish(number(massRange)) };
}

export function figures() {
  return {
    glideAtTrim: number({ min: 3, max: 20, unit: '(forward over down)' }),
    minSinkMps: number({ min: 0.3, max: 4, unit: 'm/s' }),
  };
}

const byClassSchema = once(() => fields({ class: oneOf(WING_CLASSES), ...masses() }));

const byFiguresSchema = once(() =>
  fields({
    trimMps: number({ min: 5, max: 20, unit: 'm/s (km/h divided by 3.6)' }),
    ...figures(),
    stallMps: z.nullish(number({ min: 3, max: 15, unit: 'm/s' })),
    topMps: z.nullish(number({ min: 5, max: 40, unit: 'm/s' })),
    ...masses(),
  }),
);

/** `classes` are the figures of config/wing-classes.json. */
export function parseWing(json: unknown, classes: WingClasses, path: Path = []): Result<Wing, Issue[]> {
  if (valueAt(json, ['class']) !== undefined && valueAt(json, ['trimMps']) === undefined) {
    const shape = check(byClassSchema(), json, path);
    if (!shape.ok) return shape;
    const { referenceMassKg, allUpMassKg } = shape.value;
    return success({ ...classes[shape.value.class], referenceMassKg: referenceMassKg ?? null, allUpMassKg: allUpMassKg ?? null });
  }
  const shape = check(byFiguresSchema(), json, path);
  const issues = [...issuesIn(shape), ...figureIssues(json, path)];
  if (!shape.ok || issues.length > 0) return failure(issues);
  const { trimMps, glideAtTrim, minSinkMps, stallMps, topMps, referenceMassKg, allUpMassKg } = shape.value;
  return success({
    ...wingOf({ trimMps, glideAtTrim, minSinkMps }),
    ...(typeof stallMps === 'number' && { stallMps }),
    ...(typeof topMps === 'number' && { topMps }),
    referenceMassKg: referenceMassKg ?? null,
    allUpMassKg: allUpMassKg ?? null,
  });
}

/** A wing of three figures, its stall and top speed by the common shares of trim. */
export function wingOf(three: { readonly trimMps: number; readonly glideAtTrim: number; readonly minSinkMps: number }): Wing {
  const { trimMps } = three;
  return { class: null, ...three, stallMps: STALL_OF_TRIM * trimMps, topMps: TOP_OF_TRIM * trimMps, referenceMassKg: null, allUpMassKg: null };
}

/** What is impossible about figures that are each in range: the polar through them, and the order of the speeds. */
export function figureIssues(json: unknown, path: Path): Issue[] {
  const trimMps = numberAt(json, ['trimMps']);
  if (trimMps === undefined) return [];
  const stallMps = numberAt(json, ['stallMps']) ?? STALL_OF_TRIM * trimMps;
  const topMps = numberAt(json, ['topMps']) ?? TOP_OF_TRIM * trimMps;
  const issues: Issue[] = [];
  if (stallMps >= trimMps) {
    issues.push(issue([...path, 'stallMps'], stallMps, { problem: 'the stall is not below trim', allowed: `below ${trimMps} m/s` }));
  }
  if (topMps <= trimMps) {
    issues.push(issue([...path, 'topMps'], topMps, { problem: 'the top speed is not above trim', allowed: `above ${trimMps} m/s` }));
  }
  return [...issues, ...leastSinkIssues({ trimMps, stallMps, json, path })];
}

function leastSinkIssues({ trimMps, stallMps, json, path }: { trimMps: number; stallMps: number; json: unknown; path: Path }): Issue[] {
  const glide = numberAt(json, ['glideAtTrim']);
  const minSinkMps = numberAt(json, ['minSinkMps']);
  if (glide === undefined || minSinkMps === undefined || stallMps >= trimMps) return [];
  const leastSinkAtMps = 2 * minSinkMps * glide - trimMps;
  if (leastSinkAtMps > stallMps && leastSinkAtMps < trimMps) return [];
  const [least, most] = [(trimMps + stallMps) / (2 * glide), trimMps / glide].map((sink) => sink.toFixed(2));
  const where = leastSinkAtMps >= trimMps ? `not below its trim of ${trimMps.toFixed(1)} m/s` : `not above its stall of ${stallMps.toFixed(1)} m/s`;
  return [issue([...path, 'minSinkMps'], minSinkMps, {
    problem: `with this glide and trim the wing would sink least at ${leastSinkAtMps.toFixed(1)} m/s, ${where}`,
    allowed: `between ${least} and ${most} m/s for this glide and trim`,
  })];
}
