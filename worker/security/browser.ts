/**
 * Browsers that are told by push. Anyone can hand us somebody's endpoint, so a browser shows by the echo of a nonce, sent to
 * it encrypted, that it asked; and only who knows the old address with its secret, or a manage link, moves it to another.
 */
import { askBrowserWords } from '../../lib/brief/words/letters.ts';
import type { Renewal } from '../../lib/config/push-renewal.ts';
import { issue } from '../../lib/config/check.ts';
import { success, failure, type Issue, type Result } from '../../lib/result.ts';
import { HOUR_MS } from '../../lib/time.ts';
import { SEND_TIMEOUT_MS } from '../morning/times.ts';
import { keyIdOf, sameText, sha256Hex } from '../secrets.ts';
import type { DeskServices, Services } from '../service-set.ts';
import type { ChannelToAsk, StoredChannel } from '../store/channel.ts';
import { statementsOf } from '../store/mark.ts';
import { UNCONFIRMED_MS } from '../store/signup.ts';
import { newToken } from '../store/token.ts';
import { subscriptionOf } from './manage.ts';
import { browserKey } from './owner.ts';

const AT_ONCE = 5;
/** Whoever asks: so many of them reach one browser a day, so that nobody is pestered through us. */
const ASKS = { most: 5, withinMs: 24 * HOUR_MS };

/** Sends the nonces that are to be sent. */
export async function askBrowsers(services: Services): Promise<void> {
  const asks = await services.stores.channel.claimAsks(services.clock.nowMs(), AT_ONCE);
  await Promise.all(asks.map((channel) => ask(services, channel)));
}

async function ask(services: Services, channel: ChannelToAsk): Promise<void> {
  const { stores, clock, settings, channels } = services;
  const nowMs = clock.nowMs();
  const { endpoint } = JSON.parse(channel.target) as { readonly endpoint: string };
  const isOver = (await stores.rate.take(`ask ${await browserKey(settings.linkKey ?? 'no key', endpoint)}`, ASKS, nowMs)) > 0;
  const nonce = newToken();
  if (!isOver) await stores.token.put(nonce, { purpose: 'push', subject: channel.id, expiresAtMs: nowMs + UNCONFIRMED_MS });
  const message = {
    id: `ask-${(await sha256Hex(nonce)).slice(0, 32)}`, kind: 'test' as const, thread: `ask ${channel.id}`, ...askBrowserWords({ service: new URL(settings.publicUrl).host }), nonce,
    issuedAtMs: nowMs, dataRunAtMs: null, validUntilMs: nowMs + UNCONFIRMED_MS, urgent: false, demo: false, days: [],
  };
  const outcome = isOver ? null : await channels['push']?.send(message, { ...channel, state: 'unverified' }, { number: 1, nowMs, timeoutMs: SEND_TIMEOUT_MS, untilMs: message.validUntilMs });
  if (outcome?.state === 'gone') await stores.db.together([stores.channel.end(channel.id, outcome.reason)]);
  else if (outcome?.state !== 'retry') await stores.db.together(statementsOf([stores.channel.askAt(channel.id, null), ...(outcome?.state === 'sent' && outcome.pushKey !== undefined ? [stores.channel.underKey(channel.id, outcome.pushKey)] : [])]));
}

/** A browser sends back what it was sent; false for anything that is no nonce, or one no more. */
export async function confirmBrowser({ stores, clock }: Pick<DeskServices, 'stores' | 'clock'>, nonce: string): Promise<boolean> {
  const id = await stores.token.subject(nonce, 'push', clock.nowMs());
  const [channel] = id === null ? [] : await stores.channel.some([id]);
  if (channel === undefined) return false;
  await stores.db.together([stores.channel.verify(channel.id), stores.channel.rekey(channel.target), stores.token.drop(channel.id)]);
  return true;
}

/** Under which key a browser signs up now. */
export function pushKeyOf({ settings: { vapid } }: Pick<DeskServices, 'settings'>): string | null {
  return vapid === null ? null : keyIdOf(vapid);
}

/** What became of a renewal: the state of the channel, or null where nobody is told by that browser. */
export async function renewBrowser(services: DeskServices, renewal: Renewal): Promise<Result<'active' | 'unverified' | null, Issue[]>> {
  const { stores, clock, addresses } = services;
  const read = (name: 'fresh' | 'old'): { readonly is: string | null } | { readonly problem: Issue } => {
    const given = renewal[name] ?? null;
    const checked = given === null ? { is: null } : addresses.push({ endpoint: given.endpoint, ...given.keys });
    return 'is' in checked ? checked : { problem: issue([name], 'not shown', { problem: checked.problem, allowed: 'a subscription as the browser gave it' }) };
  };
  const [fresh, old] = [read('fresh'), read('old')];
  if ('problem' in fresh || 'problem' in old || fresh.is === null) return failure([fresh, old].flatMap((one) => ('problem' in one ? [one.problem] : [])));
  const { is: target } = fresh;
  if (!(await addresses.hasKeys(target))) return failure([issue(['fresh', 'keys'], 'not shown', { problem: 'these are no keys of a browser', allowed: 'p256dh: a point of P-256, auth: 16 bytes, in base64url' })]);
  const told = await channelsOf(services, renewal.token ?? null, old.is);
  const nowMs = clock.nowMs();
  const moved = told.filter((channel) => channel.target !== target || channel.state === 'dead');
  await stores.db.together([
    ...moved.flatMap(({ id }) => [stores.token.drop(id), stores.channel.moveTo(id, { target, pushKey: pushKeyOf(services) }, nowMs)]),
    ...told.filter((channel) => !moved.includes(channel)).map(({ id }) => stores.channel.askAt(id, nowMs)),
  ]);
  if (told.length === 0) return success(null);
  const isKnown = moved.length === 0 && told.every(({ state }) => state === 'active');
  if (!isKnown) await services.wake('deliver', 1);
  return success(isKnown ? 'active' : 'unverified');
}

/** The channels of a browser: by its old address with its secret, or those of a subscription by its manage link. */
async function channelsOf(services: DeskServices, token: string | null, old: string | null): Promise<StoredChannel[]> {
  const was = old === null ? null : JSON.parse(old) as { readonly endpoint: string; readonly auth: string };
  if (token !== null) {
    const detail = await subscriptionOf(services, 'manage', token);
    const browsers = detail === null ? [] : (await services.stores.channel.ofSubscription(detail.id)).filter(({ kind }) => kind === 'push');
    const named = browsers.filter(({ target }) => was !== null && (JSON.parse(target) as { readonly endpoint: string }).endpoint === was.endpoint);
    return named.length > 0 || browsers.length > 1 ? named : browsers;
  }
  if (was === null) return [];
  const found = await services.stores.channel.ofBrowser(was.endpoint);
  const known = await Promise.all(found.map(({ target }) => sameText((JSON.parse(target) as { readonly auth: string }).auth, was.auth)));
  return found.filter((_, index) => known[index]);
}
