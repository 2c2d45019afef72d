import { briefTitle, capital, CLOSING, placeName, siteBlock, type Reader } from '../../lib/brief/words/index.ts';
import { calendarDayTitle, calendarGoneTitle, calendarWindowTitle, GONE } from '../../lib/brief/words/notices.ts';
import { shiftDate } from '../../lib/time.ts';
import type { Feed, FeedDay } from './feed.ts';
import { folded, icalText } from './ical-text.ts';

/**
 * The feed as a calendar (RFC 5545). A title begins with the time at which it was computed and carries no verdict: a
 * calendar shows it for hours after. Each site-day is an event of the whole day with the brief in it; its windows are
 * tentative events, and one that a later revision has lost stays, cancelled.
 */
export function icalFeed(feed: Feed, reader: Reader): string {
  const lines = [
    'BEGIN:VCALENDAR', 'VERSION:2.0', 'PRODID:-//Dawnmargin//Morning margin brief//EN', 'CALSCALE:GREGORIAN',
    property('NAME', 'Dawnmargin'), property('X-WR-CALNAME', 'Dawnmargin'), 'REFRESH-INTERVAL;VALUE=DURATION:PT30M', 'X-PUBLISHED-TTL:PT30M',
    ...feed.days.flatMap((feedDay) => [...wholeDay(feedDay, feed, reader), ...feedDay.earlier.flatMap((_, place) => windowEvent(feedDay, place, feed, reader))]),
    'END:VCALENDAR',
  ];
  return lines.map((line) => `${folded(line)}\r\n`).join('');
}

function wholeDay(feedDay: FeedDay, feed: Feed, reader: Reader): string[] {
  const { day } = feedDay;
  return event(feedDay, feed, {
    part: 'day',
    times: [`DTSTART;VALUE=DATE:${dateOnly(day.localDate)}`, `DTEND;VALUE=DATE:${dateOnly(shiftDate(day.localDate, 1))}`],
    title: calendarDayTitle(day),
    text: `${siteBlock(day, reader)}\n\n${CLOSING}`,
    status: 'TENTATIVE',
  });
}

function windowEvent(feedDay: FeedDay, place: number, feed: Feed, reader: Reader): string[] {
  const { day } = feedDay;
  const window = day.windows[place] ?? feedDay.earlier[place];
  if (window === undefined) return [];
  const isGone = day.windows[place] === undefined;
  return event(feedDay, feed, {
    part: `window-${place + 1}`,
    times: [`DTSTART:${instant(window.from)}`, `DTEND:${instant(window.to)}`],
    title: isGone ? calendarGoneTitle(day) : calendarWindowTitle(day, window),
    text: `${isGone ? `${capital(GONE)}. ` : ''}${siteBlock(day, reader)}\n\n${CLOSING}`,
    status: isGone ? 'CANCELLED' : 'TENTATIVE',
  });
}

interface EventParts {
  readonly part: string;
  readonly times: readonly string[];
  readonly title: string;
  readonly text: string;
  readonly status: 'TENTATIVE' | 'CANCELLED';
}

function event({ day, revision, issuedAtMs }: FeedDay, feed: Feed, { part, times, title, text, status }: EventParts): string[] {
  const stamp = instant(new Date(issuedAtMs).toISOString());
  const key = [day.siteId, day.localDate, day.wingKey, day.sheetId, part].map((word) => word.replaceAll(/[^A-Za-z0-9-]/g, '-')).join('.');
  const address = `${feed.origin}/sites/${encodeURIComponent(day.siteId)}?${new URLSearchParams({ date: day.localDate, wing: day.wingKey, sheet: day.sheetId })}`;
  return [
    'BEGIN:VEVENT', `UID:${key}@${new URL(feed.origin).hostname}`, `DTSTAMP:${stamp}`, `LAST-MODIFIED:${stamp}`, `SEQUENCE:${revision - 1}`, ...times,
    property('SUMMARY', title), property('DESCRIPTION', `${briefTitle([day])}\n\n${text}`), property('LOCATION', placeName({ name: day.siteName, id: day.siteId })),
    `URL:${address}`, `STATUS:${status}`, 'TRANSP:TRANSPARENT', 'CLASS:PRIVATE', 'END:VEVENT',
  ];
}

function property(name: string, text: string): string {
  return `${name}:${icalText(text)}`;
}

function instant(iso: string): string {
  return iso.replace(/\.\d+/, '').replaceAll(/[-:]/g, '');
}

function dateOnly(date: string): string {
  return date.replaceAll('-', '');
}
