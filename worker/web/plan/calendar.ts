/**
 * The plan as a calendar (RFC 5545), an event a block, all times in UTC. A title begins with when it was computed and
 * carries no verdict: a calendar shows it for hours after. A calendar that asks again replaces what it has, by UID.
 */
import { cautionSentences, CLOSING, INVENTED, plainText, provenance, type Reader } from '../../../lib/brief/words/index.ts';
import type { Block, DayPlan, GroupPlan } from '../../../lib/plan/day-plan.ts';
import { blockPlace, blockReason, blockSentence, eventTitle } from '../../../lib/plan/words/index.ts';
import { folded, icalText } from '../../feeds/ical-text.ts';

export interface CalendarOptions {
  /** Of the plan, stable: the UIDs are made from it. */
  readonly id: string;
  /** Times that the plan has been made. */
  readonly revision: number;
  readonly reader: Reader;
}

export function planCalendar(plan: DayPlan, { id, revision, reader }: CalendarOptions): string {
  const stamp = compact(plan.asOf ?? `${plan.date}T00:00:00Z`);
  const events = plan.groups.flatMap((group, index) => group.blocks.flatMap((block, nth) => [
    'BEGIN:VEVENT', `UID:${id}-${index + 1}-${nth + 1}@dawnmargin`, `DTSTAMP:${stamp}`, `SEQUENCE:${revision}`,
    `DTSTART:${compact(block.from)}`, `DTEND:${compact(block.to)}`,
    `SUMMARY:${icalText(eventTitle(plan, group, block))}`, `LOCATION:${icalText(blockPlace(block))}`,
    `DESCRIPTION:${icalText(describe(plan, { group, block, reader }))}`, 'STATUS:TENTATIVE', 'CLASS:PRIVATE', 'END:VEVENT',
  ]));
  const lines = ['BEGIN:VCALENDAR', 'VERSION:2.0', 'PRODID:-//Dawnmargin//Training day//EN', 'CALSCALE:GREGORIAN', ...events, 'END:VCALENDAR'];
  return lines.map((line) => `${folded(line)}\r\n`).join('');
}

function describe(plan: DayPlan, { group, block, reader }: { readonly group: GroupPlan; readonly block: Block; readonly reader: Reader }): string {
  const day = plan.siteDays.find((each) => each.siteId === block.site && each.wingKey === group.wing && each.sheetId === group.sheet);
  return [
    ...(plan.demo ? [`${INVENTED}.`] : []),
    blockSentence(block, plan.timeZone),
    blockReason(block, plan.timeZone, reader),
    ...(day === undefined ? [] : cautionSentences(day.cautions, day, reader).map((caution) => `Caution: ${caution}`)),
    ...(day === undefined ? [] : [...(day.localRules === null ? [] : [`Local rules: ${plainText(day.localRules, 300)}`]), provenance(day)]),
    CLOSING,
  ].join('\n');
}

/** 20270514T040000Z of 2027-05-14T04:00:00Z. */
function compact(iso: string): string {
  return iso.replace(/[-:]/g, '').replace(/\.\d+/, '');
}
