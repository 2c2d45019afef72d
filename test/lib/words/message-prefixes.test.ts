// Invariant I7 on the messages as they are carried: whatever a channel, a notification or a reader cuts off at the end, what
// remains reads no more permissive than the whole. Title first, as everything that shows a message does.
import { XMLParser } from 'fast-xml-parser';
import fc from 'fast-check';
import ICAL from 'ical.js';
import { expect, test } from 'vitest';
import type { JudgedDay } from '../../../lib/brief/day.ts';
import { briefText, briefTitle, dayVerdict, type Reader } from '../../../lib/brief/words/index.ts';
import { absentNotice, changeNotice, testNotice, type ChangedDay } from '../../../lib/brief/words/change.ts';
import { missedNotice } from '../../../lib/brief/words/notices.ts';
import type { Message } from '../../../worker/channels/channel.ts';
import { pushPayload } from '../../../worker/channels/push/payload.ts';
import { atomFeed } from '../../../worker/feeds/atom.ts';
import type { Feed } from '../../../worker/feeds/feed.ts';
import { icalFeed } from '../../../worker/feeds/ical.ts';
import { briefLetter } from '../../../worker/security/letter.ts';
import { days, readers } from './arbitrary.ts';
import { permissivePrefixes } from './reading.ts';

/** A hundred thousand messages; a million with DAWNMARGIN_PROVE=1. */
const MESSAGES = process.env['DAWNMARGIN_PROVE'] === '1' ? 1_000_000 : 100_000;
/** A round is one subscriber's morning, told on every way: somewhat more than ten messages. */
const A_ROUND = 10;

const origin = 'https://brief.example.org';
const links = { manage: `${origin}/manage/x`, unsubscribe: `${origin}/unsubscribe/x`, feed: `${origin}/feeds/x.atom` };

interface Morning {
  readonly list: readonly JudgedDay[];
  readonly reader: Reader;
  readonly kind: 'brief' | 'change';
  readonly reason: ChangedDay['change']['reason'];
  /** Which hours count as changed. */
  readonly every: number;
}

const mornings: fc.Arbitrary<Morning> = fc.record({
  list: fc.array(days, { minLength: 1, maxLength: 4 }).map((list) => list.map((day, index) => ({ ...day, siteId: `site-${index}` }))),
  reader: readers,
  kind: fc.constantFrom('brief' as const, 'change' as const),
  reason: fc.constantFrom('limits' as const, 'weather' as const),
  every: fc.integer({ min: 1, max: 4 }),
});

function changesOf({ list, reason, every }: Morning): ChangedDay[] {
  return list.map((day) => {
    const hours = day.hours.filter((_, index) => index % every === 0);
    const worse = hours.flatMap(({ validAt, verdict }) => (verdict === 'beyond' || verdict === 'unknown' ? [{ validAt, now: verdict }] : []));
    const better = hours.flatMap(({ validAt, verdict }) => (verdict === 'within' || verdict === 'close' ? [validAt] : []));
    return { day, change: { worse, better, reason } };
  });
}

function messageOf(morning: Morning): Message {
  const { list, reader, kind } = morning;
  const words = kind === 'brief' ? { title: briefTitle(list), text: briefText(list, reader) } : changeNotice(list, changesOf(morning), reader);
  return { id: 'msg_1', kind, thread: 's|d', ...words, issuedAtMs: 0, dataRunAtMs: null, validUntilMs: 3_600_000, urgent: false, demo: false, days: list.map((day) => ({ siteId: day.siteId, localDate: day.localDate, verdict: dayVerdict(day), windows: day.windows })) };
}

const shown = (title: string, text: string): string => `${title}\n${text}`;

const xml = new XMLParser({ processEntities: true, isArray: (name) => name === 'entry', parseTagValue: false });

/** Every text of one morning, as its reader gets it. */
function textsOf(morning: Morning): string[] {
  const message = messageOf(morning);
  const read = (minimal: boolean): { title: string; body?: string } => JSON.parse(new TextDecoder().decode(pushPayload(message, { origin, minimal }))) as { title: string; body?: string };
  const letter = briefLetter(message, 'ana@example.org', { links, mailFrom: 'brief@example.org' });
  const page = letter.html.replaceAll(/<title>.*?<\/title>|<[^>]*>/g, ' ').replaceAll('&lt;', '<').replaceAll('&gt;', '>').replaceAll('&amp;', '&').replaceAll(/&#39;|&quot;/g, "'").replaceAll(/\s+/g, ' ');
  const feed: Feed = { id: 'x', origin, days: morning.list.map((day) => ({ day, revision: 1, issuedAtMs: 0, mostWindows: day.windows.length, earlier: day.windows })) };
  const atom = xml.parse(atomFeed(feed, { self: `${origin}/x`, reader: morning.reader })) as { feed: { entry: { title: string | { '#text': string }; content: string | { '#text': string } }[] } };
  const plain = (node: string | { '#text': string }): string => (typeof node === 'string' ? node : node['#text']);
  const calendar = new ICAL.Component(ICAL.parse(icalFeed(feed, morning.reader)) as never);
  return [
    shown(message.title, message.text), shown(letter.subject, letter.text), page, shown(read(false).title, read(false).body ?? ''), read(true).title,
    ...atom.feed.entry.map(({ title, content }) => shown(plain(title), plain(content))),
    ...calendar.getAllSubcomponents('vevent').map((event) => shown(String(event.getFirstPropertyValue('summary')), String(event.getFirstPropertyValue('description')))),
  ];
}

test(`no beginning of ${MESSAGES} messages, as push, webhook, mail, Atom and calendar carry them, reads more permissive than the whole`, { timeout: 3_600_000 }, () => {
  let messages = 0;
  const kinds = new Set<string>();
  fc.assert(fc.property(mornings, (morning) => {
    kinds.add(morning.kind);
    for (const text of textsOf(morning)) {
      messages += 1;
      if (permissivePrefixes(text).length > 0) expect.fail(text);
    }
  }), { numRuns: Math.ceil(MESSAGES / A_ROUND) });
  expect(messages).toBeGreaterThanOrEqual(MESSAGES);
  expect([...kinds].sort()).toEqual(['brief', 'change']);
});

test('what is said when there is no brief, and when a way is tried, speaks of no verdict but that nothing can be said', () => {
  const notices = [
    ...(['not-run', 'self-check', 'not-made'] as const).flatMap((reason) => [true, false].map((demo) => absentNotice({ date: '2027-05-14', reason, demo }))),
    ...[true, false].map((demo) => missedNotice({ date: '2027-05-14', demo })),
    ...[null, 0].flatMap((reachedAtMs) => [true, false].map((asked) => testNotice({ atMs: 90_000_000, reachedAtMs, asked }))),
  ];
  for (const { title, text } of notices) {
    expect(permissivePrefixes(shown(title, text))).toEqual([]);
    expect(shown(title, text)).toMatch(/cannot say/i);
    expect(shown(title, text)).not.toMatch(/within limits|close to a limit|beyond a limit/i);
  }
});
