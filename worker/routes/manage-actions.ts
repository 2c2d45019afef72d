/** What the forms of the page of a subscription do. Each is a POST; whatever cannot be used changes nothing. */
import { channelIssues, minuteOf } from '../../lib/config/subscription-channels.ts';
import type { Issue } from '../../lib/result.ts';
import { pushKeyOf } from '../security/browser.ts';
import { channelProblems } from '../security/channel-limits.ts';
import { act, askTests, change, preferencesJson } from '../security/manage.ts';
import type { DeskServices } from '../service-set.ts';
import type { StoredChannel } from '../store/channel.ts';
import { dropOldSecret, orderChannels, removeChannel, renewSecret, setQuiet } from '../store/deliveries.ts';
import type { SubscriptionDetail } from '../store/subscription.ts';
import { textIn, wishesJson } from '../web/forms/wishes.ts';

const MOST_CHANNELS = 4;

/** `said` names a sentence of the page; `linkVersion` is that of links made anew. */
export type Done = { readonly said: string; readonly at?: string; readonly linkVersion?: number } | { readonly problems: readonly Issue[]; readonly status?: number } | 'ended' | 'not-understood';

interface Asked {
  readonly services: DeskServices;
  readonly detail: SubscriptionDetail;
  readonly form: FormData;
  readonly request: Request;
}

function wrong(path: string, problem: string, allowed: string): Done {
  return { problems: [{ path, value: 'as typed', problem, allowed }] };
}

export async function doAsked(asked: Asked): Promise<Done> {
  const { services, detail, form } = asked;
  const action = textIn(form, 'action');
  switch (action) {
    case 'change': {
      const kept = await preferencesJson(services, detail);
      const problems = await change(services, detail, { ...wishesJson(form, kept), pauseUntil: kept.pauseUntil });
      return problems.length > 0 ? { problems } : { said: 'changed', at: 'wishes' };
    }
    case 'pause': case 'resume': case 'renew-links': case 'end': {
      const acted = await act(services, detail, { action, until: textIn(form, 'until') });
      if (acted.state === 'ended') return 'ended';
      if (acted.state === 'wrong') return { problems: acted.problems };
      if (action === 'renew-links' && 'linkVersion' in acted && acted.linkVersion !== undefined) return { said: 'new-links', linkVersion: acted.linkVersion };
      return { said: action === 'pause' ? 'paused' : 'resumed', at: 'pause' };
    }
    case 'test': case 'quiet': case 'raise': case 'remove': case 'new-secret': case 'old-secret': {
      const channels = await services.stores.channel.ofSubscription(detail.id);
      const channel = channels.find(({ id }) => id === form.get('channel'));
      return channel === undefined ? 'not-understood' : ofChannel(asked, action, channel, channels);
    }
    case 'leave-plan':
      await services.stores.db.together([services.stores.plan.tellNoMore(textIn(form, 'plan'), detail.id)]);
      return { said: 'no-plan', at: 'wishes' };
    case 'add-browser': return addChannel(asked, { kind: 'push', endpoint: textIn(form, 'endpoint'), keys: { p256dh: textIn(form, 'p256dh'), auth: textIn(form, 'auth') } });
    case 'add-webhook': return addChannel(asked, { kind: 'webhook', url: textIn(form, 'hook') });
    default: return 'not-understood';
  }
}

async function ofChannel({ services, detail, form }: Asked, action: 'test' | 'quiet' | 'raise' | 'remove' | 'new-secret' | 'old-secret', channel: StoredChannel, channels: readonly StoredChannel[]): Promise<Done> {
  const { stores } = services;
  switch (action) {
    case 'test': return test(services, detail, channel);
    case 'quiet': {
      const [from, to] = [textIn(form, 'from'), textIn(form, 'to')];
      const isClock = (text: string): boolean => /^([01]\d|2[0-3]):[0-5]\d$/.test(text);
      if (from === '' && to === '') {
        await stores.db.together([setQuiet(detail.id, channel.id, null)]);
        return { said: 'loud', at: channel.id };
      }
      if (!isClock(from) || !isClock(to)) return wrong('$.quiet', 'quiet hours need a beginning and an end', 'two local times HH:MM, or none');
      if (from === to) return wrong('$.quiet', 'quiet hours that begin when they end', 'two different times');
      await stores.db.together([setQuiet(detail.id, channel.id, { from: minuteOf(from), to: minuteOf(to) })]);
      return { said: 'quiet', at: channel.id };
    }
    case 'raise': {
      const ids = channels.map(({ id }) => id);
      const at = ids.indexOf(channel.id);
      const before = ids[at - 1];
      if (before !== undefined) await stores.db.together([orderChannels(detail.id, [...ids.slice(0, at - 1), channel.id, before, ...ids.slice(at + 1)])]);
      return { said: 'order', at: channel.id };
    }
    case 'new-secret': {
      await stores.db.together([renewSecret(detail.id, channel.id, Number(textIn(form, 'version')))]);
      return { said: 'new-secret', at: channel.id };
    }
    case 'old-secret':
      await stores.db.together([dropOldSecret(detail.id, channel.id)]);
      return { said: 'old-secret', at: channel.id };
    case 'remove':
      if (!channels.some(({ id, state }) => id !== channel.id && state !== 'dead')) return wrong('$.channels', 'this is the only way left', 'end the subscription instead');
      await stores.db.together([removeChannel(detail.id, channel.id)]);
      return { said: 'removed', at: 'ways' };
  }
}

async function test(services: DeskServices, detail: SubscriptionDetail, channel: StoredChannel): Promise<Done> {
  const tests = await askTests(services, detail, [channel]);
  if ('waitS' in tests) return { problems: [{ path: '$.action', value: 'test', problem: 'ten tests a day are sent', allowed: `the next one in ${Math.ceil(tests.waitS / 3600)} h` }], status: 429 };
  return { said: tests[0]?.state === 'asked' ? 'asked' : 'test', at: channel.id };
}

async function addChannel({ services, detail, request }: Asked, given: { readonly kind: 'push' | 'webhook' } & Readonly<Record<string, unknown>>): Promise<Done> {
  const { stores, addresses, clock } = services;
  const { accepted, issues } = channelIssues([given], addresses);
  const [asked] = accepted;
  if (asked === undefined || issues.length > 0) return { problems: issues };
  const channels = await stores.channel.ofSubscription(detail.id);
  const known = channels.find(({ kind, target, state }) => kind === asked.kind && target === asked.target && state !== 'dead');
  if (known === undefined) {
    if (channels.length >= MOST_CHANNELS) return wrong('$.channels', 'there are four ways to reach you already', 'one taken away first');
    const problems = await channelProblems(services, { channels: accepted }, request);
    if (problems.length > 0) return { problems };
  } else if (asked.kind === 'webhook') return wrong('$.channels', 'this webhook is there already', 'another address');
  const free = [0, 1, 2, 3, 4].map((nth) => `${detail.id}-${nth}`).find((id) => channels.every((channel) => channel.id !== id)) ?? '';
  await stores.db.together([known === undefined
    ? stores.channel.put([{ id: free, subscriptionId: detail.id, rank: Math.max(-1, ...channels.map(({ rank }) => rank)) + 1, kind: asked.kind, target: asked.target, state: 'unverified', ...(asked.kind === 'push' ? { pushKey: pushKeyOf(services) } : {}) }], clock.nowMs())
    : stores.channel.askAt(known.id, clock.nowMs())]);
  if (asked.kind === 'push') await services.wake('deliver', 1);
  return { said: asked.kind === 'push' ? 'asked' : 'added', at: known?.id ?? free };
}
