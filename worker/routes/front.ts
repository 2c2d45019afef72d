import { Hono } from 'hono/tiny';
import type { Services } from '../service-set.ts';
import { pageServices } from '../web/page-data.ts';
import { api } from './api.ts';
import { closing } from './closing.ts';
import { health } from './health.ts';
import { pages } from './pages.ts';

export const FRONT_METHODS: Readonly<Record<string, string>> = {
  '/': 'GET, HEAD',
  '/sites/:id': 'GET, HEAD',
  '/healthz': 'GET, HEAD',
  '/api/v1/sites': 'GET, HEAD',
  '/api/v1/sites/:id/days/:date': 'GET, HEAD',
};

export function frontRoutes(hono: Hono, services: Services): void {
  hono.get('/healthz', () => health(services));
  hono.route('/api/v1', api(services));
  hono.route('/', pages(pageServices(services)));
}

/** What is read by everybody: board, days, health. */
export function frontApp(services: Services): Hono {
  const hono = new Hono();
  frontRoutes(hono, services);
  return closing(hono, FRONT_METHODS);
}
