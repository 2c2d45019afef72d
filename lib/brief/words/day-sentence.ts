/**
 * The day in words that could be acted on as they stand. It opens with the most restrictive verdict as if it held all
 * day, and only then names the exceptions, each with its last launch where the end of the window would stand: whatever
 * is cut off at the end can only have been a permission.
 *
 *   Beyond a limit except 9 h to last launch 11:48 (within limits). At 13 h a gust leaves 1.2 m/s forward; the sheet asks 2.5.
 */
import type { JudgedDay, JudgedHour } from '../day.ts';
import { causeClause, causeSentence } from './causes.ts';
import { hourName, hourSpan } from './clock.ts';
import { capital, listed, placeName, plainText, sentence } from './plain.ts';
import type { Reader } from './reader.ts';
import { votesPhrase } from './sources.ts';
import { isOpen, verdictPhrase } from './verdicts.ts';
import { exceptions, lastLaunchWords } from './windows.ts';

export const INVENTED = 'Invented weather';

/** The verdicts outside every window, the proven one first: what the day is but for its windows. */
function closedPhrase(hours: readonly JudgedHour[]): string | null {
  const phrases = (['beyond', 'unknown'] as const).filter((verdict) => hours.some((hour) => hour.verdict === verdict));
  return phrases.length === 0 ? null : capital(listed(phrases.map(verdictPhrase), 'or'));
}

function opening(day: JudgedDay): string {
  if (day.hours.length === 0) {
    const why = 'none' in day.legalDay ? plainText(day.legalDay.none) : 'no hour of the legal day could be judged';
    return `Cannot say: ${why}`;
  }
  const except = exceptions(day);
  const closed = closedPhrase(day.hours);
  if (closed !== null && except !== null) return `${closed} except ${except}`;
  if (closed !== null) return `${closed}${day.hours.some((hour) => isOpen(hour.verdict)) ? ', no window' : ' all day'}`;
  return openAllDay(day);
}

/** Every judged hour is within or close: one window, or hours too few to make one. */
function openAllDay(day: JudgedDay): string {
  const verdict = day.hours.some((hour) => hour.verdict === 'close') ? 'close' : 'within';
  const phrase = capital(verdictPhrase(verdict));
  const [window] = day.windows;
  const [first] = day.hours;
  if (window === undefined || day.windows.length > 1) {
    const except = exceptions(day);
    return except === null && first !== undefined ? `No window: ${hourName(first.validAt, day.timeZone)} alone was judged` : `${phrase}, only ${except}`;
  }
  const last = lastLaunchWords(window, day) ?? 'no last launch known';
  return `${phrase}, ${last}, all day ${hourSpan(window, day.timeZone)}`;
}

/** Why nothing can be said, where no source has a vote at all. */
function nobodyVoted(day: JudgedDay): string | null {
  const deterministic = day.sources.filter((source) => source.kind === 'deterministic');
  if (deterministic.some((source) => source.state === 'voted')) return null;
  if (deterministic.length === 0) return 'No source was asked.';
  return sentence(`No source has a vote: ${votesPhrase(deterministic)}`);
}

/** Hours without an answer are named by what is missing in the first of them, after a proven cause. */
function unknownSentence(day: JudgedDay, reader: Reader): string | null {
  const hour = day.hours.find((candidate) => candidate.verdict === 'unknown');
  const margin = hour?.margins.find((candidate) => candidate.status === 'unknown');
  if (hour === undefined || margin === undefined || day.cause?.validAt === hour.validAt) return null;
  return sentence(`At ${hourName(hour.validAt, day.timeZone)} ${causeClause(margin, reader)}`);
}

function reasons(day: JudgedDay, reader: Reader): string[] {
  const nobody = nobodyVoted(day);
  if (nobody !== null) return [nobody];
  const cause = day.cause === null ? null : causeSentence(day, day.cause, reader, day.hours.every((hour) => isOpen(hour.verdict)) ? 'tightest' : 'cause');
  return [cause, unknownSentence(day, reader)].filter((text) => text !== null);
}

/** The day sentence without the mark of invented weather: only where that mark stands beside it. */
export function dayStatement(day: JudgedDay, reader: Reader): string {
  return [sentence(opening(day)), ...reasons(day, reader)].join(' ');
}

function uncapital(text: string): string {
  return `${text.slice(0, 1).toLowerCase()}${text.slice(1)}`;
}

/** The day sentence. Invented weather says so before it says anything else. */
export function daySentence(day: JudgedDay, reader: Reader): string {
  const statement = dayStatement(day, reader);
  return day.demo ? `${INVENTED}: ${uncapital(statement)}` : statement;
}

/** The day sentence with the name of the site: "Kestrel Edge: beyond a limit all day. ..." */
export function siteSentence(day: JudgedDay, reader: Reader): string {
  const name = placeName({ name: day.siteName, id: day.siteId });
  return `${day.demo ? `${INVENTED}, ${name}` : name}: ${uncapital(dayStatement(day, reader))}`;
}
