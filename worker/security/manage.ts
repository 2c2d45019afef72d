import { testLetter } from '../../lib/brief/words/letters.ts';
import type { DisplayUnits } from '../../lib/brief/units-out.ts';
import { DAYS, isPauseDate } from '../../lib/config/subscription.ts';
import { isoUtc, localDate } from '../../lib/time.ts';
import type { Issue } from '../../lib/result.ts';
import type { Message } from '../channels/channel.ts';
import { followingDueMs, SEND_TIMEOUT_MS } from '../morning/times.ts';
import { readLinkToken, type Purpose } from '../secrets.ts';
import type { DeskServices } from '../service-set.ts';
import type { SubscriptionDetail } from '../store/subscription.ts';
import { pauseRows, preferenceRows, readPreferences } from './subscribe.ts';

/** What a subscriber does through a secret link. Every one of these is asked for by POST, PUT or DELETE. */
export const ACTIONS = ['pause', 'resume', 'test', 'renew-links', 'end'] as const;
export type Action = (typeof ACTIONS)[number];

const TESTS = { most: 10, withinMs: 24 * 3_600_000 };

/** null for a token that is none, of another purpose, revoked, or of a subscription that is gone. */
export async function subscriptionOf({ settings, stores }: DeskServices, purpose: Purpose, token: string): Promise<SubscriptionDetail | null> {
  const named = settings.linkKey === null ? null : await readLinkToken(settings.linkKey, purpose, token);
  const detail = named === null ? null : await stores.subscription.detail(named.id);
  return detail !== null && detail.linkVersion === named?.version ? detail : null;
}

export interface TestResult {
  readonly kind: string;
  readonly reached: boolean;
  readonly reason: string;
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
    case 'test':
      if ((await stores.rate.take(`test ${id}`, TESTS, nowMs)) > 0) return { state: 'too-many' };
      return { state: 'done', tests: await testChannels(services, detail) };
    case 'renew-links':
      await stores.db.together([stores.subscription.renewLinks(id, detail.linkVersion)]);
      return { state: 'done', linkVersion: detail.linkVersion + 1 };
    case 'end':
      await stores.db.together(stores.subscription.erase(id));
      return { state: 'ended' };
  }
}

/** Sends a test to each channel now; a receiver that has yet to show that it wants to be told is challenged by it. */
async function testChannels(services: DeskServices, { id }: SubscriptionDetail): Promise<TestResult[]> {
  const { stores, channels, clock, settings, ids, wake } = services;
  const nowMs = clock.nowMs();
  const message: Message = {
    id: `test_${ids.next()}`, kind: 'test' as Message['kind'], ...testLetter({ service: new URL(settings.publicUrl).host }),
    issuedAtMs: nowMs, dataRunAtMs: null, validUntilMs: nowMs + 3_600_000, urgent: false, demo: false, days: [],
  };
  const results: TestResult[] = [];
  for (const channel of await stores.channel.ofSubscription(id)) {
    if (channel.state === 'dead') {
      results.push({ kind: channel.kind, reached: false, reason: 'this channel has ended' });
      continue;
    }
    if (channel.kind === 'push' && channel.state === 'unverified') {
      await stores.db.together([stores.channel.askAt(channel.id, nowMs)]);
      await wake('deliver', 1);
      results.push({ kind: channel.kind, reached: false, reason: 'this browser has not confirmed yet; it is asked once more' });
      continue;
    }
    const outcome = await channels[channel.kind]?.send(message, channel, { number: 1, nowMs, timeoutMs: SEND_TIMEOUT_MS, untilMs: message.validUntilMs });
    if (outcome?.state === 'sent' && outcome.verified === true) await stores.db.together([stores.channel.verify(channel.id)]);
    results.push({ kind: channel.kind, reached: outcome?.state === 'sent', reason: outcome === undefined ? 'this service has no such channel' : outcome.state === 'sent' ? 'taken by the receiver' : outcome.reason });
  }
  return results;
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
    channels: channels.map(({ kind, state, target, quietFrom, quietTo }) => ({ kind, state, to: shownTarget(target), quiet: quietFrom === null ? null : { fromMinute: quietFrom, toMinute: quietTo } })),
  };
}

/** Enough to tell which one it is: no whole address on a page that others may look at. */
function shownTarget(target: string): string {
  const { address, host } = JSON.parse(target) as { readonly address?: string; readonly host?: string };
  return address === undefined ? (host ?? 'this machine') : `${address.slice(0, 1)}…${address.slice(address.indexOf('@'))}`;
}
