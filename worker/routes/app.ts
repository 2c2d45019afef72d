import { Hono } from 'hono';
import type { Services } from '../service-set.ts';
import { pageServices } from '../web/page-data.ts';
import { planServices } from '../web/plan/plan-data.ts';
import { api } from './api.ts';
import { feeds } from './feeds.ts';
import { health } from './health.ts';
import { manageApi, managePages } from './manage.ts';
import { local } from './local.ts';
import { bounce } from './bounces.ts';
import { operator } from './operator.ts';
import { pages } from './pages.ts';
import { planApi, planPages } from './plan.ts';
import { problem } from './problem.ts';
import { status } from './status.ts';
import { subscriptions } from './subscriptions.ts';

/** The methods that the paths answer; any other is told so. */
const METHODS: Readonly<Record<string, string>> = {
  '/': 'GET, HEAD',
  '/sites/:id': 'GET, HEAD',
  '/healthz': 'GET, HEAD',
  '/status': 'GET, HEAD',
  '/feeds/:file': 'GET, HEAD',
  '/plan': 'GET, HEAD, POST',
  '/plan/:token': 'GET, HEAD, POST',
  '/plan/:token/:file': 'GET, HEAD',
  '/confirm/:token': 'GET, HEAD, POST',
  '/manage/:token': 'GET, HEAD, POST',
  '/subscribe': 'GET, HEAD, POST',
  '/unsubscribe/:token': 'GET, HEAD, POST',
  '/api/v1/subscriptions': 'POST',
  '/api/v1/bounces': 'POST',
  '/api/v1/operator/sites': 'GET, HEAD, PUT',
  '/api/v1/operator/sheets': 'GET, HEAD',
  '/api/v1/operator/sheets/:id': 'GET, HEAD, PUT',
  '/api/v1/operator/published': 'GET, HEAD, PUT',
  '/api/v1/operator/forget': 'POST',
  '/api/v1/operator/bounce-secret': 'GET, HEAD',
  '/api/v1/manage/:token': 'GET, HEAD, PUT, POST, DELETE',
  '/api/v1/assess': 'POST',
  '/api/v1/plan': 'POST',
  '/api/v1/sites': 'GET, HEAD',
  '/api/v1/sites/:id/days/:date': 'GET, HEAD',
};

/** Everything that is answered over HTTP. */
export function app(services: Services): Hono {
  const hono = new Hono();
  hono.get('/healthz', () => health(services));
  hono.route('/status', status(services));
  hono.route('/api/v1/plan', planApi(planServices(services)));
  hono.post('/api/v1/bounces', (c) => bounce(services, c.req.raw));
  hono.route('/api/v1/operator', operator(services));
  hono.route('/api/v1/subscriptions', subscriptions(services));
  hono.route('/api/v1/manage', manageApi(services));
  hono.route('/api/v1', api(services));
  hono.route('/feeds', feeds(services));
  if (services.settings.local) hono.route('/local', local(services));
  hono.route('/plan', planPages(planServices(services)));
  hono.route('/', managePages(services));
  hono.route('/', pages(pageServices(services)));
  for (const [path, allow] of Object.entries(METHODS)) {
    hono.all(path, () => problem('wrong-method', { detail: `answered are ${allow}`, headers: { allow } }));
  }
  hono.notFound(() => problem('not-found'));
  hono.onError((error) => {
    console.error(`a request failed: ${error.name}`);
    return problem('fault', { detail: 'the fault has been noted' });
  });
  return hono;
}
