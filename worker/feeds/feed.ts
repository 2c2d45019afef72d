import type { JudgedDay } from '../../lib/brief/day.ts';
import { shiftDate } from '../../lib/time.ts';
import { placesOf } from '../morning/places.ts';
import { judgedDate } from '../morning/times.ts';
import type { DeskServices } from '../service-set.ts';

/** What a subscriber's feeds are made of: each day that still holds, with everything that was said about it. */
export interface Feed {
  /** Stable for the life of the subscription, and not its secret. */
  readonly id: string;
  readonly origin: string;
  readonly days: readonly FeedDay[];
}

export interface FeedDay {
  readonly day: JudgedDay;
  readonly revision: number;
  readonly issuedAtMs: number;
  /** The most windows that any revision of this day had: those that are gone are said to be. */
  readonly mostWindows: number;
  /** Windows of earlier revisions by their place, for those that are gone. */
  readonly earlier: readonly JudgedDay['windows'][number][];
}

/** null where its links are revoked, or the subscription has ended. */
export async function readFeed(services: DeskServices, named: { readonly id: string; readonly version: number }): Promise<Feed | null> {
  const { settings, stores, clock } = services;
  const subscription = await stores.subscription.one(named.id);
  if (subscription === null || subscription.state === 'ended' || subscription.linkVersion !== named.version) return null;
  const nowMs = clock.nowMs();
  const pairs = await stores.subscription.pairsOf([subscription.id]);
  const places = await placesOf(services, [...new Set(pairs.map((pair) => pair.siteId))]);
  const pairDays = pairs.flatMap(({ siteId, wingKey, sheetId }) => {
    const place = places.get(siteId);
    if (place === undefined) return [];
    const today = judgedDate(place.site, nowMs);
    return [shiftDate(today, -1), today, shiftDate(today, 1)].map((localDate) => ({ siteId, wingKey, sheetId, localDate }));
  });
  const history = await stores.brief.history(pairDays);
  const days = [...Map.groupBy(history, (head) => JSON.stringify([head.siteId, head.localDate, head.wingKey, head.sheetId])).values()].flatMap((revisions) => {
    const newest = revisions.at(-1);
    if (newest === undefined || newest.validUntilMs <= nowMs) return [];
    const told = revisions.map((head) => JSON.parse(head.digest) as JudgedDay);
    const day = told.at(-1);
    if (day === undefined) return [];
    const mostWindows = Math.max(...told.map(({ windows }) => windows.length));
    const earlier = Array.from({ length: mostWindows }, (_, place) => told.findLast(({ windows }) => windows[place] !== undefined)?.windows[place]).filter((window) => window !== undefined);
    return [{ day, revision: newest.revision, issuedAtMs: newest.issuedAtMs, mostWindows, earlier }];
  });
  return { id: subscription.id, origin: settings.publicUrl, days };
}
