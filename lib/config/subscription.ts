/**
 * What somebody asks to be told: the body of POST /api/v1/subscriptions, and, without its channels, of a later change.
 * Every problem of every part is reported at once, and nothing but what stands here can be asked for.
 */
import * as z from 'zod/mini';
import { HEIGHT_UNITS, SPEED_UNITS, type DisplayUnits } from '../brief/units-out.ts';
import { failure, success, type Issue, type Result } from '../result.ts';
import { isCalendarDate } from '../time.ts';
import type { WingClass } from '../wing/wing.ts';
import { capped, check, issue, issuesIn } from './check.ts';
import { fields, list, once, oneOf } from './fields.ts';
import { valueAt, type Path } from './path.ts';
import { channelIssues, channelSchema, clock, minuteOf, type ChannelChecks, type ChannelRequest } from './subscription-channels.ts';
import { kebabId } from './text.ts';
import { parseWing, type WingClasses } from './wing.ts';
import { zone } from './zone.ts';

export const DAYS = ['mon', 'tue', 'wed', 'thu', 'fri', 'sat', 'sun'] as const;

export const DEFAULT_SHEETS = { launch: 'descent-new', strip: 'solo-tow' } as const;

export interface Preferences {
  readonly sites: readonly { readonly id: string; readonly sheet: string }[];
  /** The class, where the wing is no more than its class; else null. */
  readonly wingClass: WingClass | null;
  /** The wing as it was given. */
  readonly wing: unknown;
  readonly timeZone: string;
  /** Minutes after local midnight. */
  readonly deliverMinute: number;
  /** Bit 0 is Monday. */
  readonly days: number;
  readonly units: DisplayUnits;
  /** yyyy-mm-dd of the first morning that is wanted. */
  readonly pauseUntil: string | null;
}

export interface SubscriptionRequest extends Preferences {
  /** In order: the next is told when the one before cannot be reached any more. */
  readonly channels: readonly ChannelRequest[];
}

/** What ids in a request may stand for, and where this service sends. */
export interface SubscriptionContext extends ChannelChecks {
  readonly sites: readonly Kinded[];
  readonly sheets: readonly Kinded[];
  readonly wingClasses: WingClasses;
}

interface Kinded {
  readonly id: string;
  readonly kind: 'launch' | 'strip';
}

/** Somebody who pauses for longer than this century means to end it. */
export function isPauseDate(text: string): boolean {
  return isCalendarDate(text) && text < '2100';
}

function preferences() {
  const DATE = 'a date yyyy-mm-dd of this century';
  return {
    sites: list(fields({ id: kebabId(), sheet: z.optional(kebabId()) }), { min: 1, max: 50 }),
    wing: z.optional(z.unknown()),
    deliver: fields({ at: clock(), timeZone: zone(), days: z.optional(list(oneOf(DAYS), { min: 1, max: 7 })) }),
    units: z.optional(fields({ speed: z.optional(oneOf(SPEED_UNITS)), height: z.optional(oneOf(HEIGHT_UNITS)) })),
    pauseUntil: z.nullish(z.string({ error: () => DATE }).check(z.refine(isPauseDate, { error: () => DATE, params: { problem: 'no date' } }))),
    /** There is English; whoever asks for another language is answered in it. */
    language: z.optional(z.string({ error: () => 'a language tag such as "en"' }).check(z.maxLength(35, { error: () => 'at most 35 characters' }))),
  };
}

export const preferencesSchema = once(() => fields(preferences()));
export const subscriptionSchema = once(() => fields({ ...preferences(), channels: list(channelSchema(), { min: 1, max: 4 }) }));

export function parseSubscription(json: unknown, context: SubscriptionContext): Result<SubscriptionRequest, Issue[]> {
  const shape = check(subscriptionSchema(), json, []);
  const channels = channelIssues(valueAt(json, ['channels']), context);
  const rest = partsOf(json, context);
  const issues = [...issuesIn(shape), ...channels.issues, ...issuesIn(rest)];
  if (!shape.ok || !rest.ok || issues.length > 0) return failure(capped(issues));
  return success({ ...preferencesOf(shape.value, rest.value), channels: channels.accepted });
}

export function parsePreferences(json: unknown, context: SubscriptionContext): Result<Preferences, Issue[]> {
  const shape = check(preferencesSchema(), json, []);
  const rest = partsOf(json, context);
  const issues = [...issuesIn(shape), ...issuesIn(rest)];
  return !shape.ok || !rest.ok ? failure(capped(issues)) : success(preferencesOf(shape.value, rest.value));
}

type Parts = Pick<Preferences, 'sites' | 'wing' | 'wingClass'>;

function preferencesOf({ deliver, units, pauseUntil }: z.output<ReturnType<typeof preferencesSchema>>, parts: Parts): Preferences {
  const days: readonly (typeof DAYS)[number][] = deliver.days ?? DAYS;
  return {
    ...parts,
    timeZone: deliver.timeZone,
    deliverMinute: minuteOf(deliver.at),
    days: days.reduce((bits, day) => bits | (1 << DAYS.indexOf(day)), 0),
    units: { speed: units?.speed ?? 'm/s', height: units?.height ?? 'm' },
    pauseUntil: pauseUntil ?? null,
  };
}

/** What must be held against more than a schema: the wing, and what the ids stand for. */
function partsOf(json: unknown, context: SubscriptionContext): Result<Parts, Issue[]> {
  const wing = valueAt(json, ['wing']) ?? { class: 'EN B' };
  const parsed = parseWing(wing, context.wingClasses, ['wing']);
  const given = valueAt(json, ['sites']);
  const chosen = Array.isArray(given) && given.length <= 50 ? given.map((item, index) => siteOf(item, context, ['sites', index])) : [];
  const issues = [...issuesIn(parsed), ...chosen.flatMap(issuesIn)];
  if (!parsed.ok || issues.length > 0) return failure(issues);
  const isClassAlone = typeof wing === 'object' && Object.values(wing).filter((value) => value !== null).length === 1;
  const sites = new Map(chosen.flatMap((site) => (site.ok ? [[`${site.value.id} ${site.value.sheet}`, site.value] as const] : [])));
  return success({ sites: [...sites.values()], wing, wingClass: isClassAlone ? (parsed.value.class ?? null) : null });
}

function siteOf(item: unknown, { sites, sheets }: SubscriptionContext, path: Path): Result<{ id: string; sheet: string }, Issue[]> {
  const id = valueAt(item, ['id']);
  const site = sites.find((known) => known.id === id);
  if (typeof id !== 'string') return success({ id: '', sheet: '' });
  if (site === undefined) return failure([issue([...path, 'id'], id, { problem: 'no site has this id', allowed: 'the id of a site of GET /api/v1/sites' })]);
  const sheetId = valueAt(item, ['sheet']) ?? DEFAULT_SHEETS[site.kind];
  const sheet = sheets.find((known) => known.id === sheetId);
  const allowed = `one of ${sheets.filter(({ kind }) => kind === site.kind).slice(0, 20).map((known) => known.id).join(', ')}`;
  if (sheet === undefined) return failure([issue([...path, 'sheet'], sheetId, { problem: 'no sheet has this id', allowed })]);
  if (sheet.kind !== site.kind) return failure([issue([...path, 'sheet'], sheetId, { problem: `this sheet is for a ${sheet.kind}`, allowed })]);
  return success({ id, sheet: sheet.id });
}
