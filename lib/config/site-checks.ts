/**
 * What the fields of a site must be to one another. Each check reads the text itself and asks only for the fields it
 * needs, so that a wrong field elsewhere hides nothing.
 */
import { normalDeg } from '../angles.ts';
import { geodesicBetween, type LonLat } from '../numeric/geodesic.ts';
import type { Issue } from '../result.ts';
import { issue } from './check.ts';
import { formatPath, numberAt, valueAt, type Path } from './path.ts';
import { nullIslandIssues } from './place.ts';
import { distanceRange } from './site-schema.ts';
import { hoursOffSun, isZone, MOST_HOURS_OFF } from './zone.ts';
import { rangeText } from './fields.ts';

const launchAt = ['geometry', 'coordinates'] as const;
const landingAt = ['properties', 'landing', 'coordinates'] as const;
const stepAt = ['properties', 'pressureStep'] as const;

/** Higher, a sea-level pressure says more about the reduction than about the air (flight model, section 6). */
const HIGHEST_REFERENCE_M = 800;

export function siteIssues(json: unknown, base: Path): Issue[] {
  const points: Path[] = [launchAt, landingAt, [...stepAt, 'a', 'coordinates'], [...stepAt, 'b', 'coordinates']];
  return [
    ...points.flatMap((at) => nullIslandIssues(json, at, base)),
    ...zoneIssues(json, base),
    ...landingIssues(json, base),
    ...sectorIssues(json, base),
    ...localWindIssues(json, base),
    ...pressureStepIssues(json, base),
  ];
}

export function lonLatAt(json: unknown, at: Path): LonLat | undefined {
  const lonDeg = numberAt(json, [...at, 0]);
  const latDeg = numberAt(json, [...at, 1]);
  if (lonDeg === undefined || latDeg === undefined || Math.abs(lonDeg) > 180 || Math.abs(latDeg) > 90) return undefined;
  return { lonDeg, latDeg };
}

function zoneIssues(json: unknown, base: Path): Issue[] {
  const at = ['properties', 'timeZone'];
  const timeZone = valueAt(json, at);
  const place = lonLatAt(json, launchAt);
  if (place === undefined || typeof timeZone !== 'string' || !isZone(timeZone)) return [];
  const off = hoursOffSun(timeZone, place.lonDeg);
  if (off <= MOST_HOURS_OFF) return [];
  const isSwapped = hoursOffSun(timeZone, place.latDeg) <= MOST_HOURS_OFF;
  const hint = isSwapped ? '; longitude comes first in coordinates: were the two swapped?' : '';
  return [issue([...base, ...at], timeZone, {
    problem: `this zone's clocks are ${off.toFixed(1)} h off the sun at longitude ${place.lonDeg}${hint}`,
    allowed: `a zone within ${MOST_HOURS_OFF} h of longitude / 15`,
  })];
}

function landingIssues(json: unknown, base: Path): Issue[] {
  const launchM = numberAt(json, [...launchAt, 2]);
  const landingM = numberAt(json, [...landingAt, 2]);
  const issues: Issue[] = [];
  if (launchM !== undefined && landingM !== undefined && landingM > launchM) {
    issues.push(issue([...base, ...landingAt, 2], landingM, { problem: 'the landing is above the launch', allowed: `at most the launch's ${launchM} m` }));
  }
  const launch = lonLatAt(json, launchAt);
  const landing = lonLatAt(json, landingAt);
  const isGiven = typeof (valueAt(json, ['properties', 'distanceM']) ?? undefined) !== 'undefined';
  if (launch === undefined || landing === undefined || isGiven) return issues;
  const { distanceM } = geodesicBetween(launch, landing);
  if (distanceM < distanceRange.min || distanceM > distanceRange.max) {
    issues.push(issue([...base, ...landingAt], [landing.lonDeg, landing.latDeg], {
      problem: `the landing is ${Math.round(distanceM)} m from the launch`,
      allowed: `${rangeText(distanceRange)}, by the two points or by distanceM`,
    }));
  }
  return issues;
}

function listAt(json: unknown, at: Path): readonly unknown[] {
  const value = valueAt(json, at);
  return Array.isArray(value) ? value : [];
}

function sectorIssues(json: unknown, base: Path): Issue[] {
  const at = ['properties', 'sectors'];
  return listAt(json, at).flatMap((sector, index) => {
    const fromDeg = numberAt(sector, ['fromDeg']);
    const toDeg = numberAt(sector, ['toDeg']);
    if (fromDeg === undefined || toDeg === undefined || normalDeg(fromDeg) !== normalDeg(toDeg)) return [];
    return [issue([...base, ...at, index, 'toDeg'], toDeg, {
      problem: 'this sector begins and ends in the same direction',
      allowed: 'a direction other than fromDeg; a limit for wind from everywhere belongs in the limit sheet',
    })];
  });
}

function localWindIssues(json: unknown, base: Path): Issue[] {
  const at = ['properties', 'localWind'];
  return listAt(json, at).flatMap((wind, index) => {
    const fromHour = numberAt(wind, ['fromHour']);
    const toHour = numberAt(wind, ['toHour']);
    if (fromHour === undefined || toHour === undefined || toHour > fromHour) return [];
    return [issue([...base, ...at, index, 'toHour'], toHour, {
      problem: 'these hours end before they have begun',
      allowed: `later than ${fromHour}; a wind through midnight is two entries`,
    })];
  });
}

function pressureStepIssues(json: unknown, base: Path): Issue[] {
  const issues: Issue[] = [];
  for (const name of ['a', 'b']) {
    const at = [...stepAt, name, 'coordinates', 2];
    const elevationM = numberAt(json, at);
    if (elevationM !== undefined && elevationM > HIGHEST_REFERENCE_M) {
      const allowed = `at most ${HIGHEST_REFERENCE_M} m: higher up, a sea-level pressure is an artefact of its reduction`;
      issues.push(issue([...base, ...at], elevationM, { problem: 'this reference point lies too high', allowed }));
    }
  }
  const a = lonLatAt(json, [...stepAt, 'a', 'coordinates']);
  const b = lonLatAt(json, [...stepAt, 'b', 'coordinates']);
  if (a !== undefined && b !== undefined && a.lonDeg === b.lonDeg && a.latDeg === b.latDeg) {
    const at = [...stepAt, 'b', 'coordinates'];
    issues.push(issue([...base, ...at], valueAt(json, at), { problem: 'the two reference points are one', allowed: `another point than ${formatPath([...base, ...stepAt, 'a'])}` }));
  }
  return issues;
}
