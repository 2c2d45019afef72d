/** Holds a value against a schema and says everything that is wrong with it, for people, at once. */
import type * as z from 'zod/mini';
import { failure, success, type Issue, type Result } from '../result.ts';
import { closestWord } from './closest-word.ts';
import { formatPath, valueAt, valueText, type Path } from './path.ts';

/** More issues than this help nobody, and a hostile request must not be answered with megabytes. */
const MOST_ISSUES = 500;
const MOST_SUGGESTIONS = 50;

/** The value as the schema reads it, or every issue; `path` is where the value stands in the whole text. */
export function check<T extends z.ZodMiniType>(schema: T, value: unknown, path: Path): Result<z.output<T>, Issue[]> {
  const parsed = schema.safeParse(value);
  if (parsed.success) return success(parsed.data);
  return failure(parsed.error.issues.flatMap((found) => issuesOf(found, value, path)));
}

export function issue(path: Path, value: unknown, said: { readonly problem: string; readonly allowed: string }): Issue {
  return { path: formatPath(path), value: valueText(value), problem: said.problem, allowed: said.allowed };
}

/** The issues of a result; none when it is a success. */
export function issuesIn(result: Result<unknown, readonly Issue[]>): readonly Issue[] {
  return result.ok ? [] : result.error;
}

/** No more than 500, the last of them saying how many more there are. */
export function capped(issues: readonly Issue[]): Issue[] {
  if (issues.length <= MOST_ISSUES) return [...issues];
  const more = issues.length - MOST_ISSUES + 1;
  const last = { path: '$', value: `${more} more`, problem: `${more} more problems are not listed`, allowed: 'mend these first' };
  return [...issues.slice(0, MOST_ISSUES - 1), last];
}

function issuesOf(found: z.core.$ZodIssue, root: unknown, base: Path): Issue[] {
  const inside = found.path as (string | number)[];
  const path = [...base, ...inside];
  const value = valueAt(root, inside);
  if (found.code === 'unrecognized_keys') {
    const known = found.message.split(', ');
    return found.keys.map((key, index) => {
      const near = index < MOST_SUGGESTIONS ? closestWord(key, known) : undefined;
      return issue([...path, key], valueAt(value, [key]), { problem: `unknown key${suggestion(near)}`, allowed: `only ${found.message}` });
    });
  }
  return [issue(path, value, { problem: problemOf(found, value), allowed: allowedBy(found) })];
}

/** Of several forms a value may take, the last is the one that says most. */
function allowedBy(found: z.core.$ZodIssue): string {
  return found.code === 'invalid_union' ? (found.errors.at(-1)?.at(-1)?.message ?? found.message) : found.message;
}

function suggestion(near: string | undefined): string {
  return near === undefined ? '' : `; did you mean "${near}"?`;
}

function problemOf(found: z.core.$ZodIssue, value: unknown): string {
  if (value === undefined) return 'this is missing';
  switch (found.code) {
    case 'invalid_type':
      return found.expected === 'int' && typeof value === 'number' ? 'not a whole number' : `${kindOf(value)} where ${nameOf(found.expected)} is needed`;
    case 'too_small':
      return found.origin === 'array' ? 'too few' : 'below what is allowed';
    case 'too_big':
      return found.origin === 'array' ? 'too many' : found.origin === 'string' ? 'too long' : 'above what is allowed';
    case 'invalid_value':
      return `not one of the words allowed here${suggestion(typeof value === 'string' ? closestWord(value, found.values.map(String)) : undefined)}`;
    case 'custom':
      return typeof found.params?.['problem'] === 'string' ? found.params['problem'] : 'not allowed here';
    case 'invalid_format': case 'invalid_union': case 'invalid_key': case 'invalid_element': case 'not_multiple_of': case 'unrecognized_keys':
      return 'not in the form that is needed';
  }
}

function nameOf(expected: string): string {
  switch (expected) {
    case 'number': return 'a number';
    case 'int': return 'a whole number';
    case 'string': return 'a text';
    case 'boolean': return 'true or false';
    case 'array': case 'tuple': return 'a list';
    default: return 'an object';
  }
}

function kindOf(value: unknown): string {
  if (value === null) return 'null';
  if (Array.isArray(value)) return 'a list';
  if (typeof value === 'number') return Number.isFinite(value) ? 'a number' : 'no finite number';
  return typeof value === 'string' ? 'a text' : typeof value === 'boolean' ? 'true or false' : 'an object';
}
