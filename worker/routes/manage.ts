/** Secret links: /api/v1/manage/{token} for programs. GET looks, and never changes anything. */
import type { Context } from 'hono';
import { Hono } from 'hono/tiny';
import { isoUtc } from '../../lib/time.ts';
import { secretLinks } from '../security/letter.ts';
import { act, ACTIONS, change, managed, subscriptionOf, type Acted } from '../security/manage.ts';
import type { DeskServices } from '../service-set.ts';
import { deliveriesOf } from '../store/deliveries.ts';
import type { SubscriptionDetail } from '../store/subscription.ts';
import { jsonBody } from './body.ts';
import { json, problem } from './problem.ts';

const MAX_BODY_BYTES = 8 * 1024;
export const LOG_MS = 14 * 24 * 3_600_000;

export function manageApi(services: DeskServices): Hono {
  const app = new Hono();
  const found = (c: Context) => subscriptionOf(services, 'manage', c.req.param('token') ?? '');

  app.get('/:token', async (c) => {
    const detail = await found(c);
    return detail === null ? problem('not-found') : json({ ...(await managed(services, detail)), deliveries: await deliveries(services, detail) });
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

/** What was sent in fourteen days, the newest first, and what became of it. */
async function deliveries({ stores, clock }: DeskServices, { id }: SubscriptionDetail): Promise<unknown> {
  const at = (ms: number | null): string | null => (ms === null ? null : isoUtc(ms));
  return (await deliveriesOf(stores.db, id, clock.nowMs() - LOG_MS)).map(({ id: messageId, kind, state, reason, channelId, dueLocalDate, createdAtMs, settledAtMs, shownAtMs }) => ({
    id: messageId, kind, state, reason, channel: channelId, localDate: dueLocalDate, plannedAt: at(createdAtMs), settledAt: at(settledAtMs), shownAt: at(shownAtMs),
  }));
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
