/** The plan as a table (RFC 4180): one row a block, one for every group without a place. No row without its time and its notice. */
import { CLOSING, INVENTED, plainText, verdictPhrase, type Reader } from '../brief/words/index.ts';
import type { DayPlan } from './day-plan.ts';
import { blockPlace, blockReason, groupName, leftOutSentence } from './words/index.ts';

const HEAD = ['weather', 'as of (UTC)', 'group', 'wing', 'sheet', 'verdict', 'close at (UTC)', 'site', 'from (UTC)', 'to (UTC)', 'last launch of the window (UTC)', 'why', 'notice'] as const;

export function planCsv(plan: DayPlan, reader: Reader): string {
  const weather = plan.demo ? INVENTED : 'forecast';
  const rows = plan.groups.flatMap((group) => {
    const begin = [weather, plan.asOf ?? '', groupName(group.name), group.wing, group.sheet];
    if (group.blocks.length === 0) return [[...begin, 'no place', '', '', '', '', '', leftOutSentence(group, plan, reader), CLOSING]];
    return group.blocks.map((block) => [
      ...begin, verdictPhrase(block.verdict), block.closeAt.join(' '), blockPlace(block), block.from, block.to, block.window?.lastLaunch ?? 'not known', blockReason(block, plan.timeZone, reader), CLOSING,
    ]);
  });
  return [HEAD, ...rows].map((row) => `${row.map(cell).join(',')}\r\n`).join('');
}

/** A table program would run a cell that begins like a formula; an apostrophe makes it text. */
function cell(text: string): string {
  const plain = plainText(text, 600);
  return `"${(/^[=+\-@\u2212]/u.test(plain) ? `'${plain}` : plain).replaceAll('"', '""')}"`;
}
