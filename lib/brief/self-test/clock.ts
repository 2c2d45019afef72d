/**
 * Ten instants whose local time is known, in zones with every kind of change there is. A runtime whose rules differ would
 * send briefs at another hour than asked for, and no test on another machine could tell.
 */
import { localClock, localDate } from '../../time.ts';

export const KNOWN: readonly (readonly [utc: string, timeZone: string, local: string])[] = [
  ['2026-03-29T01:30:00Z', 'Europe/Vienna', '2026-03-29 03:30'],
  ['2026-10-25T01:30:00Z', 'Europe/Vienna', '2026-10-25 02:30'],
  ['2026-03-08T10:00:00Z', 'America/Los_Angeles', '2026-03-08 03:00'],
  ['2026-04-23T22:00:00Z', 'Africa/Cairo', '2026-04-24 01:00'],
  ['2026-09-06T04:00:00Z', 'America/Santiago', '2026-09-06 01:00'],
  ['2026-10-03T15:30:00Z', 'Australia/Lord_Howe', '2026-10-04 02:30'],
  ['2026-07-01T00:15:00Z', 'Asia/Kathmandu', '2026-07-01 06:00'],
  ['2026-06-30T10:00:00Z', 'Pacific/Kiritimati', '2026-07-01 00:00'],
  ['2026-01-01T10:59:00Z', 'Pacific/Pago_Pago', '2025-12-31 23:59'],
  ['2026-07-15T03:00:00Z', 'America/Sao_Paulo', '2026-07-15 00:00'],
];

/** The zones that this runtime reads differently, each once. While there is one, no zone is trusted: `../words/clock.ts`. */
export function clockFaults(known: typeof KNOWN = KNOWN): string[] {
  const faults = known.flatMap(([utc, timeZone, local]) => {
    try {
      const at = Date.parse(utc);
      return `${localDate(at, timeZone)} ${localClock(at, timeZone)}` === local ? [] : [timeZone];
    } catch {
      return [timeZone];
    }
  });
  return [...new Set(faults)];
}
