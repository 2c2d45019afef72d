import * as SunCalc from 'suncalc';
import { degrees, radians } from '../angles.ts';
import type { DaylightRule } from '../site.ts';
import { HOUR_MS, instantOfLocal, localDay, MINUTE_MS } from '../time.ts';

/**
 * The sun, through suncalc 2 (degrees; azimuth clockwise from north; altitude with refraction). Sunrise and sunset are
 * the upper limb at a zenith of 90.833°, civil twilight ends at 96°. Terrain is in neither.
 */

export type LegalDay = { readonly fromMs: number; readonly toMs: number } | { readonly none: 'polar night' | 'polar day' };

/**
 * The legal day of a local date at a place. Minutes before and after shift its ends. On a day without sunrise or
 * sunset there is none, and which: nothing can be measured from an event that does not happen.
 */
export function legalDay(place: { readonly latDeg: number; readonly lonDeg: number; readonly timeZone: string; readonly daylight: DaylightRule }, date: string): LegalDay {
  const { latDeg, lonDeg, timeZone, daylight } = place;
  const day = localDay(date, timeZone);
  // suncalc picks the solar day by longitude from the instant it is given: local noon names the wanted one.
  const noonMs = day.fromMs < day.toMs ? instantOfLocal(date, { hour: 12, minute: 0 }, timeZone) : day.fromMs + 12 * HOUR_MS;
  const times = SunCalc.getTimes(new Date(noonMs), latDeg, lonDeg);
  const [rise, set] = daylight.rule === 'sunrise-sunset' ? [times.sunrise, times.sunset] : [times.dawn, times.dusk];
  if (rise === null || set === null || rise === undefined || set === undefined || !Number.isFinite(rise.getTime()) || !Number.isFinite(set.getTime())) {
    return { none: sunAltitudeDeg(noonMs, latDeg, lonDeg) > (daylight.rule === 'sunrise-sunset' ? -0.833 : -6) ? 'polar day' : 'polar night' };
  }
  return { fromMs: rise.getTime() - daylight.beforeMin * MINUTE_MS, toMs: set.getTime() + daylight.afterMin * MINUTE_MS };
}

function sunAltitudeDeg(epochMs: number, latDeg: number, lonDeg: number): number {
  return SunCalc.getPosition(new Date(epochMs), latDeg, lonDeg).altitude;
}

/** Where the sun stands, degrees; altitude above the horizon with refraction, azimuth clockwise from true north. */
export function sunAt(epochMs: number, place: { readonly latDeg: number; readonly lonDeg: number }): { readonly altitudeDeg: number; readonly azimuthDeg: number } {
  const { altitude, azimuth } = SunCalc.getPosition(new Date(epochMs), place.latDeg, place.lonDeg);
  return { altitudeDeg: altitude, azimuthDeg: azimuth };
}

/**
 * Angle between the sun and the normal of a slope that falls away toward `facingDeg`, degrees; 0 square on, 90 and more
 * none: cos i = sin(alt) cos(slope) + cos(alt) sin(slope) cos(azimuth - facing). null when the sun is down.
 */
export function incidenceDeg(sun: { readonly altitudeDeg: number; readonly azimuthDeg: number }, face: { readonly facingDeg: number; readonly slopeDeg: number }): number | null {
  if (sun.altitudeDeg <= 0) return null;
  const altitude = radians(sun.altitudeDeg);
  const slope = radians(face.slopeDeg);
  const cosine = Math.sin(altitude) * Math.cos(slope) + Math.cos(altitude) * Math.sin(slope) * Math.cos(radians(sun.azimuthDeg - face.facingDeg));
  return degrees(Math.acos(Math.min(1, Math.max(-1, cosine))));
}

/** First and last direct sun on the launch face of a local date, to the minute; null when it gets none. Terrain around is not known. */
export function directSun(place: { readonly latDeg: number; readonly lonDeg: number; readonly timeZone: string }, face: { readonly facingDeg: number; readonly slopeDeg: number }, date: string): { readonly firstMs: number; readonly lastMs: number } | null {
  const { fromMs, toMs } = localDay(date, place.timeZone);
  const lit = (at: number): boolean => {
    const sun = sunAt(at, place);
    const incidence = incidenceDeg(sun, face);
    return incidence !== null && incidence < 90;
  };
  let firstMs: number | null = null;
  let lastMs: number | null = null;
  for (let at = fromMs; at < toMs; at += 10 * MINUTE_MS) {
    if (!lit(at)) continue;
    firstMs ??= at;
    lastMs = at;
  }
  if (firstMs === null || lastMs === null) return null;
  while (firstMs > fromMs && lit(firstMs - MINUTE_MS)) firstMs -= MINUTE_MS;
  while (lastMs + MINUTE_MS < toMs && lit(lastMs + MINUTE_MS)) lastMs += MINUTE_MS;
  return { firstMs, lastMs };
}
