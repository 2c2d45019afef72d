import { Hono } from 'hono/tiny';
import type { Services } from '../service-set.ts';
import { pageServices } from '../web/page-data.ts';
import { api } from './api.ts';
import { closing } from './closing.ts';
import { feeds } from './feeds.ts';
import { health } from './health.ts';
import { local } from './local.ts';
import { pages } from './pages.ts';
import { status } from './status.ts';

export const FRONT_METHODS: Readonly<Record<string, string>> = {
  '/': 'GET, HEAD',
  '/sites/:id': 'GET, HEAD',
  '/healthz': 'GET, HEAD',
  '/status': 'GET, HEAD',
  '/feeds/:file': 'GET, HEAD',
  '/api/v1/sites': 'GET, HEAD',
  '/api/v1/sites/:id/days/:date': 'GET, HEAD',
};

export function frontRoutes(hono: Hono, services: Services): void {
  hono.get('/healthz', () => health(services));
  hono.route('/status', status(services));
  hono.route('/api/v1', api(services));
  hono.route('/feeds', feeds(services));
  if (services.settings.local) hono.route('/local', local(services));
  hono.route('/', pages(pageServices(services)));
}

/** What is read: board, days, feeds, health. */
export function frontApp(services: Services): Hono {
  const hono = new Hono();
  frontRoutes(hono, services);
  return closing(hono, FRONT_METHODS);
}
