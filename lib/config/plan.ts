/** A day to be planned, as POST /api/v1/plan, the page's form and config/plan-demo.json give it: strict, every problem at once. */
import type { LimitSheet } from '../margin/sheet.ts';
import type { PlanRequest } from '../plan/request.ts';
import { failure, success, type Issue, type Result } from '../result.ts';
import type { Site } from '../site.ts';
import { isCalendarDate } from '../time.ts';
import { capped, check, issue } from './check.ts';
import { closestWord } from './closest-word.ts';
import { fields, list, once, oneOf, trueOrFalse, wholeNumber } from './fields.ts';
import * as z from 'zod/mini';
import type { Path } from './path.ts';
import { kebabId, line } from './text.ts';
import { WING_CLASSES } from './wing.ts';

export const MOST_GROUPS = 12;
export const MOST_PLAN_SITES = 8;

export interface PlanContext {
  readonly sites: readonly Site[];
  readonly sheets: readonly LimitSheet[];
  /** The date that is meant where none is given: this morning's at that site. */
  readonly dateAt: (site: Site) => string;
}

const DATE = 'a date that exists, written 2027-05-14';
const hour = (min: number, max: number) => wholeNumber({ min, max, unit: "o'clock, local" });
const hours = () => wholeNumber({ min: 1, max: 24, unit: 'h' });
const people = (min: number) => wholeNumber({ min, max: 99, unit: 'instructors' });
const minutes = () => wholeNumber({ min: 0, max: 360, unit: 'min' });

export const planSchema = once(() => fields({
  date: z.nullish(z.string({ error: () => DATE }).check(z.refine(isCalendarDate, { error: () => DATE, params: { problem: 'not a date' } }))),
  instructors: people(0),
  movingMin: z._default(minutes(), 30),
  moves: z._default(list(fields({ from: kebabId(), to: kebabId(), minutes: minutes() }), { min: 0, max: 56 }), []),
  sites: list(fields({
    id: kebabId(), capacity: wholeNumber({ min: 1, max: 50, unit: 'groups at once' }), openFromHour: z._default(hour(0, 23), 0), openToHour: z._default(hour(1, 24), 24),
  }), { min: 1, max: MOST_PLAN_SITES }),
  groups: list(fields({
    name: line(40), sheet: kebabId(), wing: oneOf(WING_CLASSES), minHours: z._default(hours(), 1), wishHours: hours(),
    earliestHour: z._default(hour(0, 23), 0), latestHour: z._default(hour(1, 24), 24), sites: list(kebabId(), { min: 1, max: MOST_PLAN_SITES }),
    close: z._default(trueOrFalse(), false), instructors: z._default(people(0), 1),
  }), { min: 1, max: MOST_GROUPS }),
  lost: z._default(list(fields({ site: kebabId(), hour: hour(0, 23) }), { min: 0, max: 200 }), []),
}));

type Shape = z.output<ReturnType<typeof planSchema>>;

export function parsePlanRequest(json: unknown, context: PlanContext, path: Path = []): Result<PlanRequest, Issue[]> {
  const shape = check(planSchema(), json, path);
  if (!shape.ok) return failure(capped(shape.error));
  const plan = shape.value;
  const issues = [...siteIssues(plan, context, path), ...plan.groups.flatMap((group, index) => groupIssues({ group, plan, context }, [...path, 'groups', index])), ...referenceIssues(plan, path)];
  const first = context.sites.find(({ id }) => id === plan.sites[0]?.id);
  if (issues.length > 0 || first === undefined) return failure(capped(issues));
  return success({ ...plan, date: plan.date ?? context.dateAt(first) });
}

function siteIssues({ sites }: Shape, context: PlanContext, path: Path): Issue[] {
  const zone = context.sites.find(({ id }) => id === sites[0]?.id)?.timeZone;
  return sites.flatMap((site, index) => {
    const at = [...path, 'sites', index];
    const own = context.sites.find(({ id }) => id === site.id);
    const found: Issue[] = [];
    if (own === undefined) found.push(unknownId([...at, 'id'], site.id, context.sites.map(({ id }) => id)));
    else if (zone !== undefined && own.timeZone !== zone) found.push(issue([...at, 'id'], site.id, { problem: `its clocks are those of ${own.timeZone}, the first site's those of ${zone}`, allowed: 'sites of one time zone' }));
    if (sites.findIndex(({ id }) => id === site.id) < index) found.push(issue([...at, 'id'], site.id, { problem: 'this site stands here twice', allowed: 'each site once' }));
    if (site.openToHour <= site.openFromHour) found.push(issue([...at, 'openToHour'], site.openToHour, { problem: 'it closes before it opens', allowed: `${site.openFromHour + 1} to 24` }));
    return found;
  });
}

function groupIssues({ group, plan, context }: { readonly group: Shape['groups'][number]; readonly plan: Shape; readonly context: PlanContext }, at: Path): Issue[] {
  const found: Issue[] = [];
  const sheet = context.sheets.find(({ id }) => id === group.sheet);
  if (sheet === undefined) found.push(unknownId([...at, 'sheet'], group.sheet, context.sheets.map(({ id }) => id)));
  if (plan.groups.filter(({ name }) => name === group.name).length > 1) found.push(issue([...at, 'name'], group.name, { problem: 'two groups have this name', allowed: 'a name of its own for every group' }));
  if (group.wishHours < group.minHours) found.push(issue([...at, 'wishHours'], group.wishHours, { problem: 'fewer hours are wished than are needed at least', allowed: `${group.minHours} to 24 h` }));
  if (group.latestHour - group.earliestHour < group.minHours) {
    found.push(issue([...at, 'latestHour'], group.latestHour, { problem: `between ${group.earliestHour} and ${group.latestHour} o'clock there are not ${group.minHours} h`, allowed: 'hours that hold the least hours' }));
  }
  for (const [index, id] of group.sites.entries()) {
    const place = [...at, 'sites', index];
    const site = context.sites.find((each) => each.id === id);
    if (plan.sites.every((each) => each.id !== id)) found.push(unknownId(place, id, plan.sites.map((each) => each.id)));
    else if (site !== undefined && sheet !== undefined && site.kind !== sheet.kind) found.push(issue(place, id, { problem: `the sheet ${sheet.id} is for a ${sheet.kind} and the site is a ${site.kind}`, allowed: `a ${sheet.kind}` }));
    if (group.sites.indexOf(id) < index) found.push(issue(place, id, { problem: 'this site stands here twice', allowed: 'each site once' }));
  }
  return found;
}

function referenceIssues({ sites, moves, lost }: Shape, path: Path): Issue[] {
  const ids = sites.map(({ id }) => id);
  const unknown = (at: Path, id: string): Issue[] => (ids.includes(id) ? [] : [unknownId(at, id, ids)]);
  return [
    ...moves.flatMap(({ from, to }, index) => [...unknown([...path, 'moves', index, 'from'], from), ...unknown([...path, 'moves', index, 'to'], to)]),
    ...lost.flatMap(({ site }, index) => unknown([...path, 'lost', index, 'site'], site)),
  ];
}

function unknownId(path: Path, id: string, known: readonly string[]): Issue {
  const near = closestWord(id, known);
  return issue(path, id, { problem: `nothing has this id${near === undefined ? '' : `; did you mean "${near}"?`}`, allowed: `one of ${known.slice(0, 20).join(', ')}` });
}
