import { placeName } from '../../lib/brief/words/index.ts';
import { confirmLetter, knownLetter } from '../../lib/brief/words/letters.ts';
import type { SubscriptionRequest } from '../../lib/config/subscription.ts';
import { HOUR_MS } from '../../lib/time.ts';
import { askBrowsers, pushKeyOf } from './browser.ts';
import { letterOf, secretLinks } from './letter.ts';
import type { Mailer } from './mailer.ts';
import { SEND_TIMEOUT_MS } from '../morning/times.ts';
import type { DeskServices, Services } from '../service-set.ts';
import { UNCONFIRMED_MS, type SignupToMail } from '../store/signup.ts';
import { newToken } from '../store/token.ts';
import { preferenceRows } from './subscribe.ts';

const AT_ONCE = 5;
/** Of all sign-ups together, so that a flood uses up neither quota nor reputation of the mail service. */
const MAILS = { most: 300, withinMs: HOUR_MS };

/** Sends the pushes and mails that ask for a yes. What an address has with us is looked at here and not where it could be answered for. */
export async function confirmStep(services: Services): Promise<void> {
  const { stores, mailer, settings, clock } = services;
  await askBrowsers(services);
  const { linkKey } = settings;
  // Who signed up after too many others waits for the next hour, in the order of coming.
  if (mailer === null || linkKey === null || (await stores.rate.isUsedUp('mails', MAILS, clock.nowMs()))) return;
  const signups = await stores.signup.claim(clock.nowMs(), AT_ONCE);
  await Promise.all(signups.map(async (signup) => {
    const isSent = signup.isSuppressed === 1 || (await ask(services, mailer, linkKey, signup));
    const nowMs = clock.nowMs();
    const isDone = isSent && (signup.isSuppressed === 1 || signup.subscriptionId !== null);
    await stores.db.together([isSent ? stores.signup.mailed(signup.owner, nowMs) : stores.signup.postpone(signup.owner, nowMs), ...(isDone ? [stores.signup.blank(signup.owner)] : [])]);
  }));
}

async function ask(services: Services, mailer: Mailer, linkKey: string, signup: SignupToMail): Promise<boolean> {
  const { stores, settings, clock } = services;
  const nowMs = clock.nowMs();
  if ((await stores.rate.take('mails', MAILS, nowMs)) > 0) return false;
  const { publicUrl } = settings;
  const service = new URL(publicUrl).host;
  const id = `ask-${signup.id}`;
  if (signup.subscriptionId !== null) {
    const { manage } = await secretLinks({ publicUrl, linkKey }, signup.subscriptionId, signup.linkVersion ?? 1);
    return hand(mailer, letterOf({ id, to: signup.address, ...knownLetter({ link: manage, service }) }, { mailFrom: settings.mailFrom ?? '' }));
  }
  const token = newToken();
  await stores.token.put(token, { purpose: 'confirm', subject: signup.id, expiresAtMs: nowMs + UNCONFIRMED_MS });
  const request = JSON.parse(signup.body) as SubscriptionRequest;
  const rows = await stores.site.some(request.sites.map((site) => site.id));
  const sites = rows.flatMap((row) => { const place = services.read.site(row); return place.ok ? [placeName(place.value.site)] : []; });
  const words = confirmLetter({ sites: sites.slice(0, 10), link: `${publicUrl}/confirm/${token}`, service });
  return hand(mailer, letterOf({ id, to: signup.address, ...words }, { mailFrom: settings.mailFrom ?? '' }));
}

async function hand(mailer: Mailer, letter: Parameters<Mailer['send']>[0]): Promise<boolean> {
  const outcome = await mailer.send(letter, { timeoutMs: SEND_TIMEOUT_MS });
  // An address that is refused is not asked again: as if it had been.
  return outcome.state === 'sent' || outcome.state === 'gone' || outcome.state === 'refused';
}

/** Makes a subscription of a sign-up; null when the token is none. Used twice side by side it makes one. */
export async function confirm(services: DeskServices, token: string): Promise<{ readonly id: string; readonly version: number } | null> {
  const { stores, clock } = services;
  const id = await stores.token.subject(token, 'confirm', clock.nowMs());
  const signup = id === null ? null : await stores.signup.byId(id);
  if (signup === null) return null;
  const request = JSON.parse(signup.body) as SubscriptionRequest;
  await stores.db.together([
    ...(await preferenceRows(services, signup.id, request, signup.owner)),
    channelRows(services, signup.id, request, true),
    stores.signup.remove(signup.owner),
    stores.token.drop(signup.id),
  ]);
  return { id: signup.id, version: 1 };
}

/** A mail address is confirmed by the link it was sent; a webhook and a browser have yet to answer. */
export function channelRows(services: DeskServices, subscriptionId: string, request: SubscriptionRequest, isMailConfirmed: boolean) {
  const pushKey = pushKeyOf(services);
  return services.stores.channel.put(
    request.channels.map(({ kind, target, quiet }, rank) => ({
      id: `${subscriptionId}-${rank}`, subscriptionId, rank, kind, target, quiet, ...(kind === 'push' ? { pushKey } : {}),
      state: kind === 'mail' && isMailConfirmed ? 'active' as const : 'unverified' as const,
    })),
    services.clock.nowMs(),
  );
}
