/** The pages: the board and the day of a site. GET only, nothing stored, no cookie, no script needed. */
import type { Context } from 'hono';
import { Hono } from 'hono/tiny';
import { boardPage } from '../web/board.ts';
import { dayPage } from '../web/day-page.ts';
import { CONTENT_SECURITY_POLICY } from '../web/layout.ts';
import { messagePage } from '../web/message-page.ts';
import type { DayAnswer, PageServices } from '../web/page-services.ts';
import { unitsFrom } from '../web/units-query.ts';

/** A verdict must be asked for anew each time; nothing of a page may be framed, sniffed or told to others. */
export const PAGE_HEADERS: Readonly<Record<string, string>> = {
  'content-security-policy': CONTENT_SECURITY_POLICY,
  'cache-control': 'no-cache, must-revalidate',
  'x-content-type-options': 'nosniff',
  'referrer-policy': 'no-referrer',
  'cross-origin-opener-policy': 'same-origin',
  'permissions-policy': 'geolocation=(), camera=(), microphone=()',
};

export function answer(c: Context, page: string, status: 200 | 400 | 404 = 200): Response {
  return c.html(page, status, { ...PAGE_HEADERS });
}

/** An empty choice of a form is no choice. */
export function asked(c: Context, name: string): string | null {
  const value = c.req.query(name);
  return value === undefined || value === '' ? null : value;
}

export function notFound(c: Context, found: Extract<DayAnswer, { kind: 'no-site' | 'bad-query' }>): Response {
  return found.kind === 'no-site'
    ? answer(c, messagePage({ title: 'No such site', sentences: ['Nothing is known of a site with this name.'] }), 404)
    : answer(c, messagePage({ title: 'This cannot be judged', sentences: found.problems }), 400);
}

export function pages(services: PageServices): Hono {
  const app = new Hono();

  app.get('/', async (c) => answer(c, boardPage(await services.board(), { reader: { units: unitsFrom(c.req.query()) }, now: services.now() })));

  app.get('/sites/:id', async (c) => {
    const found = await services.day({ siteId: c.req.param('id'), date: asked(c, 'date'), wing: asked(c, 'wing'), sheet: asked(c, 'sheet') });
    if (found.kind !== 'day') return notFound(c, found);
    return answer(c, dayPage(found.day, {
      reader: { units: unitsFrom(c.req.query()) }, now: services.now(), hour: asked(c, 'hour'), detail: found.detail, choices: found.choices,
    }));
  });

  return app;
}
