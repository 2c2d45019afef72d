import { Hono } from 'hono/tiny';
import type { SubscriptionRequest } from '../../lib/config/subscription.ts';
import { HOUR_MS } from '../../lib/time.ts';
import { secretLinks } from '../security/letter.ts';
import { callerKey, ownerOf } from '../security/owner.ts';
import { channelProblems } from '../security/channel-limits.ts';
import { channelRows } from '../security/confirm.ts';
import { preferenceRows, readSubscription } from '../security/subscribe.ts';
import type { DeskServices } from '../service-set.ts';
import { newToken } from '../store/token.ts';
import { jsonBody } from './body.ts';
import { json, problem } from './problem.ts';
import { confirmPush } from './push.ts';

/** POST /api/v1/subscriptions: no account, and no answer from which somebody could learn who subscribes. */
const MAX_BODY_BYTES = 8 * 1024;
const SIGNUPS = { most: 100, withinMs: 24 * HOUR_MS };

/** Said of every address, whatever it is to us. */
const ACCEPTED = {
  status: 'accepted',
  detail: 'Nothing is sent before it is confirmed: a mail with a link, valid for 48 hours, goes to the address, at most one a day.',
};

export function subscriptions(services: DeskServices): Hono {
  const app = new Hono();
  app.post('/', async (c) => {
    const waitS = await overRate(services, c.req.raw);
    if (waitS > 0) return problem('too-many', { detail: `${SIGNUPS.most} subscriptions a day are taken from one network`, headers: { 'retry-after': String(waitS) } });
    const body = await jsonBody(c.req.raw, MAX_BODY_BYTES);
    return body.ok ? subscribe(services, body.value, c.req.raw) : body.error;
  });
  app.post('/confirm-push', (c) => confirmPush(services, c.req.raw));
  return app;
}

export async function overRate({ settings, stores, clock }: DeskServices, request: Request): Promise<number> {
  if (settings.linkKey === null || (settings.local && request.headers.get('cf-connecting-ip') === null)) return 0;
  return stores.rate.take(`signup ${await callerKey(settings.linkKey, request)}`, SIGNUPS, clock.nowMs());
}

export async function subscribe(services: DeskServices, value: unknown, caller: Request): Promise<Response> {
  const { stores, clock, settings } = services;
  const { linkKey } = settings;
  if (linkKey === null) return problem('unusable', { detail: 'this service has no LINK_KEY and takes no subscriptions' });
  const request = await readSubscription(services, value);
  if (!request.ok) return problem('bad-input', { problems: request.error });
  const problems = await channelProblems(services, request.value, caller);
  if (problems.length > 0) return problem('bad-input', { problems });
  const id = newToken().replaceAll(/[^A-Za-z0-9]/g, 'x').slice(0, 24);
  const mail = request.value.channels.find(({ kind }) => kind === 'mail');
  const said = { request: shown(request.value) };
  if (mail !== undefined) {
    const { address } = JSON.parse(mail.target) as { readonly address: string };
    await stores.signup.add({ owner: await ownerOf(linkKey, address), id, address, body: JSON.stringify(request.value) }, clock.nowMs());
    await services.wake('deliver', 1);
    return json({ ...ACCEPTED, ...said }, { status: 202 });
  }
  await stores.db.together([...(await preferenceRows(services, id, request.value)), channelRows(services, id, request.value, false)]);
  await services.wake('deliver', 1);
  const channels = await stores.channel.ofSubscription(id);
  const hook = channels.find(({ kind }) => kind === 'webhook');
  const secret = hook === undefined ? null : await services.addresses.secretOf(hook);
  return json({
    status: 'accepted',
    detail: channels[0]?.kind === 'push'
      ? 'The browser is sent a push with a nonce, and is told once it has echoed it to /api/v1/subscriptions/confirm-push.'
      : 'The receiver has to answer a challenge before its first brief; a test asked for through the manage link sends it at once.',
    links: await secretLinks({ publicUrl: settings.publicUrl, linkKey }, id, 1),
    ...(secret === null ? {} : { webhookSecret: secret }),
    ...said,
  }, { status: 202 });
}

/** What was understood, so that a slip can be seen: an address in its one spelling, the days and the hour. */
function shown({ channels, wing, ...rest }: SubscriptionRequest): unknown {
  return { ...rest, wing, channels: channels.map(({ kind, target, quiet }) => ({ kind, quiet, ...(JSON.parse(target) as object), p256dh: undefined, auth: undefined, host: undefined })) };
}
