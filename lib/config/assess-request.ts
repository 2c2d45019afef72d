/**
 * The body of POST /api/v1/assess: hours of one deterministic source, to be judged for a site, a wing and a sheet that are
 * given whole or by their id here. Either every part of it is right, or every problem of every part is reported.
 */
import * as z from 'zod/mini';
import type { ConditionField, Conditions } from '../forecast/conditions.ts';
import type { LimitSheet } from '../margin/sheet.ts';
import { failure, success, type Issue, type Result } from '../result.ts';
import type { Site } from '../site.ts';
import type { Wing } from '../wing/wing.ts';
import { capped, check, issue, issuesIn } from './check.ts';
import { closestWord } from './closest-word.ts';
import { fields, once } from './fields.ts';
import { instantMs } from './instant.ts';
import { declaredBy, parseDeclares, parseHours } from './hours.ts';
import { valueAt, type Path } from './path.ts';
import { parseSheet } from './sheet.ts';
import { parseSiteFeature } from './site.ts';
import { kebabId } from './text.ts';
import { parseWing, type WingClasses } from './wing.ts';

export interface AssessRequest {
  readonly site: Site;
  readonly wing: Wing;
  readonly sheet: LimitSheet;
  readonly hours: readonly Conditions[];
  readonly declares: readonly ConditionField[];
  /** Epoch ms, where the sender gives it. */
  readonly nowMs: number | null;
}

/** What an id in a request may stand for. */
export interface AssessContext {
  readonly sites: readonly Site[];
  readonly sheets: readonly LimitSheet[];
  readonly wingClasses: WingClasses;
  /** The clock's now, epoch ms: for magnetic headings only. */
  readonly nowMs: number;
}

const INSTANT_FORM = 'an instant in UTC, ISO 8601: "2027-05-14T04:00:00Z"';

/** The parts say for themselves when they are missing. */
const requestSchema = once(() =>
  fields({
    site: z.optional(z.unknown()),
    wing: z.optional(z.unknown()),
    sheet: z.optional(z.unknown()),
    hours: z.optional(z.unknown()),
    declares: z.optional(z.unknown()),
    now: z.nullish(
      z.string({ error: () => INSTANT_FORM }).check(
        z.refine((text) => Number.isFinite(instantMs(text)), { error: () => INSTANT_FORM, params: { problem: 'no instant in UTC' } }),
      ),
    ),
  }),
);

const idSchema = once(() => fields({ id: kebabId() }));

export function parseAssessRequest(json: unknown, context: AssessContext): Result<AssessRequest, Issue[]> {
  const shape = check(requestSchema(), json, []);
  if (typeof json !== 'object' || json === null || Array.isArray(json)) return failure([...issuesIn(shape)]);
  const site = parseSite(valueAt(json, ['site']), context);
  const sheet = parseOwnSheet(valueAt(json, ['sheet']), { context, kind: kindOf(json, site) });
  const wing = parseWing(valueAt(json, ['wing']), context.wingClasses, ['wing']);
  const hours = parseHours(valueAt(json, ['hours']), ['hours']);
  const declares = parseDeclares(valueAt(json, ['declares']) ?? [], ['declares']);
  const issues = [shape, site, wing, sheet, hours, declares].flatMap(issuesIn);
  if (site.ok && sheet.ok && site.value.kind !== sheet.value.kind) {
    const allowed = `a sheet for a ${site.value.kind}`;
    issues.push(issue(['sheet'], sheet.value.id, { problem: `this sheet is for a ${sheet.value.kind} and the site is a ${site.value.kind}`, allowed }));
  }
  if (!shape.ok || !site.ok || !sheet.ok || !wing.ok || !hours.ok || !declares.ok || issues.length > 0) return failure(capped(issues));
  const isDeclared = (valueAt(json, ['declares']) ?? undefined) !== undefined;
  const now = shape.value.now;
  return success({
    site: site.value,
    wing: wing.value,
    sheet: sheet.value,
    hours: hours.value,
    declares: isDeclared ? declares.value : declaredBy(hours.value),
    nowMs: typeof now === 'string' ? instantMs(now) : null,
  });
}

/** The site's kind, also of a site that is wrong elsewhere, so that its sheet is not blamed for it. */
function kindOf(json: unknown, site: Result<Site, unknown>): LimitSheet['kind'] {
  if (site.ok) return site.value.kind;
  return valueAt(json, ['site', 'properties', 'kind']) === 'strip' ? 'strip' : 'launch';
}

function parseSite(json: unknown, context: AssessContext): Result<Site, Issue[]> {
  if (isReference(json, 'geometry') && valueAt(json, ['properties']) === undefined) return byId(json, { known: context.sites, path: ['site'], what: 'site' });
  return parseSiteFeature(json, context, ['site']);
}

function parseOwnSheet(json: unknown, rest: { readonly context: AssessContext; readonly kind: LimitSheet['kind'] }): Result<LimitSheet, Issue[]> {
  if (isReference(json, 'limits')) return byId(json, { known: rest.context.sheets, path: ['sheet'], what: 'sheet' });
  return parseSheet(json, { basis: 'optional', kind: rest.kind }, ['sheet']);
}

function isReference(json: unknown, mark: string): boolean {
  return valueAt(json, ['id']) !== undefined && valueAt(json, [mark]) === undefined;
}

interface Known<T> {
  readonly known: readonly T[];
  readonly path: Path;
  readonly what: string;
}

function byId<T extends { readonly id: string }>(json: unknown, { known, path, what }: Known<T>): Result<T, Issue[]> {
  const shape = check(idSchema(), json, path);
  if (!shape.ok) return shape;
  const { id } = shape.value;
  const found = known.find((item) => item.id === id);
  if (found !== undefined) return success(found);
  const ids = known.map((item) => item.id);
  const near = closestWord(id, ids);
  const problem = `no ${what} has this id${near === undefined ? '' : `; did you mean "${near}"?`}`;
  const allowed = ids.length > 20 ? `one of the ${ids.length} known ids` : `one of ${ids.join(', ')}`;
  return failure([issue([...path, 'id'], id, { problem, allowed })]);
}
