/** What follows from the fields of a site, as far as they are filled: the very numbers that its margins will be made of. */
import { angleBetweenDeg, normalDeg } from '../../../lib/angles.ts';
import { speedUp } from '../../../lib/air/terrain.ts';
import { clockTime } from '../../../lib/brief/words/index.ts';
import { numberAt, valueAt } from '../../../lib/config/path.ts';
import { lonLatAt } from '../../../lib/config/site-checks.ts';
import { isZone } from '../../../lib/config/zone.ts';
import { geodesicBetween } from '../../../lib/numeric/geodesic.ts';
import { failure, success, type Result } from '../../../lib/result.ts';
import type { Hill } from '../../../lib/site.ts';
import { declinationDeg } from '../../../lib/sky/declination.ts';
import { legalDay } from '../../../lib/sky/sun.ts';
import { isoUtc, localDate } from '../../../lib/time.ts';

export interface ComputedRow {
  readonly what: string;
  readonly value: string;
  readonly note: string;
}

const LAUNCH = ['geometry', 'coordinates'] as const;
const LANDING = ['properties', 'landing', 'coordinates'] as const;

const degree = (value: number): string => `${value.toFixed(1)}°`;

/** To a hundredth of a degree, as it is when a site is saved. */
function declinationOf(feature: unknown, nowMs: number): Result<number, { readonly reason: string }> {
  const place = lonLatAt(feature, LAUNCH);
  if (place === undefined) return failure({ reason: 'the place is not given' });
  const found = declinationDeg({ ...place, elevationM: numberAt(feature, [...LAUNCH, 2]) ?? 0, atMs: nowMs });
  return found.ok ? success(Math.round(found.value * 100) / 100) : found;
}

function headingOf(feature: unknown): { readonly givenDeg: number | undefined; readonly isCompass: boolean } {
  return {
    givenDeg: numberAt(feature, ['properties', 'facingDeg']) ?? numberAt(feature, ['properties', 'headingDeg']),
    isCompass: valueAt(feature, ['properties', 'headingReference']) === 'magnetic',
  };
}

function trueHeadingDeg(feature: unknown, nowMs: number): number | null {
  const { givenDeg, isCompass } = headingOf(feature);
  const declination = declinationOf(feature, nowMs);
  if (givenDeg === undefined || (isCompass && !declination.ok)) return null;
  return normalDeg(givenDeg + (isCompass && declination.ok ? declination.value : 0));
}

function headings(feature: unknown, nowMs: number): ComputedRow[] {
  if (lonLatAt(feature, LAUNCH) === undefined) return [];
  const declination = declinationOf(feature, nowMs);
  if (!declination.ok) return [{ what: 'Declination', value: 'not known', note: declination.error.reason }];
  const { givenDeg, isCompass } = headingOf(feature);
  const value = `${degree(Math.abs(declination.value))} ${declination.value < 0 ? 'west' : 'east'}`;
  const use = isCompass ? 'added to the compass heading once, when this is saved' : 'not used: the heading is given from true north';
  const trueDeg = trueHeadingDeg(feature, nowMs);
  return [
    { what: 'Declination', value, note: `World Magnetic Model, ${isoUtc(nowMs).slice(0, 10)}; ${use}` },
    ...(givenDeg === undefined || trueDeg === null ? [] : [{ what: 'True heading', value: degree(trueDeg), note: isCompass ? `compass ${degree(givenDeg)}` : `as given; a compass would show ${degree(normalDeg(givenDeg - declination.value))}` }]),
  ];
}

function line(feature: unknown, nowMs: number): ComputedRow[] {
  const [launch, landing] = [lonLatAt(feature, LAUNCH), lonLatAt(feature, LANDING)];
  if (launch === undefined || landing === undefined) return [];
  const geodesic = geodesicBetween(launch, landing);
  const [givenTrackDeg, givenDistanceM] = [numberAt(feature, ['properties', 'trackDeg']), numberAt(feature, ['properties', 'distanceM'])];
  const [trackDeg, distanceM] = [givenTrackDeg ?? geodesic.trackDeg, givenDistanceM ?? geodesic.distanceM];
  const facingDeg = trueHeadingDeg(feature, nowMs);
  const off = facingDeg === null ? '' : `; ${angleBetweenDeg(facingDeg, trackDeg).toFixed(0)}° off the way the launch faces`;
  const [launchM, landingM] = [numberAt(feature, [...LAUNCH, 2]), numberAt(feature, [...LANDING, 2])];
  const heightM = launchM === undefined || landingM === undefined ? null : launchM - landingM;
  return [
    { what: 'Track to the landing', value: degree(trackDeg), note: `${givenTrackDeg === undefined ? 'on the ellipsoid, from true north' : 'as given'}${off}` },
    { what: 'Distance', value: `${Math.round(distanceM)} m`, note: givenDistanceM === undefined ? 'straight; the ground between is not known' : 'as given' },
    ...(heightM === null ? [] : [{ what: 'Height to spend', value: `${Math.round(heightM)} m`, note: 'launch above landing' }]),
    ...(heightM === null || heightM <= 0 ? [] : [{ what: 'Glide needed', value: (distanceM / heightM).toFixed(1), note: 'distance over height, in still air, with nothing left on arrival' }]),
  ];
}

function hillRows(feature: unknown): ComputedRow[] {
  const form = valueAt(feature, ['properties', 'hill', 'form']);
  const [heightM, halfLengthM] = [numberAt(feature, ['properties', 'hill', 'heightM']), numberAt(feature, ['properties', 'hill', 'halfLengthM'])];
  const known = (['ridge', 'escarpment', 'cone', 'flat'] as const).find((word) => word === form);
  if (known === undefined || heightM === undefined || halfLengthM === undefined || halfLengthM <= 0) return [];
  const hill: Hill = { form: known, heightM, halfLengthM };
  const [least, most] = [speedUp(hill, 0), speedUp(hill, heightM)].map((share) => Math.round(share * 100));
  return [{ what: 'Speed-up', value: least === most ? `${most} %` : `${least} to ${most} %`, note: 'of the wind over the launch against that over flat ground; the more, the less of the hill a forecast’s own ground has' }];
}

function daylight(feature: unknown, nowMs: number): ComputedRow[] {
  const place = lonLatAt(feature, LAUNCH);
  const timeZone = valueAt(feature, ['properties', 'timeZone']);
  if (place === undefined || typeof timeZone !== 'string' || !isZone(timeZone)) return [];
  const day = legalDay({ ...place, timeZone, daylight: { rule: 'sunrise-sunset', beforeMin: 0, afterMin: 0 } }, localDate(nowMs, timeZone));
  return [{ what: 'Sun today', value: 'none' in day ? day.none : `${clockTime(isoUtc(day.fromMs), timeZone)} to ${clockTime(isoUtc(day.toMs), timeZone)}`, note: `sunrise to sunset on the clocks of ${timeZone}, over a level horizon` }];
}

export function computedRows(feature: unknown, nowMs: number): ComputedRow[] {
  return [...headings(feature, nowMs), ...line(feature, nowMs), ...hillRows(feature), ...daylight(feature, nowMs)];
}
