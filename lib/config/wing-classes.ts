/** The figures of the wing classes (EN 926-2), from config/wing-classes.json: all five, trim in km/h as the trade says it. */
import type * as z from 'zod/mini';
import { failure, success, type Issue, type Result } from '../result.ts';
import { MPS_PER_KMH } from '../units.ts';
import { check, issuesIn } from './check.ts';
import { fields, number, once } from './fields.ts';
import { numberAt, valueAt, type Path } from './path.ts';
import { line } from './text.ts';
import { figureIssues, figures, wingOf, WING_CLASSES, type WingClasses } from './wing.ts';

function classSchema() {
  return fields({ trimKmh: number({ min: 18, max: 72, unit: 'km/h' }), ...figures(), basis: line(200) });
}

const classesSchema = once(() => {
  return fields({ 'EN A': classSchema(), 'EN B': classSchema(), 'EN C': classSchema(), 'EN D': classSchema(), tandem: classSchema() });
});

type ClassFigures = z.output<ReturnType<typeof classSchema>>;

export function parseWingClasses(json: unknown, path: Path = []): Result<WingClasses, Issue[]> {
  const shape = check(classesSchema(), json, path);
  const issues = [...issuesIn(shape), ...WING_CLASSES.flatMap((name) => polarIssues(valueAt(json, [name]), [...path, name]))];
  if (!shape.ok || issues.length > 0) return failure(issues);
  const wings = WING_CLASSES.map((name) => [name, { ...wing(shape.value[name]), class: name }] as const);
  return success(Object.fromEntries(wings) as WingClasses);
}

function wing({ trimKmh, glideAtTrim, minSinkMps }: ClassFigures) {
  return wingOf({ trimMps: trimKmh * MPS_PER_KMH, glideAtTrim, minSinkMps });
}

function polarIssues(json: unknown, path: Path): Issue[] {
  const trimKmh = numberAt(json, ['trimKmh']);
  if (trimKmh === undefined || typeof json !== 'object') return [];
  return figureIssues({ ...json, trimMps: trimKmh * MPS_PER_KMH }, path);
}
