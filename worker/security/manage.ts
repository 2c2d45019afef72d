import type { DisplayUnits } from '../../lib/brief/units-out.ts';
import { DAYS, isPauseDate } from '../../lib/config/subscription.ts';
import { isoUtc, localDate } from '../../lib/time.ts';
import type { Issue } from '../../lib/result.ts';
import { followingDueMs } from '../morning/times.ts';
import { readLinkToken, type Purpose } from '../secrets.ts';
import type { DeskServices } from '../service-set.ts';
import type { StoredChannel } from '../store/channel.ts';
import { plannedTest } from '../store/deliveries.ts';
import type { SubscriptionDetail } from '../store/subscription.ts';
import { pauseRows, preferenceRows, readPreferences } from './subscribe.ts';

/** What a subscriber does through a secret link. Every one of these is asked for by POST, PUT or DELETE. */
export const ACTIONS = ['pause', 'resume', 'test', 'renew-links', 'end'] as const;
export type Action = (typeof ACTIONS)[number];

const TESTS = { most: 10, withinMs: 24 * 3_600_000 };
const TEST_VALID_MS = 3_600_000;

/** null for a token that is none, of another purpose, revoked, or of a subscription that is gone. */
export async function subscriptionOf({ settings, stores }: DeskServices, purpose: Purpose, token: string): Promise<SubscriptionDetail | null> {
  const named = settings.linkKey === null ? null : await readLinkToken(settings.linkKey, purpose, token);
  const detail = named === null ? null : await stores.subscription.detail(named.id);
  return detail !== null && detail.linkVersion === named?.version ? detail : null;
}

export interface TestResult {
  readonly kind: string;
  /** `asked`: a browser that has not confirmed is asked once more instead. */
  readonly state: 'planned' | 'asked' | 'ended';
  /** Of the message: what became of it stands under the deliveries. */
  readonly id: string | null;
}

export type Acted =
  | { readonly state: 'done' | 'ended' | 'too-many'; readonly tests?: readonly TestResult[]; readonly linkVersion?: number }
  | { readonly state: 'wrong'; readonly problems: readonly Issue[] };

export async function act(services: DeskServices, detail: SubscriptionDetail, { action, until }: { readonly action: Action; readonly until: unknown }): Promise<Acted> {
  const { stores, clock } = services;
  const { id } = detail;
  const nowMs = clock.nowMs();
  switch (action) {
    case 'pause': {
      if (until === undefined || until === null || until === '') {
        await stores.db.together(stores.subscription.pause(id, null));
        return { state: 'done' };
      }
      if (typeof until !== 'string' || !isPauseDate(until) || until <= localDate(nowMs, detail.timeZone)) {
        return { state: 'wrong', problems: [{ path: '$.until', value: typeof until === 'string' ? JSON.stringify(until.slice(0, 20)) : typeof until, problem: 'not a day to come', allowed: 'a date yyyy-mm-dd after today, or none' }] };
      }
      await stores.db.together(pauseRows(services, id, detail, until));
      return { state: 'done' };
    }
    case 'resume':
      await stores.db.together([stores.subscription.resume(id, followingDueMs(detail, nowMs))]);
      return { state: 'done' };
    case 'test': {
      const tests = await askTests(services, detail, await stores.channel.ofSubscription(id));
      return 'waitS' in tests ? { state: 'too-many' } : { state: 'done', tests };
    }
    case 'renew-links':
      await stores.db.together([stores.subscription.renewLinks(id, detail.linkVersion)]);
      return { state: 'done', linkVersion: detail.linkVersion + 1 };
    case 'end':
      await stores.db.together(stores.subscription.erase(id));
      return { state: 'ended' };
  }
}

/**
 * A test of each of these channels, or how long to wait for the next. It goes the way of every message, so that it proves that
 * way; a receiver that has yet to show that it wants to be told is challenged by it.
 */
export async function askTests({ stores, clock, ids, wake }: DeskServices, detail: SubscriptionDetail, channels: readonly StoredChannel[]): Promise<TestResult[] | { readonly waitS: number }> {
  const nowMs = clock.nowMs();
  const waitS = await stores.rate.take(`test ${detail.id}`, TESTS, nowMs);
  if (waitS > 0) return { waitS };
  const localDateNow = localDate(nowMs, detail.timeZone);
  const tests = channels.map(({ id, kind, state }) => {
    if (state === 'dead') return { result: { kind, state: 'ended' as const, id: null }, statements: [] };
    if (kind === 'push' && state === 'unverified') return { result: { kind, state: 'asked' as const, id: null }, statements: [stores.channel.askAt(id, nowMs)] };
    const messageId = `msg_${ids.next()}`;
    const planned = plannedTest({ messageId, subscriptionId: detail.id, channelId: id, localDate: localDateNow, nowMs, validUntilMs: nowMs + TEST_VALID_MS });
    return { result: { kind, state: 'planned' as const, id: messageId }, statements: [planned] };
  });
  await stores.db.together(tests.flatMap(({ statements }) => statements));
  await wake('deliver', 1);
  return tests.map(({ result }) => result);
}

/** What is kept of somebody's wishes, in the form in which they may change them. */
export interface PreferencesJson {
  readonly sites: readonly { readonly id: string; readonly sheet: string }[];
  readonly wing: unknown;
  readonly deliver: { readonly at: string; readonly timeZone: string; readonly days: readonly string[] };
  readonly units: DisplayUnits;
  readonly pauseUntil: string | null;
}

export async function preferencesJson({ stores }: DeskServices, detail: SubscriptionDetail): Promise<PreferencesJson> {
  const pairs = await stores.subscription.pairsOf([detail.id]);
  const [wing] = await stores.wing.some([pairs[0]?.wingKey ?? '']);
  const two = (value: number): string => String(value).padStart(2, '0');
  return {
    sites: pairs.map(({ siteId, sheetId }) => ({ id: siteId, sheet: sheetId })),
    wing: wing === undefined ? { class: 'EN B' } : JSON.parse(wing.body) as unknown,
    deliver: { at: `${two(Math.floor(detail.deliverMinute / 60))}:${two(detail.deliverMinute % 60)}`, timeZone: detail.timeZone, days: DAYS.filter((_, bit) => (detail.days >> bit) & 1) },
    units: { speed: detail.speedUnit, height: detail.heightUnit },
    pauseUntil: detail.state === 'paused' && detail.resumeAtMs !== null ? localDate(detail.resumeAtMs, detail.timeZone) : null,
  };
}

export async function change(services: DeskServices, detail: SubscriptionDetail, json: unknown): Promise<readonly Issue[]> {
  const preferences = await readPreferences(services, json);
  if (!preferences.ok) return preferences.error;
  const pausedUntilMs = detail.state === 'paused' && preferences.value.pauseUntil === null ? detail.resumeAtMs : null;
  const again = pausedUntilMs === null ? [] : pauseRows(services, detail.id, preferences.value, localDate(pausedUntilMs, preferences.value.timeZone));
  await services.stores.db.together([...(await preferenceRows(services, detail.id, preferences.value)), ...again]);
  return [];
}

/** Everything that is shown to its own subscriber. */
export async function managed(services: DeskServices, detail: SubscriptionDetail) {
  const channels = await services.stores.channel.ofSubscription(detail.id);
  return {
    state: detail.state,
    nextBriefAt: detail.state === 'active' ? isoUtc(detail.nextDueAtMs) : null,
    ...(await preferencesJson(services, detail)),
    channels: channels.map(({ id, kind, state, target, quietFrom, quietTo }) => ({ id, kind, state, to: shownTarget(target), quiet: quietFrom === null ? null : { fromMinute: quietFrom, toMinute: quietTo } })),
  };
}

/** Enough to tell which one it is: no whole address on a page that others may look at. */
function shownTarget(target: string): string {
  const { address, host } = JSON.parse(target) as { readonly address?: string; readonly host?: string };
  return address === undefined ? (host ?? 'this machine') : `${address.slice(0, 1)}…${address.slice(address.indexOf('@'))}`;
}
