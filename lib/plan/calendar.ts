/**
 * The plan as a calendar (RFC 5545), an event a block, all times in UTC. A title begins with when it was computed and
 * ends with the verdict, so that one cut short says less; a calendar that asks again replaces what it has, by UID.
 */
import { cautionSentences, clockTime, CLOSING, dateName, INVENTED, plainText, provenance, verdictPhrase, type Reader } from '../brief/words/index.ts';
import type { Block, DayPlan, GroupPlan } from './day-plan.ts';
import { blockPlace, blockReason, blockSentence, groupName } from './words/index.ts';

export interface CalendarOptions {
  /** Of the plan, stable: the UIDs are made from it. */
  readonly id: string;
  /** Times that the plan has been made anew. */
  readonly revision: number;
  readonly reader: Reader;
}

export function planCalendar(plan: DayPlan, options: CalendarOptions): string {
  const stamp = compact(plan.asOf ?? `${plan.date}T00:00:00Z`);
  const events = plan.groups.flatMap((group, index) => group.blocks.flatMap((block, nth) => [
    'BEGIN:VEVENT', `UID:${options.id}-${index + 1}-${nth + 1}@dawnmargin`, `DTSTAMP:${stamp}`, `SEQUENCE:${options.revision}`,
    `DTSTART:${compact(block.from)}`, `DTEND:${compact(block.to)}`,
    `SUMMARY:${escaped(eventTitle(plan, group, block))}`, `LOCATION:${escaped(blockPlace(block))}`,
    `DESCRIPTION:${escaped(describe(plan, { group, block, reader: options.reader }))}`, 'END:VEVENT',
  ]));
  const lines = ['BEGIN:VCALENDAR', 'VERSION:2.0', 'PRODID:-//Dawnmargin//Training day//EN', 'CALSCALE:GREGORIAN', ...events, 'END:VCALENDAR'];
  return lines.map((line) => `${folded(line)}\r\n`).join('');
}

/** "Invented weather, as of 5:30: Tow course at Tivvern Strip (within limits)". */
export function eventTitle(plan: DayPlan, group: Pick<GroupPlan, 'name'>, block: Block): string {
  const asOf = plan.asOf === null ? 'as of a time not known' : `as of ${clockTime(plan.asOf, plan.timeZone)} ${dateName(plan.date, 'short')}`;
  return `${plan.demo ? `${INVENTED}, ${asOf}` : `Plan ${asOf}`}: ${groupName(group.name)} at ${blockPlace(block)} (${verdictPhrase(block.verdict)})`;
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

function escaped(text: string): string {
  return text.replace(/[\\;,]/g, '\\$&').replaceAll('\n', '\\n');
}

/** At most 75 octets a line; what goes on begins with a space. A character is never cut in two. */
function folded(line: string): string {
  let out = '';
  let octets = 0;
  for (const character of line) {
    const code = character.codePointAt(0) ?? 0;
    const size = code < 0x80 ? 1 : code < 0x800 ? 2 : code < 0x10000 ? 3 : 4;
    if (octets + size > 75) {
      out += '\r\n ';
      octets = 1;
    }
    out += character;
    octets += size;
  }
  return out;
}
