/**
 * A site from its GeoJSON Feature. Headings given as magnetic are turned to true here, once, and nowhere else; track and
 * distance come from the two points where they are not given. Every problem is reported at once.
 */
import { normalDeg } from '../angles.ts';
import { geodesicBetween } from '../numeric/geodesic.ts';
import { failure, success, type Issue, type Result } from '../result.ts';
import type { LaunchSite, PlaceM, ReferencePoint, Site, StripSite } from '../site.ts';
import { declinationDeg } from '../sky/declination.ts';
import { check, issue, issuesIn } from './check.ts';
import { numberAt, valueAt, type Path } from './path.ts';
import { lonLatAt, siteIssues } from './site-checks.ts';
import { launchSchema, stripSchema, type LaunchFeature, type StripFeature } from './site-schema.ts';

export interface SiteContext {
  /** The instant of the import, epoch ms UTC: magnetic north moves. */
  readonly nowMs: number;
}

export function parseSiteFeature(json: unknown, context: SiteContext, path: Path = []): Result<Site, Issue[]> {
  const declination = declinationOf(json, context, path);
  const isStrip = valueAt(json, ['properties', 'kind']) === 'strip';
  const shape = isStrip ? check(stripSchema(), json, path) : check(launchSchema(), withAnyKind(json), path);
  const issues = [...kindIssues(json, path), ...issuesIn(shape), ...siteIssues(json, path), ...issuesIn(declination)];
  if (!shape.ok || !declination.ok || issues.length > 0) return failure(issues);
  return success(isStrip ? strip(shape.value as StripFeature, declination.value) : launch(shape.value as LaunchFeature, declination.value));
}

/** A kind that is neither word is said once, by kindIssues; the other fields are then read as those of a launch. */
function withAnyKind(json: unknown): unknown {
  const properties = valueAt(json, ['properties']);
  if (typeof json !== 'object' || json === null || typeof properties !== 'object' || properties === null || Array.isArray(properties)) return json;
  return { ...json, properties: { ...properties, kind: 'launch' } };
}

function kindIssues(json: unknown, path: Path): Issue[] {
  const at = ['properties', 'kind'];
  const kind = valueAt(json, at);
  const isObject = typeof valueAt(json, ['properties']) === 'object' && valueAt(json, ['properties']) !== null;
  if (!isObject || kind === 'launch' || kind === 'strip') return [];
  const problem = kind === undefined ? 'this is missing' : 'not one of the words allowed here';
  return [issue([...path, ...at], kind, { problem, allowed: '"launch", "strip"' })];
}

/** Degrees to add to the given heading: 0 unless it is magnetic, to a hundredth. */
function declinationOf(json: unknown, { nowMs }: SiteContext, path: Path): Result<number, Issue[]> {
  const at = ['properties', 'headingReference'];
  const place = lonLatAt(json, ['geometry', 'coordinates']);
  if (valueAt(json, at) !== 'magnetic' || place === undefined) return success(0);
  const elevationM = numberAt(json, ['geometry', 'coordinates', 2]) ?? 0;
  const found = declinationDeg({ ...place, elevationM, atMs: nowMs });
  if (found.ok) return success(Math.round(found.value * 100) / 100);
  const problem = `a magnetic heading cannot be turned to true: ${found.error.reason}`;
  return failure([issue([...path, ...at], 'magnetic', { problem, allowed: '"true", with the heading from true north' })]);
}

function place([lonDeg, latDeg, elevationM]: readonly [number, number, number]): PlaceM {
  return { lonDeg, latDeg, elevationM };
}

function referencePoint(point: { readonly name: string; readonly coordinates: readonly [number, number, (number | undefined)?] }): ReferencePoint {
  return { name: point.name, lonDeg: point.coordinates[0], latDeg: point.coordinates[1] };
}

function common({ id, geometry, properties }: LaunchFeature | StripFeature, declination: number) {
  const { pressureStep } = properties;
  return {
    id,
    ...place(geometry.coordinates),
    name: properties.name,
    timeZone: properties.timeZone,
    daylight: properties.daylight,
    sectors: properties.sectors.map((sector) => ({ ...sector, fromDeg: normalDeg(sector.fromDeg), toDeg: normalDeg(sector.toDeg) })),
    localWind: properties.localWind.map((wind) => ({ ...wind, fromDeg: normalDeg(wind.fromDeg) })),
    pressureStep: pressureStep ? { a: referencePoint(pressureStep.a), b: referencePoint(pressureStep.b) } : null,
    localRules: properties.localRules,
    notes: properties.notes,
    declinationDeg: declination,
  };
}

function launch(feature: LaunchFeature, declination: number): LaunchSite {
  const { properties } = feature;
  const shared = common(feature, declination);
  const landing = { ...place(properties.landing.coordinates), roughnessM: properties.landing.roughnessM };
  const line = geodesicBetween(shared, landing);
  return {
    ...shared,
    kind: 'launch',
    facingDeg: normalDeg(properties.facingDeg + declination),
    slopeDeg: properties.slopeDeg,
    hill: properties.hill,
    summitElevationM: properties.summitElevationM ?? null,
    landing,
    trackDeg: normalDeg(properties.trackDeg ?? line.trackDeg),
    distanceM: properties.distanceM ?? line.distanceM,
  };
}

function strip(feature: StripFeature, declination: number): StripSite {
  const { properties } = feature;
  return {
    ...common(feature, declination),
    kind: 'strip',
    headingDeg: normalDeg(properties.headingDeg + declination),
    usableBothWays: properties.usableBothWays,
    lineLengthM: properties.lineLengthM,
    roughnessM: properties.roughnessM,
    lineTensionRatio: properties.lineTensionRatio,
    releaseAngleDeg: properties.releaseAngleDeg,
    lineClearM: properties.lineClearM ?? null,
  };
}
