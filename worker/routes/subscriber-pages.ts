/** The pages of a subscriber: confirm, manage, leave, behind secret links, and subscribe. GET looks, and never changes anything. */
import { Hono } from 'hono/tiny';
import { confirm } from '../security/confirm.ts';
import { secretLinks } from '../security/letter.ts';
import { act, subscriptionOf } from '../security/manage.ts';
import type { DeskServices } from '../service-set.ts';
import type { SubscriptionDetail } from '../store/subscription.ts';
import { textIn } from '../web/forms/wishes.ts';
import { askPage, page } from './forms.ts';
import { formOf } from './forms-data.ts';
import { doAsked } from './manage-actions.ts';
import { manageMarkup } from './manage-view.ts';
import { seeOther, shown } from './page-answers.ts';
import { subscribeForm, subscribeStart } from './subscribe-form.ts';

/** One and the same for every token that is none, whatever is wrong with it. */
function nothing(): Response {
  return shown(page('There is nothing here', null), 404);
}

function ended(): Response {
  return shown(page('The subscription has ended', 'Everything that was kept about it is erased.'));
}

async function managePath({ settings }: DeskServices, id: string, version: number): Promise<string> {
  return new URL((await secretLinks({ publicUrl: settings.publicUrl, linkKey: settings.linkKey ?? '' }, id, version)).manage).pathname;
}

export function subscriberPages(services: DeskServices): Hono {
  const app = new Hono();

  for (const kind of ['confirm', 'manage', 'unsubscribe']) app.all(`/${kind}/`, () => nothing());

  app.get('/confirm/:token', async (c) => {
    const isOpen = (await services.stores.token.subject(c.req.param('token'), 'confirm', services.clock.nowMs())) !== null;
    return isOpen ? shown(askPage('Confirm the subscription', { text: 'From then on a brief is sent to the address at which you read this link.', button: 'Confirm' })) : nothing();
  });
  app.post('/confirm/:token', async (c) => {
    const made = await confirm(services, c.req.param('token'));
    return made === null ? nothing() : seeOther(`${await managePath(services, made.id, made.version)}?said=welcome`);
  });

  app.get('/unsubscribe/:token', async (c) => {
    const detail = await subscriptionOf(services, 'unsubscribe', c.req.param('token'));
    return detail === null ? nothing() : shown(askPage('End the subscription', { text: 'No brief comes any more, and everything that is kept about you is erased.', button: 'End it' }));
  });
  /** Also the one-click POST that a mail program makes (RFC 8058). */
  app.post('/unsubscribe/:token', async (c) => {
    const detail = await subscriptionOf(services, 'unsubscribe', c.req.param('token'));
    if (detail === null) return nothing();
    const form = await formOf(c.req.raw);
    if (form?.get('List-Unsubscribe') !== 'One-Click' && form?.get('confirm') !== '1') return shown(page('This was not understood', null), 400);
    await act(services, detail, { action: 'end', until: null });
    return ended();
  });

  app.get('/manage/:token', async (c) => {
    const detail = await subscriptionOf(services, 'manage', c.req.param('token'));
    return detail === null ? nothing() : shown(await manageMarkup(services, detail, { said: c.req.query('said') ?? null }));
  });
  app.post('/manage/:token', async (c) => {
    const detail = await subscriptionOf(services, 'manage', c.req.param('token'));
    return detail === null ? nothing() : managed(services, detail, c.req.raw);
  });

  // The one of these pages that a search may find.
  app.get('/subscribe', async () => shown(await subscribeStart(services), 200, { 'x-robots-tag': 'all' }));
  app.get('/subscribe/sent', () => shown(page('Please look into your mail', 'A mail with a link goes to the address, at most one a day. Nothing else is sent before you confirm it, within 48 hours.')));
  app.post('/subscribe', async (c) => {
    const form = await formOf(c.req.raw);
    return form === null ? shown(page('This was not understood', null), 400) : subscribeForm(services, form, c.req.raw);
  });
  return app;
}

async function managed(services: DeskServices, detail: SubscriptionDetail, request: Request): Promise<Response> {
  const form = (await formOf(request)) ?? new FormData();
  const done = await doAsked({ services, detail, form, request });
  if (done === 'ended') return ended();
  if (done === 'not-understood') return shown(page('This was not understood', null), 400);
  if ('problems' in done) return shown(await manageMarkup(services, detail, { refused: { form, action: textIn(form, 'action'), problems: done.problems } }), done.status ?? 400);
  return seeOther(`${await managePath(services, detail.id, done.linkVersion ?? detail.linkVersion)}?said=${done.said}${done.at === undefined ? '' : `#${done.at}`}`);
}
