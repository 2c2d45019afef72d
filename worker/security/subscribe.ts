import { parsePreferences, parseSubscription, type Preferences, type SubscriptionContext, type SubscriptionRequest } from '../../lib/config/subscription.ts';
import { valueAt } from '../../lib/config/path.ts';
import type { LimitSheet } from '../../lib/margin/sheet.ts';
import type { Issue, Result } from '../../lib/result.ts';
import { instantOfLocal } from '../../lib/time.ts';
import { followingDueMs } from '../morning/times.ts';
import { sha256Hex } from '../secrets.ts';
import type { DeskServices } from '../service-set.ts';
import type { Statement } from '../store/database.ts';
import type { NewSubscription } from '../store/subscription.ts';

/** What a request may name: only the sites and sheets that it does name are read. */
async function contextOf(services: DeskServices, json: unknown): Promise<SubscriptionContext> {
  const { stores, read } = services;
  const named = valueAt(json, ['sites']);
  const items: readonly unknown[] = Array.isArray(named) ? named.slice(0, 50) : [];
  const ids = items.flatMap((item) => { const id = valueAt(item, ['id']); return typeof id === 'string' ? [id.slice(0, 64)] : []; });
  const [siteRows, sheetRows] = await Promise.all([ids.length === 0 ? [] : stores.site.some(ids), stores.sheet.newest()]);
  const sites = siteRows.flatMap((row) => { const place = read.site(row); return place.ok ? [place.value.site] : []; });
  const stored = sheetRows.flatMap((row) => { const sheet = read.sheet(row); return sheet.ok ? [sheet.value] : []; });
  const known = new Set(sheetRows.map(({ id }) => id));
  return { sites, sheets: [...stored, ...services.shippedSheets().filter(({ id }) => !known.has(id))], wingClasses: services.wingClasses(), ...services.addresses };
}

export async function readSubscription(services: DeskServices, json: unknown): Promise<Result<SubscriptionRequest, Issue[]>> {
  return parseSubscription(json, await contextOf(services, json));
}

export async function readPreferences(services: DeskServices, json: unknown): Promise<Result<Preferences, Issue[]>> {
  return parsePreferences(json, await contextOf(services, json));
}

/** Rows for what somebody prefers: their wing, sites, hour and units. One that exists keeps its state and links. */
export async function preferenceRows(services: DeskServices, id: string, preferences: Preferences, owner: string | null = null): Promise<Statement[]> {
  const nowMs = services.clock.nowMs();
  const { timeZone, deliverMinute, days, units, sites, wing, wingClass } = preferences;
  const body = JSON.stringify(wingClass === null ? wing : { class: wingClass });
  const wingKey = wingClass ?? `own-${(await sha256Hex(body)).slice(0, 16)}`;
  const subscription: NewSubscription = {
    id, timeZone, deliverMinute, days, units, owner,
    nextDueAtMs: followingDueMs({ timeZone, deliverMinute, days }, nowMs),
    pairs: sites.map((site) => ({ siteId: site.id, wingKey, sheetId: site.sheet })),
  };
  const shipped = shippedRows(services, sites.map(({ sheet }) => sheet));
  return [
    services.stores.wing.put([{ key: wingKey, name: wingClass ?? 'your own wing', body }]),
    ...(shipped.length === 0 ? [] : [services.stores.sheetHistory.putNew(shipped, nowMs)]),
    ...services.stores.subscription.put([subscription], nowMs),
    ...(preferences.pauseUntil === null ? [] : pauseRows(services, id, { timeZone, deliverMinute, days }, preferences.pauseUntil)),
  ];
}

/** Rows of those of these sheets that ship: a brief is held to a row. */
export function shippedRows(services: Pick<DeskServices, 'shippedSheets'>, ids: readonly string[]) {
  return services.shippedSheets().filter(({ id }) => ids.includes(id)).map((sheet) => ({ id: sheet.id, version: sheet.version, body: JSON.stringify(sheetJson(sheet)) }));
}

export function sheetJson({ limits, parameters, ...sheet }: LimitSheet): unknown {
  return { ...sheet, limits: { ...limits, ...parameters } };
}

/** Nothing until the first morning on or after a date. */
export function pauseRows(services: DeskServices, id: string, group: { readonly timeZone: string; readonly deliverMinute: number; readonly days: number }, date: string): Statement[] {
  const firstMs = instantOfLocal(date, { hour: 0, minute: 0 }, group.timeZone);
  const nextDueAtMs = followingDueMs(group, Math.max(firstMs - 1, services.clock.nowMs()));
  return services.stores.subscription.pause(id, { resumeAtMs: nextDueAtMs, nextDueAtMs });
}
