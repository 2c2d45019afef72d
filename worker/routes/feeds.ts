import { Hono } from 'hono/tiny';
import { atomFeed } from '../feeds/atom.ts';
import { KEPT_MS, type MadeFeed } from '../feeds/door.ts';
import { readFeed } from '../feeds/feed.ts';
import { icalFeed } from '../feeds/ical.ts';
import { READER } from '../morning/message.ts';
import { readLinkToken, sha256Hex } from '../secrets.ts';
import type { DeskServices } from '../service-set.ts';
import { API_HEADERS, problem } from './problem.ts';

/** Feeds behind a secret address. A token that is wrong, revoked or ended gets one and the same answer. */
export function feeds(services: DeskServices): Hono {
  const { settings, clock, feedDoor } = services;
  const app = new Hono();

  app.get('/:file', async (c) => {
    const file = c.req.param('file');
    const [, token, form] = /^([\w.-]{1,200})\.(ics|atom)$/.exec(file) ?? [];
    const named = token === undefined || settings.linkKey === null ? null : await readLinkToken(settings.linkKey, 'feed', token);
    if (named === null) return problem('not-found');
    const key = `${settings.publicUrl}/feeds/kept/${await sha256Hex(file)}`;
    const waitS = feedDoor.take(key, clock.nowMs());
    if (waitS > 0) return problem('too-many', { detail: 'a feed is read thirty times a minute at most', headers: { 'retry-after': String(waitS) } });
    const isCalendar = form === 'ics';
    const { body, etag } = await feedDoor.made(key, clock.nowMs(), () => make(services, named, isCalendar ? null : `${settings.publicUrl}${c.req.path}`));
    if (body === null) return problem('not-found');
    const headers = {
      ...API_HEADERS, etag, 'cache-control': 'private, no-cache', 'x-robots-tag': 'noindex',
      'content-type': isCalendar ? 'text/calendar; charset=utf-8' : 'application/atom+xml; charset=utf-8',
    };
    const known = (c.req.header('if-none-match') ?? '').split(',').map((tag) => tag.trim().replace(/^W\//, ''));
    return known.includes(etag) ? new Response(null, { status: 304, headers }) : new Response(body, { headers });
  });

  return app;
}

/** `self`: the address of an Atom feed; null makes a calendar. It holds for a minute, and no longer than any day in it. */
async function make(services: DeskServices, named: { readonly id: string; readonly version: number }, self: string | null): Promise<MadeFeed> {
  const nowMs = services.clock.nowMs();
  const feed = await readFeed(services, named);
  if (feed === null) return { body: null, etag: '', untilMs: nowMs + KEPT_MS };
  const body = self === null ? icalFeed(feed, READER) : atomFeed(feed, { self, reader: READER });
  const untilMs = Math.min(nowMs + KEPT_MS, ...feed.days.map(({ day }) => Date.parse(day.validUntil)));
  return { body, etag: `"${(await sha256Hex(body)).slice(0, 32)}"`, untilMs };
}
