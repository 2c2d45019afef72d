/** Time zones by their IANA name, Area/City only: "CET" and "Etc/GMT+2" say an offset, and the latter with its sign turned round. */
import * as z from 'zod/mini';
import { HOUR_MS, zoneOffsetMs } from '../time.ts';
import { closestWord } from './closest-word.ts';

const form = /^(?:Africa|America|Antarctica|Arctic|Asia|Atlantic|Australia|Europe|Indian|Pacific)(?:\/[A-Za-z_-]+){1,2}$/;

/** Sun time and clock time differ by less than this anywhere people live; a site further off has a wrong zone or place. */
export const MOST_HOURS_OFF = 3.5;

/** Mid-winter and mid-summer, so that one of the two is standard time on either half of the globe. */
const seasonsMs = [Date.UTC(2026, 0, 15, 12), Date.UTC(2026, 6, 15, 12)];

export function isZone(name: string): boolean {
  if (!form.test(name)) return false;
  try {
    // Through lib/time, which keeps its formatters: making one takes longer than reading all the rest of a site.
    return Number.isFinite(zoneOffsetMs(0, name));
  } catch {
    return false;
  }
}

export function zone(): z.ZodMiniString {
  return z.string({ error: allowed }).check(z.refine(isZone, {
    error: (found) => allowed(found),
    params: { problem: 'not a time zone of the form Area/City' },
  }));
}

function allowed(found: { readonly input?: unknown }): string {
  const near = typeof found.input === 'string' ? closestWord(found.input, Intl.supportedValuesOf('timeZone').filter((name) => form.test(name))) : undefined;
  return near === undefined ? 'an IANA zone such as "Europe/Vienna"' : `an IANA zone; did you mean "${near}"?`;
}

/** Hours between the zone's standard time and the sun's time at a longitude, 0 to 12. */
export function hoursOffSun(timeZone: string, lonDeg: number): number {
  const standardHours = Math.min(...seasonsMs.map((at) => zoneOffsetMs(at, timeZone))) / HOUR_MS;
  const off = Math.abs(standardHours - lonDeg / 15) % 24;
  return Math.min(off, 24 - off);
}
