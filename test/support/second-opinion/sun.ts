// flight-model.md section 6, `daylight`, and section 7, "the legal day of the local date". Sun times from suncalc 2: degrees, `Date | null`,
// asked for with the local civil noon of the wanted day.
import * as SunCalc from 'suncalc';
import type { Daylight } from './types.ts';

function localParts(epochMs: number, timeZone: string): Record<string, number> {
  const format = new Intl.DateTimeFormat('en-GB', {
    timeZone,
    calendar: 'gregory',
    numberingSystem: 'latn',
    hourCycle: 'h23',
    year: 'numeric',
    month: '2-digit',
    day: '2-digit',
    hour: '2-digit',
    minute: '2-digit',
    second: '2-digit',
  });
  const parts: Record<string, number> = {};
  for (const part of format.formatToParts(epochMs)) parts[part.type] = Number(part.value);
  return parts;
}

// The instant of local civil noon on the local date of an instant.
function localNoonMs(epochMs: number, timeZone: string): number {
  const day = localParts(epochMs, timeZone);
  const wanted = Date.UTC(day.year as number, (day.month as number) - 1, day.day as number, 12);
  let guess = wanted;
  for (let round = 0; round < 4; round++) {
    const here = localParts(guess, timeZone);
    const reads = Date.UTC(
      here.year as number,
      (here.month as number) - 1,
      here.day as number,
      here.hour as number,
      here.minute as number,
      here.second as number,
    );
    guess += wanted - reads;
  }
  return guess;
}

export type LegalDay = { startMs: number; endMs: number } | 'no end' | 'no day';

export function legalDay(epochMs: number, coordinates: number[], timeZone: string, daylight: Daylight): LegalDay {
  const [lonDeg, latDeg] = coordinates as [number, number];
  const noon = new Date(localNoonMs(epochMs, timeZone));
  const times = SunCalc.getTimes(noon, latDeg, lonDeg);
  const civil = daylight.rule === 'civil-twilight';
  const start = civil ? times.dawn : times.sunrise;
  const end = civil ? times.dusk : times.sunset;
  if (start === null || end === null) {
    // The sun stays on one side of the rule's edge all day. For sunrise the flag says which; for twilight the height at solar noon does.
    if (!civil) return times.alwaysUp === true ? 'no end' : 'no day';
    return SunCalc.getPosition(times.solarNoon, latDeg, lonDeg).altitude >= -6 ? 'no end' : 'no day';
  }
  return {
    startMs: start.getTime() - daylight.beforeMin * 60_000,
    endMs: end.getTime() + daylight.afterMin * 60_000,
  };
}

// "minutes to the nearer end of the legal day"; a day without an end leaves a whole day, null: no legal day at all.
export function daylightSpareMin(epochMs: number, day: LegalDay): number | null {
  if (day === 'no end') return 1440;
  if (day === 'no day') return null;
  return Math.min(epochMs - day.startMs, day.endMs - epochMs) / 60_000;
}
