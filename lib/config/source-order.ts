/**
 * Which forecast services are asked, in which order, for which part of the world, and what each can give at all
 * (config/sources.json). Data only: adding a model or changing the order is an edit of that file.
 */
import * as z from 'zod/mini';
import { CONDITION_FIELDS, type ConditionField } from '../forecast/conditions.ts';
import { failure, success, type Issue, type Result } from '../result.ts';
import { check, issue, issuesIn } from './check.ts';
import { fields, list, number, once, oneOf, trueOrFalse, wholeNumber } from './fields.ts';
import { valueAt, type Path } from './path.ts';
import { repeatedIds } from './sites.ts';
import { line } from './text.ts';

/** A box well inside a model's domain; a site on its edge is inside. */
export interface Region {
  readonly westDeg: number;
  readonly southDeg: number;
  readonly eastDeg: number;
  readonly northDeg: number;
}

interface SourceCommon {
  /** Stable, as in briefs and tables: `open-meteo:icon_d2`. */
  readonly id: string;
  readonly kind: 'deterministic' | 'ensemble';
  /** Empty: the whole world. */
  readonly regions: readonly Region[];
  /** What it can give at all; what its answers leave out of this is missing, what is not here has no vote. */
  readonly declares: readonly ConditionField[];
  /** An operator's own risk, for a service without a run time; adds a caution. */
  readonly trustWithoutRunTime: boolean;
}

/** A model of the Open-Meteo interface, asked by its own name and never through a mixture. */
export interface OpenMeteoSource extends SourceCommon {
  readonly provider: 'open-meteo';
  /** `models=` of the request. */
  readonly model: string;
  /** Storage names under which the run times are published; the older of several counts. */
  readonly runTimeNames: readonly string[];
  readonly nearGroundM: readonly number[];
  /** Pressure levels that the model has; others must not be asked. */
  readonly levelsHpa: readonly number[];
  /** Columns of an ensemble, 1 for a deterministic model. */
  readonly members: number;
  /** How far apart the model's own steps are; the service interpolates between them. */
  readonly stepHours: number;
  /** Asked for, and declared only where an answer has it: what the documentation of the model leaves open. */
  readonly mayGive: readonly ConditionField[];
  /** A model that knows the depth of the mixed layer, for one that does not. */
  readonly mixedLayerFrom: { readonly model: string; readonly runTimeNames: readonly string[] } | null;
}

export interface PlainSource extends SourceCommon {
  readonly provider: 'met-norway' | 'nws';
}

export type SourceEntry = OpenMeteoSource | PlainSource;

export interface SourceOrder {
  /** How many of each kind are asked for a site, the first in order that cover it. */
  readonly perSite: { readonly deterministic: number; readonly ensemble: number };
  readonly sources: readonly SourceEntry[];
  /** What a page must say beside data of a provider. */
  readonly credits: Readonly<Record<SourceEntry['provider'], { readonly text: string; readonly url: string }>>;
}

function name() {
  const error = (): string => 'the name the service uses: lower-case letters, digits, underscores';
  return z.string({ error }).check(z.regex(/^[a-z0-9_]{1,60}$/, { error }));
}

function common() {
  const idForm = (): string => 'provider:model, "open-meteo:icon_d2"';
  const lon = { min: -180, max: 180, unit: '°' };
  const lat = { min: -90, max: 90, unit: '°' };
  return {
    id: z.string({ error: idForm }).check(z.regex(/^[a-z0-9-]{1,40}:[a-z0-9_-]{1,60}$/, { error: idForm })),
    kind: oneOf(['deterministic', 'ensemble']),
    regions: list(fields({ westDeg: number(lon), southDeg: number(lat), eastDeg: number(lon), northDeg: number(lat) }), { min: 0, max: 20 }),
    declares: list(oneOf(CONDITION_FIELDS), { min: 1, max: CONDITION_FIELDS.length }),
    trustWithoutRunTime: z._default(trueOrFalse(), false),
  };
}

const openMeteoSchema = once(() =>
  fields({
    provider: oneOf(['open-meteo']),
    ...common(),
    model: name(),
    runTimeNames: list(name(), { min: 1, max: 4 }),
    nearGroundM: list(wholeNumber({ min: 20, max: 300, unit: "m above the model's ground" }), { min: 0, max: 8 }),
    levelsHpa: list(wholeNumber({ min: 300, max: 1000, unit: 'hPa' }), { min: 0, max: 40 }),
    members: z._default(wholeNumber({ min: 1, max: 100, unit: 'columns' }), 1),
    stepHours: z._default(wholeNumber({ min: 1, max: 6, unit: 'h' }), 1),
    mayGive: z._default(list(oneOf(CONDITION_FIELDS), { min: 0, max: CONDITION_FIELDS.length }), []),
    mixedLayerFrom: z._default(z.nullable(fields({ model: name(), runTimeNames: list(name(), { min: 1, max: 4 }) })), null),
  }),
);

const plainSchema = once(() => fields({ provider: oneOf(['met-norway', 'nws', 'open-meteo']), ...common() }));

const orderSchema = once(() => {
  const credit = fields({ text: line(120), url: z.url({ protocol: /^https$/, error: () => 'an https address' }) });
  const count = wholeNumber({ min: 1, max: 6, unit: 'sources' });
  return fields({
    perSite: fields({ deterministic: count, ensemble: wholeNumber({ min: 0, max: 3, unit: 'sources' }) }),
    sources: list(z.unknown(), { min: 1, max: 60 }),
    credits: fields({ 'open-meteo': credit, 'met-norway': credit, nws: credit }),
  });
});

export function parseSourceOrder(json: unknown, path: Path = []): Result<SourceOrder, Issue[]> {
  const shape = check(orderSchema(), json, path);
  const found = valueAt(json, ['sources']);
  const items: readonly unknown[] = Array.isArray(found) ? found : [];
  const at = [...path, 'sources'];
  const parsed = items.map((item, index) => parseEntry(item, [...at, index]));
  const issues = [...issuesIn(shape), ...parsed.flatMap(issuesIn), ...repeatedIds(items, at), ...items.flatMap((item, index) => regionIssues(item, [...at, index]))];
  if (!shape.ok || issues.length > 0) return failure(issues);
  return success({ perSite: shape.value.perSite, credits: shape.value.credits, sources: parsed.flatMap((entry) => (entry.ok ? [entry.value] : [])) });
}

function parseEntry(json: unknown, path: Path): Result<SourceEntry, Issue[]> {
  if (valueAt(json, ['provider']) === 'open-meteo') return check(openMeteoSchema(), json, path);
  const shape = check(plainSchema(), json, path);
  return shape.ok ? success(shape.value as PlainSource) : shape;
}

function regionIssues(json: unknown, path: Path): Issue[] {
  const regions = valueAt(json, ['regions']);
  if (!Array.isArray(regions)) return [];
  return regions.flatMap((region: unknown, index) => {
    const sides: [string, string][] = [['westDeg', 'eastDeg'], ['southDeg', 'northDeg']];
    return sides.flatMap(([low, high]) => {
      const from = valueAt(region, [low]);
      const to = valueAt(region, [high]);
      if (typeof from !== 'number' || typeof to !== 'number' || to > from) return [];
      return [issue([...path, 'regions', index, high], to, { problem: `this box ends before it begins`, allowed: `above ${low}, ${from}; a region across the date line is two boxes` })];
    });
  });
}

/** Whether a place lies in the part of the world that a source is asked for. */
export function coversPlace(source: { readonly regions: readonly Region[] }, place: { readonly lonDeg: number; readonly latDeg: number }): boolean {
  if (source.regions.length === 0) return true;
  return source.regions.some((region) => {
    const isBetween = place.lonDeg >= region.westDeg && place.lonDeg <= region.eastDeg;
    return isBetween && place.latDeg >= region.southDeg && place.latDeg <= region.northDeg;
  });
}

/** The sources to ask for a place: of each kind the first in order that cover it, as many as `perSite` says. */
export function sourcesFor(order: SourceOrder, place: { readonly lonDeg: number; readonly latDeg: number }): SourceEntry[] {
  const covering = order.sources.filter((source) => coversPlace(source, place));
  const ofKind = (kind: SourceEntry['kind']): SourceEntry[] => covering.filter((source) => source.kind === kind).slice(0, order.perSite[kind]);
  return [...ofKind('deterministic'), ...ofKind('ensemble')];
}

/** The sources that stand by for a place: they cover it too, behind those that are asked. */
export function standBysFor(order: SourceOrder, place: { readonly lonDeg: number; readonly latDeg: number }): SourceEntry[] {
  const asked = new Set(sourcesFor(order, place).map(({ id }) => id));
  return order.sources.filter((source) => coversPlace(source, place) && !asked.has(source.id));
}
