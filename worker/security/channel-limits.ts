import type { SubscriptionRequest } from '../../lib/config/subscription.ts';
import type { Issue } from '../../lib/result.ts';
import { HOUR_MS } from '../../lib/time.ts';
import type { DeskServices } from '../service-set.ts';
import { callerKey } from './owner.ts';

/** Receivers at one host that have not answered yet: so many at once, so that nobody is called through us who does not want to be. */
const MOST_UNVERIFIED = 3;
/** Webhooks that one network asks for; whoever has confirmed a mail address has at most the channels of one subscription. */
const WEBHOOKS = { most: 5, withinMs: 24 * HOUR_MS };

/** What of the channels this service does not take, whatever their form. */
export async function channelProblems(services: DeskServices, { channels }: Pick<SubscriptionRequest, 'channels'>, caller: Request): Promise<Issue[]> {
  const { stores, settings, addresses, sendsMail } = services;
  const problems: Issue[] = [];
  const hosts: string[] = [];
  for (const [index, { kind, target }] of channels.entries()) {
    const say = (at: string, value: string, problem: string, allowed: string): unknown => problems.push({ path: `$.channels[${index}].${at}`, value, problem, allowed });
    if (kind === 'mail' && !sendsMail) say('kind', '"mail"', 'this service sends no mail', '"webhook" or "push"');
    if (kind === 'push' && settings.vapid === null) say('kind', '"push"', 'this service sends no push', '"mail" or "webhook"');
    if (kind === 'push' && !(await addresses.hasKeys(target))) say('keys', 'not shown', 'these are no keys of a browser', 'p256dh: a point of P-256, auth: 16 bytes, in base64url');
    if (kind === 'webhook' && !settings.local) {
      const { host } = JSON.parse(target) as { readonly host: string };
      hosts.push(host);
      const asked = (await stores.channel.unverifiedAt(host)) + hosts.filter((one) => one === host).length;
      if (asked > MOST_UNVERIFIED) say('url', JSON.stringify(host), `${MOST_UNVERIFIED} receivers at this host have not answered their challenge yet`, 'a host whose receivers answer');
    }
  }
  return problems.length > 0 || hosts.length === 0 ? problems : tooManyWebhooks(services, channels.flatMap(({ kind }, index) => (kind === 'webhook' ? [index] : [])), caller);
}

async function tooManyWebhooks({ stores, settings, clock }: DeskServices, indexes: readonly number[], caller: Request): Promise<Issue[]> {
  const key = `hook ${await callerKey(settings.linkKey ?? '', caller)}`;
  for (const index of indexes) {
    if ((await stores.rate.take(key, WEBHOOKS, clock.nowMs())) > 0) {
      return [{ path: `$.channels[${index}].url`, value: `${indexes.length} webhooks`, problem: `${WEBHOOKS.most} webhooks a day are taken from one network`, allowed: 'fewer, or tomorrow' }];
    }
  }
  return [];
}
