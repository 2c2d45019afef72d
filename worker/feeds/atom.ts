import { briefTitle, CLOSING, siteBlock, type Reader } from '../../lib/brief/words/index.ts';
import type { Feed, FeedDay } from './feed.ts';

/** The feed as Atom (RFC 4287): an entry for each site-day, updated by each revision. Its title begins with the most restrictive verdict. */
export function atomFeed(feed: Feed, { self, reader }: { readonly self: string; readonly reader: Reader }): string {
  const updatedMs = Math.max(0, ...feed.days.map(({ issuedAtMs }) => issuedAtMs));
  return [
    '<?xml version="1.0" encoding="utf-8"?>',
    '<feed xmlns="http://www.w3.org/2005/Atom">',
    `<id>urn:dawnmargin:feed:${xml(feed.id)}</id>`,
    '<title>Dawnmargin</title>',
    '<subtitle>The morning margin brief. Computed from forecasts, not observed.</subtitle>',
    `<updated>${iso(updatedMs)}</updated>`,
    '<author><name>Dawnmargin</name></author>',
    `<link rel="self" type="application/atom+xml" href="${xml(self)}"/>`,
    `<link rel="alternate" type="text/html" href="${xml(feed.origin)}/"/>`,
    ...feed.days.map((feedDay) => entry(feedDay, feed, reader)),
    '</feed>',
    '',
  ].join('\n');
}

function entry({ day, issuedAtMs }: FeedDay, feed: Feed, reader: Reader): string {
  const query = new URLSearchParams({ date: day.localDate, wing: day.wingKey, sheet: day.sheetId });
  const key = [day.siteId, day.localDate, day.wingKey, day.sheetId].map(encodeURIComponent).join(':');
  return [
    '<entry>',
    `<id>urn:dawnmargin:brief:${xml(key)}</id>`,
    `<title type="text">${xml(briefTitle([day]))}</title>`,
    `<updated>${iso(issuedAtMs)}</updated>`,
    `<link rel="alternate" type="text/html" href="${xml(`${feed.origin}/sites/${encodeURIComponent(day.siteId)}?${query}`)}"/>`,
    `<content type="text">${xml(`${siteBlock(day, reader)}\n\nValid until ${day.validUntil}.\n\n${CLOSING}`)}</content>`,
    '</entry>',
  ].join('\n');
}

/** Character data and attribute values of XML 1.0; characters that it forbids are left out. */
export function xml(text: string): string {
  return text
    .replaceAll(/[^\P{Cc}\t\n\r]|\p{Cs}|[\ufffe\uffff]/gu, '')
    .replaceAll('&', '&amp;').replaceAll('<', '&lt;').replaceAll('>', '&gt;').replaceAll('"', '&quot;').replaceAll("'", '&apos;');
}

function iso(epochMs: number): string {
  return new Date(epochMs).toISOString();
}
