import type { JudgedDay } from '../../lib/brief/day.ts';
import { briefText } from '../../lib/brief/words/index.ts';
import { READER } from '../../lib/brief/words/reader.ts';
import type { Issue } from '../../lib/result.ts';

/** Errors for people: where, what is there, what is wrong, what would be right. */
export function issueLines(issues: readonly Issue[]): string {
  return issues.map(({ path, value, problem, allowed }) => `  ${path}${value === '' ? '' : ` (${value})`}: ${problem}${allowed === '' ? '' : `; allowed: ${allowed}`}`).join('\n');
}

/** One block a site, the most restrictive first. */
export function morningText(days: readonly JudgedDay[]): string {
  return briefText(days, READER);
}

/** Whether any legal hour of any site got an answer. */
export function isJudged(days: readonly JudgedDay[]): boolean {
  return days.some((day) => day.hours.some((hour) => hour.verdict !== 'unknown'));
}
