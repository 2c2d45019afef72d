/**
 * Hours and dates of a site as words: "13 h", "11:48", "9 to 12 h", "Tuesday 1 December 2026". Where this runtime's rules of
 * time are not the known ones, every time is said in UTC, and says so: "11 h UTC", "9:48 UTC", "7 to 10 h UTC".
 */
import { epochOf, localDate, localDateTime } from '../../time.ts';
import { clockFaults } from '../self-test/clock.ts';

/** Looked up once: the rules of a runtime do not change while it runs. */
let isTrusted: boolean | null = null;

function trusted(): boolean {
  isTrusted ??= clockFaults().length === 0;
  return isTrusted;
}

/** What has to be said beside times that are not local; null where they are. */
export function clockNote(): string | null {
  return trusted() ? null : 'times in UTC, because the rules of local time here are not the known ones';
}

function utcMark(timeZone: string): string {
  return trusted() || timeZone === 'UTC' ? '' : ' UTC';
}

function wallClock(atMs: number, timeZone: string): string {
  const { hour, minute } = localDateTime(atMs, trusted() ? timeZone : 'UTC');
  return `${hour}:${String(minute).padStart(2, '0')}`;
}

function bareHour(iso: string, timeZone: string): string {
  const at = epochOf(iso);
  if (!Number.isFinite(at)) return 'a time not given';
  const clock = wallClock(at, timeZone);
  return clock.endsWith(':00') ? `${clock.slice(0, -3)} h` : clock;
}

/** "9:05": the wall clock at the site. No leading zero, so that a clock cut short can only read as earlier. */
export function clockTime(iso: string, timeZone: string): string {
  const at = epochOf(iso);
  if (!Number.isFinite(at)) return 'a time not given';
  return `${wallClock(at, timeZone)}${utcMark(timeZone)}`;
}

/** "13 h" on the hour, "13:45" in a zone whose instants are not on it. */
export function hourName(iso: string, timeZone: string): string {
  return `${bareHour(iso, timeZone)}${utcMark(timeZone)}`;
}

/** "9 to 12 h"; a single instant is "9 h". */
export function hourSpan(span: { readonly from: string; readonly to: string }, timeZone: string): string {
  const from = bareHour(span.from, timeZone);
  const to = bareHour(span.to, timeZone);
  if (span.from === span.to) return `${from}${utcMark(timeZone)}`;
  return `${from.endsWith(' h') && to.endsWith(' h') ? from.slice(0, -2) : from} to ${to}${utcMark(timeZone)}`;
}

const dateFormat = new Map<string, Intl.DateTimeFormat>();

/** "Tuesday 1 December 2026" of a yyyy-mm-dd. */
export function dateName(date: string, form: 'long' | 'short' = 'long'): string {
  const at = Date.parse(`${date}T00:00:00Z`);
  if (!Number.isFinite(at)) return 'a date not given';
  let format = dateFormat.get(form);
  if (format === undefined) {
    format = new Intl.DateTimeFormat('en-GB', {
      timeZone: 'UTC', weekday: form, day: 'numeric', month: form, ...(form === 'long' ? { year: 'numeric' as const } : {}),
    });
    dateFormat.set(form, format);
  }
  return format.format(at).replace(',', '');
}

/** "5:12" today at the site, "30 November 21:40" on another date there. */
export function momentName(iso: string, day: { readonly timeZone: string; readonly localDate: string }): string {
  const at = epochOf(iso);
  if (!Number.isFinite(at)) return 'a time not given';
  const date = localDate(at, trusted() ? day.timeZone : 'UTC');
  const clock = clockTime(iso, day.timeZone);
  return date === day.localDate ? clock : `${dateName(date, 'short')} ${clock}`;
}

/** "just now", "40 min", "6 h", "2 days": how old something is. */
export function ageName(ms: number): string {
  if (!Number.isFinite(ms)) return 'of an age not known';
  const minutes = Math.max(0, Math.round(ms / 60_000));
  if (minutes < 90) return `${minutes} min`;
  const hours = Math.round(minutes / 60);
  return hours < 48 ? `${hours} h` : `${Math.round(hours / 24)} days`;
}
