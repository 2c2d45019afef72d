import type { JudgedDay } from '../../lib/brief/day.ts';
import { briefText, briefTitle, CLOSING, dayVerdict } from '../../lib/brief/words/index.ts';
import { READER } from '../../lib/brief/words/reader.ts';
import { missedNotice, NOT_COMPUTED } from '../../lib/brief/words/notices.ts';
import type { DisplayUnits } from '../../lib/brief/units-out.ts';
import { isoUtc, localDay } from '../../lib/time.ts';
import type { Message } from '../channels/channel.ts';
import type { Place } from '../service-set.ts';
import type { BriefHead, PairDay } from '../store/brief.ts';
import type { OutboxRow } from '../store/outbox.ts';

export { READER };

/** Which briefs a message is made of, fixed before its first attempt. */
export interface Content {
  readonly issuedAtMs: number;
  readonly briefs: readonly (PairDay & { readonly sheetVersion: number | null; readonly revision: number | null })[];
}

export function contentOf(pairDays: readonly PairDay[], heads: ReadonlyMap<string, BriefHead>, nowMs: number): Content {
  const briefs = pairDays.map(({ siteId, localDate, wingKey, sheetId }) => {
    const head = heads.get(pairDayKey({ siteId, localDate, wingKey, sheetId }));
    return { siteId, localDate, wingKey, sheetId, sheetVersion: head?.sheetVersion ?? null, revision: head?.revision ?? null };
  });
  return { issuedAtMs: nowMs, briefs };
}

export function pairDayKey({ siteId, localDate, wingKey, sheetId }: PairDay): string {
  return JSON.stringify([siteId, localDate, wingKey, sheetId]);
}

export interface MessageParts {
  readonly row: OutboxRow;
  readonly content: Content;
  /** By pairDayKey. */
  readonly heads: ReadonlyMap<string, BriefHead>;
  readonly places: ReadonlyMap<string, Place>;
  /** Those that the subscriber chose. */
  readonly units?: DisplayUnits | undefined;
  /** What else its subscriber has to be told with the next brief. */
  readonly notes?: readonly string[] | undefined;
}

/** A message for all sites of a subscriber; null when none of them is kept any more. */
export function briefMessage({ row, content, heads, places, units, notes = [] }: MessageParts): Message | null {
  const days: JudgedDay[] = [];
  const runs: (number | null)[] = [];
  for (const pair of content.briefs) {
    const place = places.get(pair.siteId);
    if (place === undefined) continue;
    const head = pair.revision === null ? undefined : heads.get(pairDayKey(pair));
    days.push(head === undefined ? notComputed(place, pair, content.issuedAtMs) : (JSON.parse(head.digest) as JudgedDay));
    if (head !== undefined) runs.push(head.runAtMs);
  }
  if (days.length === 0) return null;
  const known = runs.flatMap((runAt) => (runAt === null ? [] : [runAt]));
  return {
    id: row.id,
    kind: row.kind,
    title: briefTitle(days),
    text: withNotes(briefText(days, units === undefined ? READER : { units }), notes),
    issuedAtMs: content.issuedAtMs,
    dataRunAtMs: known.length > 0 && known.length === runs.length ? Math.min(...known) : null,
    validUntilMs: Math.min(...days.map((day) => Date.parse(day.validUntil))),
    urgent: false,
    demo: days.some((day) => day.demo),
    days: days.map((day) => ({ siteId: day.siteId, localDate: day.localDate, verdict: dayVerdict(day), windows: day.windows })),
  };
}

/** Between the sites and the closing notice: a note takes nothing from what stands before it. */
function withNotes(text: string, notes: readonly string[]): string {
  const end = text.lastIndexOf(CLOSING);
  return notes.length === 0 || end < 0 ? text : `${text.slice(0, end)}${notes.join('\n')}\n\n${text.slice(end)}`;
}

/** The brief that says that there is none. */
function notComputed(place: Place, pair: PairDay, nowMs: number): JudgedDay {
  const { site, demo } = place;
  return {
    siteId: site.id, siteName: site.name, kind: site.kind, timeZone: site.timeZone, localDate: pair.localDate,
    wingKey: pair.wingKey, wingName: pair.wingKey, sheetId: pair.sheetId, sheetName: pair.sheetId, sheetVersion: 0,
    issuedAt: isoUtc(nowMs), validUntil: isoUtc(localDay(pair.localDate, site.timeZone).toMs), demo,
    legalDay: { none: NOT_COMPUTED },
    verdict: 'unknown', cause: null, windows: [], hours: [], sources: [], cautions: [], notJudged: [], localRules: site.localRules,
  };
}

export function missedMessage(row: OutboxRow, { demo, nowMs }: { demo: boolean; nowMs: number }): Message {
  const { title, text } = missedNotice({ date: row.dueLocalDate, demo });
  return { id: row.id, kind: row.kind, title, text, issuedAtMs: nowMs, dataRunAtMs: null, validUntilMs: row.validUntilMs, urgent: false, demo, days: [] };
}
