import type { DayChange } from '../../lib/brief/change/change.ts';
import type { Told } from '../../lib/brief/change/told.ts';
import type { JudgedDay } from '../../lib/brief/day.ts';
import { absentNotice, changeNotice, testNotice, type AbsentReason, type ChangedDay } from '../../lib/brief/words/change.ts';
import type { Message } from '../channels/channel.ts';
import { turnedNotice } from '../../lib/plan/words/notice.ts';
import { briefMessage, missedMessage, pairDayKey, READER, type Content, type MessageParts } from './message.ts';
import type { PlanContent } from './plan-notices.ts';

/** What a change notice is made of: the newest revisions of all its sites, and of some what has changed. */
export interface ChangeContent extends Content {
  readonly briefs: readonly (Content['briefs'][number] & {
    /** What its reader will have been told; left out by briefs, whose readers have been told what they say. */
    readonly told?: Told;
    readonly change?: Omit<DayChange, 'told'>;
  })[];
}

/** Of a message that there is no brief. */
export interface AbsentContent extends Content {
  readonly reason: AbsentReason;
}

/** Of a test: when the channel was last reached. */
export interface TestContent extends Content {
  readonly reachedAtMs: number | null;
  /** By its subscriber; left out by the test of the week. */
  readonly asked?: boolean;
}

/** Every message that is not a brief, in words; null when none of its sites is kept any more. */
export function noticeMessage(parts: MessageParts): Message | null {
  const { row, content } = parts;
  switch (row.kind) {
    case 'brief': return briefMessage(parts);
    case 'change': return changeMessage(parts);
    case 'plan': return planMessage(parts);
    case 'test': return { ...plain(parts), ...testNotice({ atMs: content.issuedAtMs, reachedAtMs: (content as TestContent).reachedAtMs, asked: (content as TestContent).asked === true }) };
    case 'missed': {
      const { reason } = content as Partial<AbsentContent>;
      const demo = content.briefs.some((brief) => parts.places.get(brief.siteId)?.demo === true);
      const message = missedMessage(row, { demo, nowMs: content.issuedAtMs });
      return reason === undefined ? message : { ...message, ...absentNotice({ date: row.dueLocalDate, reason, demo }) };
    }
  }
}

function plain({ row, content }: MessageParts): Message {
  return { id: row.id, kind: row.kind, title: '', text: '', issuedAtMs: content.issuedAtMs, dataRunAtMs: null, validUntilMs: row.validUntilMs, urgent: false, demo: false, days: [] };
}

/** Planned blocks that turned, with the days that they stand on: also of sites that its subscriber has no briefs of. */
function planMessage(parts: MessageParts): Message {
  const { row, content, heads, units } = parts;
  const { plans } = content as PlanContent;
  const days = content.briefs.flatMap((brief) => { const head = heads.get(pairDayKey(brief)); return head === undefined ? [] : [JSON.parse(head.digest) as JudgedDay]; });
  const words = turnedNotice(plans, { date: row.dueLocalDate, days, reader: units === undefined ? READER : { units } });
  return { ...plain(parts), ...words, urgent: true, demo: plans.some(({ demo }) => demo) || days.some(({ demo }) => demo) };
}

function changeMessage(parts: MessageParts): Message | null {
  const message = briefMessage(parts);
  if (message === null) return null;
  const days: JudgedDay[] = [];
  const changed: ChangedDay[] = [];
  for (const brief of (parts.content as ChangeContent).briefs) {
    const head = parts.places.has(brief.siteId) ? parts.heads.get(pairDayKey(brief)) : undefined;
    if (head === undefined) continue;
    const day = JSON.parse(head.digest) as JudgedDay;
    days.push(day);
    if (brief.change !== undefined) changed.push({ day, change: brief.change });
  }
  if (changed.length === 0) return null;
  const { units = READER.units } = parts as MessageParts & Partial<typeof READER>;
  return { ...message, ...changeNotice(days, changed, { units }), urgent: changed.some(({ change }) => change.worse.length > 0) };
}
