import { Hono } from 'hono/tiny';
import type { DeskServices } from '../service-set.ts';
import { closing } from './closing.ts';
import { operator } from './operator.ts';
import { operatorPages } from './operator-pages.ts';
import { status } from './status.ts';

export const OPERATOR_METHODS: Readonly<Record<string, string>> = {
  '/status': 'GET, HEAD',
  '/operator': 'GET, HEAD',
  '/operator/sign-in': 'GET, HEAD, POST',
  '/operator/sign-out': 'POST',
  '/operator/board': 'POST',
  '/operator/import': 'GET, HEAD, POST',
  '/operator/new/launch': 'GET, HEAD, POST',
  '/operator/new/strip': 'GET, HEAD, POST',
  '/operator/sites/:id': 'GET, HEAD, POST',
  '/operator/sites/:id/rehearse': 'GET, HEAD',
  '/operator/sheets': 'GET, HEAD',
  '/operator/sheets/:id': 'GET, HEAD, POST',
  '/operator/sheets/:id/copy': 'GET, HEAD, POST',
  '/operator/status': 'GET, HEAD',
  '/api/v1/operator/sites': 'GET, HEAD, PUT',
  '/api/v1/operator/sheets': 'GET, HEAD',
  '/api/v1/operator/sheets/:id': 'GET, HEAD, PUT',
  '/api/v1/operator/sheets/:id/approval': 'POST',
  '/api/v1/operator/published': 'GET, HEAD, PUT',
  '/api/v1/operator/forget': 'POST',
  '/api/v1/operator/bounce-secret': 'GET, HEAD',
};

export function operatorRoutes(hono: Hono, services: DeskServices): void {
  hono.route('/api/v1/operator', operator(services));
  hono.route('/status', status(services));
  hono.route('/operator', operatorPages(services));
}

/** The desk of whoever runs the service: its pages and its API. */
export function operatorApp(services: DeskServices): Hono {
  const hono = new Hono();
  operatorRoutes(hono, services);
  return closing(hono, OPERATOR_METHODS);
}
