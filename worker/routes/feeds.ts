import { Hono } from 'hono/tiny';
import { atomFeed } from '../feeds/atom.ts';
import { readFeed } from '../feeds/feed.ts';
import { icalFeed } from '../feeds/ical.ts';
import { READER } from '../morning/message.ts';
import { sha256Hex } from '../secrets.ts';
import type { DeskServices } from '../service-set.ts';
import { API_HEADERS, problem } from './problem.ts';

/** Feeds behind a secret address. A token that is wrong, revoked or ended gets one and the same answer. */
export function feeds(services: DeskServices): Hono {
  const app = new Hono();

  app.get('/:file', async (c) => {
    const [, token, form] = /^([\w.-]{1,200})\.(ics|atom)$/.exec(c.req.param('file')) ?? [];
    const feed = token === undefined ? null : await readFeed(services, token);
    if (feed === null) return problem('not-found');
    const isCalendar = form === 'ics';
    const body = isCalendar ? icalFeed(feed, READER) : atomFeed(feed, { self: `${services.settings.publicUrl}${c.req.path}`, reader: READER });
    const etag = `"${(await sha256Hex(body)).slice(0, 32)}"`;
    const headers = {
      ...API_HEADERS, etag, 'cache-control': 'private, no-cache', 'x-robots-tag': 'noindex',
      'content-type': isCalendar ? 'text/calendar; charset=utf-8' : 'application/atom+xml; charset=utf-8',
    };
    const known = (c.req.header('if-none-match') ?? '').split(',').map((tag) => tag.trim().replace(/^W\//, ''));
    return known.includes(etag) ? new Response(null, { status: 304, headers }) : new Response(body, { headers });
  });

  return app;
}
