/** The brief as plain text and as a title: terminal, mail, messages. One block a site, the most restrictive first. */
import type { JudgedDay } from '../day.ts';
import { mostRestrictive, restrictiveness, verdictPhrase } from './verdicts.ts';
import { cautionSentences } from './cautions.ts';
import { dateName } from './clock.ts';
import { CLOSING } from './closing.ts';
import { INVENTED, siteSentence } from './day-sentence.ts';
import { notJudgedGroups, notJudgedSentence } from './not-judged.ts';
import { capital, counted, placeName, plainText } from './plain.ts';
import type { Reader } from './reader.ts';
import { credits, provenance } from './sources.ts';
import { windowSentence } from './windows.ts';

/** How the day reads at a glance: its most restrictive hour. */
export function dayVerdict(day: JudgedDay): JudgedDay['verdict'] {
  return mostRestrictive([day.verdict, ...day.hours.map((hour) => hour.verdict)]);
}

/** Days in the order of a brief: no window before some window, then the more restrictive, then as given. */
export function inBriefOrder(days: readonly JudgedDay[]): JudgedDay[] {
  const rank = (day: JudgedDay) => (day.windows.length === 0 ? 10 : 0) + restrictiveness(dayVerdict(day));
  return [...days].sort((a, b) => rank(b) - rank(a));
}

function indented(text: string): string {
  return `  ${text}`;
}

/** One site: the day sentence, then everything that makes or limits it. */
export function siteBlock(day: JudgedDay, reader: Reader): string {
  const lines = [
    siteSentence(day, reader),
    indented(`${dateName(day.localDate)}, ${plainText(day.wingName)}, sheet ${plainText(day.sheetName)}.`),
    ...day.windows.map((window) => indented(windowSentence(window, day))),
    ...cautionSentences(day.cautions, day, reader).map((caution) => indented(`Caution: ${caution}`)),
    indented(provenance(day)),
    ...notJudgedGroups(day).map((group) => indented(`Not judged: ${notJudgedSentence(group)}`)),
    ...(day.localRules === null ? [] : [indented(`Local rules: ${plainText(day.localRules, 300)}`)]),
  ];
  return lines.join('\n');
}

/** The whole brief as text. `zone` is of no concern to it: hours are those of each site. */
export function briefText(days: readonly JudgedDay[], reader: Reader): string {
  if (days.length === 0) return `Cannot say: no site was judged.\n\n${CLOSING}\n`;
  const blocks = inBriefOrder(days).map((day) => siteBlock(day, reader));
  const thanks = [...new Set(days.flatMap((day) => credits(day)).map(({ text, href }) => `${text} (${href})`))];
  return [...blocks, ...(thanks.length === 0 ? [] : [thanks.join('; ')]), CLOSING].join('\n\n') + '\n';
}

/** The title of a message: "Beyond a limit at 2 sites; cannot say at 1; close to a limit at 1". */
export function briefTitle(days: readonly JudgedDay[]): string {
  if (days.length === 0) return 'Cannot say: no site was judged';
  const [first] = days;
  const invented = days.some((day) => day.demo) ? `${INVENTED}: ` : '';
  const date = first === undefined ? '' : `, ${dateName(first.localDate, 'short')}`;
  return `${invented}${invented === '' ? capital(countsPhrase(days)) : countsPhrase(days)}${date}`;
}

function countsPhrase(days: readonly JudgedDay[]): string {
  const [first] = days;
  if (days.length === 1 && first !== undefined) return `${openWords(first)}, ${placeName({ name: first.siteName, id: first.siteId })}`;
  return (['beyond', 'unknown', 'close', 'within'] as const)
    .map((verdict) => ({ verdict, count: days.filter((day) => dayVerdict(day) === verdict).length }))
    .filter(({ count }) => count > 0)
    .map(({ verdict, count }, index) => `${verdictPhrase(verdict)} at ${index === 0 ? counted(count, 'site', 'sites') : count}${windowsNote(days, verdict)}`)
    .join('; ');
}

/** Days that are closed in part still have windows: the title says how many, after the verdict. */
function windowsNote(days: readonly JudgedDay[], verdict: JudgedDay['verdict']): string {
  if (verdict === 'close' || verdict === 'within') return '';
  const open = days.filter((day) => dayVerdict(day) === verdict && day.windows.length > 0).length;
  return open === 0 ? '' : ` (${open} with a window)`;
}

function openWords(day: JudgedDay): string {
  const verdict = verdictPhrase(dayVerdict(day));
  if (day.windows.length > 0) return dayVerdict(day) === 'within' ? verdict : `${verdict}, with ${counted(day.windows.length, 'window', 'windows')}`;
  return `${verdict}, no window`;
}
