/** For which wing and which sheet a site is judged where nobody has chosen (config/published.json): by the kind of site, or for one site. */
import * as z from 'zod/mini';
import type { LimitSheet } from '../margin/sheet.ts';
import { failure, success, type Issue, type Result } from '../result.ts';
import type { Site } from '../site.ts';
import type { WingClass } from '../wing/wing.ts';
import { check, issue } from './check.ts';
import { closestWord } from './closest-word.ts';
import { fields, list, once, oneOf } from './fields.ts';
import type { Path } from './path.ts';
import { kebabId } from './text.ts';
import { WING_CLASSES } from './wing.ts';

export interface PublishedPair {
  readonly wing: WingClass;
  /** Id of a sheet. */
  readonly sheet: string;
}

export interface Published {
  readonly launch: readonly PublishedPair[];
  readonly strip: readonly PublishedPair[];
  readonly sites: readonly { readonly site: string; readonly pairs: readonly PublishedPair[] }[];
}

const publishedSchema = once(() => {
  const pair = fields({ wing: oneOf(WING_CLASSES), sheet: kebabId() });
  const pairs = () => list(pair, { min: 1, max: 8 });
  return fields({ launch: pairs(), strip: pairs(), sites: z._default(list(fields({ site: kebabId(), pairs: pairs() }), { min: 0, max: 1000 }), []) });
});

/** What the ids in it must stand for: sheets of the right kind, sites that are there. */
export interface PublishedContext {
  readonly sheets: readonly LimitSheet[];
  readonly sites: readonly Site[];
}

export function parsePublished(json: unknown, context: PublishedContext, path: Path = []): Result<Published, Issue[]> {
  const shape = check(publishedSchema(), json, path);
  if (!shape.ok) return shape;
  const published = shape.value;
  const issues = [
    ...published.launch.flatMap((pair, index) => sheetIssues(pair, { kind: 'launch', context, path: [...path, 'launch', index, 'sheet'] })),
    ...published.strip.flatMap((pair, index) => sheetIssues(pair, { kind: 'strip', context, path: [...path, 'strip', index, 'sheet'] })),
    ...published.sites.flatMap(({ site, pairs }, index) => siteIssues({ site, pairs }, { context, path: [...path, 'sites', index] })),
  ];
  return issues.length > 0 ? failure(issues) : success(published);
}

function siteIssues({ site, pairs }: Published['sites'][number], { context, path }: { context: PublishedContext; path: Path }): Issue[] {
  const found = context.sites.find(({ id }) => id === site);
  if (found === undefined) return [unknownId([...path, 'site'], site, context.sites)];
  return pairs.flatMap((pair, index) => sheetIssues(pair, { kind: found.kind, context, path: [...path, 'pairs', index, 'sheet'] }));
}

function sheetIssues(pair: PublishedPair, { kind, context, path }: { kind: Site['kind']; context: PublishedContext; path: Path }): Issue[] {
  const sheet = context.sheets.find(({ id }) => id === pair.sheet);
  if (sheet === undefined) return [unknownId(path, pair.sheet, context.sheets)];
  return sheet.kind === kind ? [] : [issue(path, pair.sheet, { problem: `this sheet is for a ${sheet.kind}`, allowed: `a sheet for a ${kind}` })];
}

function unknownId(path: Path, id: string, known: readonly { readonly id: string }[]): Issue {
  const ids = known.map((item) => item.id);
  const near = closestWord(id, ids);
  return issue(path, id, { problem: `nothing has this id${near === undefined ? '' : `; did you mean "${near}"?`}`, allowed: `one of ${ids.slice(0, 20).join(', ')}` });
}

/** The pairs a site is judged for, the first of them where only one is wanted. */
export function publishedPairs(published: Published, site: Pick<Site, 'id' | 'kind'>): readonly PublishedPair[] {
  return published.sites.find((own) => own.site === site.id)?.pairs ?? published[site.kind];
}
