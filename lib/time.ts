/**
 * Time: UTC epoch milliseconds inside, zones only where people are, through Intl. No clock in here: now is passed in.
 * A local day is asked for with a zone; it may have 23, 23.5, 24.5 or 25 hours, and need not begin at midnight.
 */
export const HOUR_MS = 3_600_000;
export const MINUTE_MS = 60_000;

export interface LocalDateTime {
  readonly year: number;
  readonly month: number;
  readonly day: number;
  readonly hour: number;
  readonly minute: number;
  readonly second: number;
}

const formatters = new Map<string, Intl.DateTimeFormat>();

function formatter(timeZone: string): Intl.DateTimeFormat {
  let found = formatters.get(timeZone);
  if (found === undefined) {
    found = new Intl.DateTimeFormat('en-GB-u-ca-gregory-nu-latn', {
      timeZone, hourCycle: 'h23', year: 'numeric', month: '2-digit', day: '2-digit', hour: '2-digit', minute: '2-digit', second: '2-digit',
    });
    formatters.set(timeZone, found);
  }
  return found;
}

/** Wall-clock reading in a zone. Throws RangeError for a zone that the runtime does not know: validate zones first. */
export function localDateTime(epochMs: number, timeZone: string): LocalDateTime {
  const part: Record<string, number> = {};
  for (const { type, value } of formatter(timeZone).formatToParts(epochMs)) part[type] = Number(value);
  return {
    year: part['year'] ?? NaN, month: part['month'] ?? NaN, day: part['day'] ?? NaN,
    hour: part['hour'] ?? NaN, minute: part['minute'] ?? NaN, second: part['second'] ?? NaN,
  };
}

/** How far the zone's clocks are ahead of UTC at an instant, in ms. */
export function zoneOffsetMs(epochMs: number, timeZone: string): number {
  const local = localDateTime(epochMs, timeZone);
  const wall = Date.UTC(local.year, local.month - 1, local.day, local.hour, local.minute, local.second);
  return wall - Math.floor(epochMs / 1000) * 1000;
}

function two(n: number): string {
  return String(n).padStart(2, '0');
}

/** yyyy-mm-dd of an instant in a zone. */
export function localDate(epochMs: number, timeZone: string): string {
  const { year, month, day } = localDateTime(epochMs, timeZone);
  return `${String(year).padStart(4, '0')}-${two(month)}-${two(day)}`;
}

/** HH:MM of an instant in a zone. */
export function localClock(epochMs: number, timeZone: string): string {
  const { hour, minute } = localDateTime(epochMs, timeZone);
  return `${two(hour)}:${two(minute)}`;
}

/** Whether the text is a calendar date yyyy-mm-dd that exists. */
export function isCalendarDate(text: string): boolean {
  if (!/^\d{4}-\d{2}-\d{2}$/.test(text)) return false;
  const ms = Date.parse(`${text}T00:00:00Z`);
  return Number.isFinite(ms) && new Date(ms).toISOString().slice(0, 10) === text;
}

/** The calendar date `days` later (earlier when negative). */
export function shiftDate(date: string, days: number): string {
  return new Date(Date.parse(`${date}T00:00:00Z`) + days * 24 * HOUR_MS).toISOString().slice(0, 10);
}

/**
 * The first instant at which a zone's wall clock shows the date and time or, where the clocks jump over it, the first
 * instant after the jump plus the part that was jumped over (02:30 in a gap from 02:00 to 03:00 gives 03:30); a time
 * that comes twice gives its first occurrence.
 */
export function instantOfLocal(date: string, clock: { readonly hour: number; readonly minute: number }, timeZone: string): number {
  const wall = Date.parse(`${date}T${two(clock.hour)}:${two(clock.minute)}:00Z`);
  const before = zoneOffsetMs(wall - 24 * HOUR_MS, timeZone);
  const after = zoneOffsetMs(wall + 24 * HOUR_MS, timeZone);
  const candidates = [wall - before, wall - after].sort((a, b) => a - b);
  for (const candidate of candidates) {
    if (candidate + zoneOffsetMs(candidate, timeZone) === wall) return candidate;
  }
  return wall - before;
}

/** First and last instant (exclusive) of a local date. A date that a zone skipped whole (date line) gives an empty day. */
export function localDay(date: string, timeZone: string): { readonly fromMs: number; readonly toMs: number } {
  return { fromMs: firstInstantOf(date, timeZone), toMs: firstInstantOf(shiftDate(date, 1), timeZone) };
}

function firstInstantOf(date: string, timeZone: string): number {
  const midnight = instantOfLocal(date, { hour: 0, minute: 0 }, timeZone);
  if (localDate(midnight, timeZone) === date && localDate(midnight - 1000, timeZone) < date) return midnight;
  const guess = Date.parse(`${date}T00:00:00Z`);
  let low = guess - 26 * HOUR_MS;
  let high = guess + 26 * HOUR_MS;
  while (high - low > 1000) {
    const middle = Math.floor((low + high) / 2000) * 1000;
    if (localDate(middle, timeZone) < date) low = middle;
    else high = middle;
  }
  return high;
}

/** The instants on the hour, UTC, from `fromMs` to `toMs`, both included where they are on the hour. */
export function hourlyInstants(fromMs: number, toMs: number): number[] {
  const instants: number[] = [];
  for (let at = Math.ceil(fromMs / HOUR_MS) * HOUR_MS; at <= toMs; at += HOUR_MS) instants.push(at);
  return instants;
}

/** ISO 8601 UTC without fractions: 2027-05-14T04:00:00Z. */
export function isoUtc(epochMs: number): string {
  return new Date(epochMs).toISOString().replace(/\.\d{3}Z$/, 'Z');
}

/** Epoch ms of an ISO 8601 UTC text, NaN when it is not one. */
export function epochOf(iso: string): number {
  return /^\d{4}-\d{2}-\d{2}T\d{2}:\d{2}(:\d{2}(\.\d{1,9})?)?Z$/.test(iso) ? Date.parse(iso) : NaN;
}
