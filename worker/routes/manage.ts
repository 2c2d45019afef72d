/** Secret links: /api/v1/manage/{token} for programs, and the pages for people. GET looks, and never changes anything. */
import type { Context } from 'hono';
import { Hono } from 'hono/tiny';
import type { Issue } from '../../lib/result.ts';
import { secretLinks } from '../security/letter.ts';
import { confirm } from '../security/confirm.ts';
import { act, ACTIONS, change, managed, preferencesJson, subscriptionOf, type Acted, type Action } from '../security/manage.ts';
import type { DeskServices } from '../service-set.ts';
import type { SubscriptionDetail } from '../store/subscription.ts';
import { jsonBody } from './body.ts';
import { askPage, page } from './forms.ts';
import { formOf, kindsOf, requestOf, subscribeView, viewOf } from './forms-data.ts';
import { PAGE_HEADERS } from './pages.ts';
import { json, problem } from './problem.ts';
import { subscribe, overRate } from './subscriptions.ts';

const MAX_BODY_BYTES = 8 * 1024;

export function manageApi(services: DeskServices): Hono {
  const app = new Hono();
  const found = (c: Context) => subscriptionOf(services, 'manage', c.req.param('token') ?? '');

  app.get('/:token', async (c) => {
    const detail = await found(c);
    return detail === null ? problem('not-found') : json(await managed(services, detail));
  });
  app.put('/:token', async (c) => {
    const detail = await found(c);
    if (detail === null) return problem('not-found');
    const body = await jsonBody(c.req.raw, MAX_BODY_BYTES);
    if (!body.ok) return body.error;
    const problems = await change(services, detail, body.value);
    return problems.length > 0 ? problem('bad-input', { problems }) : json(await managed(services, (await found(c)) ?? detail));
  });
  app.post('/:token', async (c) => {
    const detail = await found(c);
    if (detail === null) return problem('not-found');
    const body = await jsonBody(c.req.raw, MAX_BODY_BYTES);
    if (!body.ok) return body.error;
    const { action, until, ...rest } = (typeof body.value === 'object' ? { ...body.value } : {}) as { readonly action?: unknown; readonly until?: unknown };
    const known = ACTIONS.find((word) => word === action);
    if (known === undefined || Object.keys(rest).length > 0) return problem('bad-input', { problems: [{ path: '$.action', value: typeof action, problem: 'not one of the actions, or more than an action', allowed: ACTIONS.join(', ') }] });
    return answerOf(services, detail, await act(services, detail, { action: known, until }));
  });
  app.delete('/:token', async (c) => {
    const detail = await found(c);
    return detail === null ? problem('not-found') : answerOf(services, detail, await act(services, detail, { action: 'end', until: null }));
  });
  return app;
}

async function answerOf(services: DeskServices, detail: SubscriptionDetail, acted: Acted): Promise<Response> {
  if (acted.state === 'wrong') return problem('bad-input', { problems: acted.problems });
  if (acted.state === 'too-many') return problem('too-many', { detail: 'ten tests a day are sent' });
  const links = acted.linkVersion === undefined ? {} : { links: await linksOf(services, detail, acted.linkVersion) };
  return json({ state: acted.state, ...(acted.tests === undefined ? {} : { tests: acted.tests }), ...links });
}

function linksOf({ settings }: DeskServices, { id, linkVersion }: Pick<SubscriptionDetail, 'id' | 'linkVersion'>, version = linkVersion) {
  return secretLinks({ publicUrl: settings.publicUrl, linkKey: settings.linkKey ?? '' }, id, version);
}

const HEADERS = { ...PAGE_HEADERS, 'cache-control': 'no-store', 'x-robots-tag': 'noindex' };

function shown(markup: string, status = 200): Response {
  return new Response(markup, { status, headers: { ...HEADERS, 'content-type': 'text/html; charset=utf-8' } });
}

/** One and the same for every token that is none, whatever is wrong with it. */
function nothing(): Response {
  return shown(page('There is nothing here', null), 404);
}

export function managePages(services: DeskServices): Hono {
  const app = new Hono();

  for (const kind of ['confirm', 'manage', 'unsubscribe']) app.all(`/${kind}/`, () => nothing());

  app.get('/confirm/:token', async (c) => {
    const isOpen = (await services.stores.token.subject(c.req.param('token'), 'confirm', services.clock.nowMs())) !== null;
    return isOpen ? shown(askPage('Confirm the subscription', { text: 'From then on a brief is sent to the address at which you read this link.', button: 'Confirm' })) : nothing();
  });
  app.post('/confirm/:token', async (c) => {
    const made = await confirm(services, c.req.param('token'));
    if (made === null) return nothing();
    const { manage } = await linksOf(services, { id: made.id, linkVersion: made.version });
    return new Response(null, { status: 303, headers: { ...HEADERS, location: new URL(manage).pathname } });
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
    return shown(page('The subscription has ended', 'Everything that was kept about it is erased.'));
  });

  app.get('/manage/:token', async (c) => {
    const detail = await subscriptionOf(services, 'manage', c.req.param('token'));
    return detail === null ? nothing() : shown(await viewOf(services, detail, []));
  });
  app.post('/manage/:token', async (c) => {
    const detail = await subscriptionOf(services, 'manage', c.req.param('token'));
    if (detail === null) return nothing();
    const form = await formOf(c.req.raw);
    return changed(services, detail, form ?? new FormData());
  });

  app.get('/subscribe', async () => shown(await subscribeView(services, [], null)));
  app.post('/subscribe', async (c) => {
    const form = await formOf(c.req.raw);
    if (form === null) return shown(page('This was not understood', null), 400);
    if ((await overRate(services, c.req.raw)) > 0) return shown(page('Too many subscriptions today', 'Please try again tomorrow.'), 429);
    const response = await subscribe(services, requestOf(form, await kindsOf(services)));
    if (response.status === 202) return shown(page('Please look into your mail', 'A mail with a link goes to the address, at most one a day. Nothing else is sent before you confirm it.'), 202);
    const { problems = [] } = (await response.json()) as { readonly problems?: readonly Issue[] };
    return shown(await subscribeView(services, problems, form), response.status);
  });
  return app;
}

async function changed(services: DeskServices, detail: SubscriptionDetail, form: FormData): Promise<Response> {
  const asked = form.get('action');
  if (asked === 'change') {
    const kept = await preferencesJson(services, detail);
    const sites = kept.sites.map(({ id, sheet }) => ({ id, sheet: form.get(`sheet:${id}`) ?? sheet }));
    const problems = await change(services, detail, { ...kept, sites });
    return shown(await viewOf(services, detail, problems.length === 0 ? ['From the next brief on these sheets count.'] : problems.map(({ problem: text }) => text)), problems.length === 0 ? 200 : 400);
  }
  const action: Action | undefined = ACTIONS.find((word) => word === asked);
  if (action === undefined) return shown(page('This was not understood', null), 400);
  const acted = await act(services, detail, { action, until: form.get('until') });
  if (acted.state === 'ended') return shown(page('The subscription has ended', 'Everything that was kept about it is erased.'));
  if (acted.state === 'done' && acted.linkVersion !== undefined) {
    return new Response(null, { status: 303, headers: { ...HEADERS, location: new URL((await linksOf(services, detail, acted.linkVersion)).manage).pathname } });
  }
  if (acted.state === 'wrong') return shown(await viewOf(services, detail, acted.problems.map(({ problem: text, allowed }) => `${text}: ${allowed}`)), 400);
  if (acted.state === 'too-many') return shown(await viewOf(services, detail, ['Ten tests a day are sent.']), 429);
  const said = (acted.tests ?? []).map(({ kind, reason }) => `Test by ${kind}: ${reason}.`);
  return shown(await viewOf(services, (await services.stores.subscription.detail(detail.id)) ?? detail, said));
}
