import { Hono } from 'hono/tiny';
import type { DeskServices } from '../service-set.ts';
import { statusPage, type Status } from '../web/status-page.ts';
import { health } from './health.ts';
import { PAGE_HEADERS } from './pages.ts';

/** The same as /healthz, for people. */
export function status(services: DeskServices): Hono {
  const app = new Hono();
  app.get('/', async (c) => {
    const answer = await health(services);
    return answer.ok ? c.html(statusPage(await answer.json<Status>()), 200, { ...PAGE_HEADERS }) : answer;
  });
  return app;
}
