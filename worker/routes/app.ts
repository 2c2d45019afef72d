import { Hono } from 'hono/tiny';
import type { Services } from '../service-set.ts';
import { closing } from './closing.ts';
import { DESK_METHODS, deskRoutes } from './desk.ts';
import { FRONT_METHODS, frontRoutes } from './front.ts';
import { local } from './local.ts';
import { OPERATOR_METHODS, operatorRoutes } from './operator-desk.ts';

/** Everything that is answered over HTTP, by one worker: on this machine there is only one. */
export function app(services: Services): Hono {
  const hono = new Hono();
  if (services.settings.local) hono.route('/local', local(services));
  operatorRoutes(hono, services);
  deskRoutes(hono, services);
  frontRoutes(hono, services);
  return closing(hono, { ...OPERATOR_METHODS, ...DESK_METHODS, ...FRONT_METHODS });
}
