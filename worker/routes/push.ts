import { Hono } from 'hono/tiny';
import { check } from '../../lib/config/check.ts';
import { echoSchema, renewalSchema } from '../../lib/config/push-renewal.ts';
import { confirmBrowser, renewBrowser } from '../security/browser.ts';
import type { DeskServices } from '../service-set.ts';
import { jsonBody } from './body.ts';
import { json, problem } from './problem.ts';

const MAX_BODY_BYTES = 8 * 1024;

/**
 * Asked by pages and the service worker. After a sign-up or a move the browser gets a push
 * `{"kind": "confirm", "nonce": "…", "title", "body", "issuedAt", "validUntil", "url", "id"}` and echoes it:
 * POST /api/v1/subscriptions/confirm-push `{"nonce"}`: 200 `{"state": "active"}`, 404 when it is none any more.
 * POST /api/v1/push/renew `{"fresh": PushSubscriptionJSON, "old": PushSubscriptionJSON}` or, from a manage page, `{"fresh", "token"}`:
 * 200 `{"state": "active"}` when nothing has changed, 200 `{"state": "unverified"}` when a nonce is on its way, 410 when
 * nobody is told by that browser: whoever waits may forget it.
 * GET /api/v1/push/key: 200 `{"publicKey"}` for `pushManager.subscribe`, 404 where no push is sent.
 */
export function pushApi(services: DeskServices): Hono {
  const app = new Hono();
  app.get('/key', () => {
    const { vapid } = services.settings;
    return vapid === null ? problem('not-found', { detail: 'this service sends no push' }) : json({ publicKey: vapid.publicKey });
  });
  app.post('/renew', async (c) => {
    const body = await jsonBody(c.req.raw, MAX_BODY_BYTES);
    if (!body.ok) return body.error;
    const renewal = check(renewalSchema(), body.value, []);
    if (!renewal.ok) return problem('bad-input', { problems: renewal.error });
    const state = await renewBrowser(services, renewal.value);
    if (!state.ok) return problem('bad-input', { problems: state.error });
    return state.value === null ? problem('gone', { detail: 'nobody is told by this browser' }) : json({ state: state.value });
  });
  return app;
}

/** POST /api/v1/subscriptions/confirm-push. */
export async function confirmPush(services: Pick<DeskServices, 'stores' | 'clock'>, request: Request): Promise<Response> {
  const body = await jsonBody(request, MAX_BODY_BYTES);
  if (!body.ok) return body.error;
  const echo = check(echoSchema(), body.value, []);
  if (!echo.ok) return problem('bad-input', { problems: echo.error });
  return (await confirmBrowser(services, echo.value.nonce)) ? json({ state: 'active' }) : problem('not-found');
}
