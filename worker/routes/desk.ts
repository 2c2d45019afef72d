import { Hono } from 'hono/tiny';
import type { DeskServices } from '../service-set.ts';
import { whatIfServices } from '../web/what-if-data.ts';
import { planServices } from '../web/plan/plan-data.ts';
import { assess } from './assess.ts';
import { bounce } from './bounces.ts';
import { closing } from './closing.ts';
import { feeds } from './feeds.ts';
import { manageApi } from './manage.ts';
import { planApi, planPages } from './plan.ts';
import { pushApi } from './push.ts';
import { pushShown } from './shown.ts';
import { subscriberPages } from './subscriber-pages.ts';
import { subscriptions } from './subscriptions.ts';
import { whatIf } from './what-if.ts';

export const DESK_METHODS: Readonly<Record<string, string>> = {
  '/feeds/:file': 'GET, HEAD',
  '/plan': 'GET, HEAD, POST',
  '/plan/:token': 'GET, HEAD, POST',
  '/plan/:token/notice': 'POST',
  '/plan/:token/:file': 'GET, HEAD',
  '/confirm/:token': 'GET, HEAD, POST',
  '/manage/:token': 'GET, HEAD, POST',
  '/subscribe': 'GET, HEAD, POST',
  '/subscribe/sent': 'GET, HEAD',
  '/unsubscribe/:token': 'GET, HEAD, POST',
  '/api/v1/subscriptions': 'POST',
  '/api/v1/subscriptions/confirm-push': 'POST',
  '/api/v1/push/renew': 'POST',
  '/api/v1/push/key': 'GET, HEAD',
  '/api/v1/push/shown': 'POST',
  '/api/v1/bounces': 'POST',
  '/api/v1/manage/:token': 'GET, HEAD, PUT, POST, DELETE',
  '/api/v1/assess': 'POST',
  '/api/v1/plan': 'POST',
};

export function deskRoutes(hono: Hono, services: DeskServices): void {
  hono.route('/api/v1/plan', planApi(planServices(services)));
  hono.post('/api/v1/assess', (c) => assess(services, c));
  hono.post('/api/v1/bounces', (c) => bounce(services, c.req.raw));
  hono.route('/api/v1/subscriptions', subscriptions(services));
  hono.post('/api/v1/push/shown', (c) => pushShown(services, c));
  hono.route('/api/v1/push', pushApi(services));
  hono.route('/api/v1/manage', manageApi(services));
  hono.get('/sites/:id/what-if', (c) => whatIf(whatIfServices(services), c));
  hono.route('/feeds', feeds(services));
  hono.route('/plan', planPages(planServices(services)));
  hono.route('/', subscriberPages(services));
}

/** The desk: what is one person's own, from a subscription and its feeds to a training day. */
export function deskApp(services: DeskServices): Hono {
  const hono = new Hono();
  deskRoutes(hono, services);
  return closing(hono, DESK_METHODS);
}
