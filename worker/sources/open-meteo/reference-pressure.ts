/**
 * Sea-level pressure at the two reference points of a site's pressure step, by hour. Pressure reduced to sea level from
 * high ground is not a measurement of anything, so a grid point above 800 m has none.
 */
import { forecastUrl, type Point } from './address.ts';
import { readAnswer, type AnswerLocation } from './read-answer.ts';
import { toMembers, type Ask } from './to-hours.ts';
import type { Host } from '../host.ts';
import { requestWeight } from '../quota.ts';
import type { Conditions } from '../../../lib/forecast/conditions.ts';
import { gridDistanceM, MAX_GRID_DISTANCE_M } from '../../../lib/forecast/place.ts';
import type { Site } from '../../../lib/site.ts';

const HIGHEST_GROUND_M = 800;

/** Pressure in hPa by instant; empty when the point has none. */
type Series = ReadonlyMap<string, number | null>;

const NOTHING: Series = new Map();

export type ReferencePressures = (site: Site, validAt: string) => { readonly a: number | null; readonly b: number | null };

function keyOf(point: Point): string {
  return `${point.latDeg},${point.lonDeg}`;
}

/** Asks once for all points of all sites that the model covers. */
export async function fetchReferencePressures(
  host: Host,
  sites: readonly Site[],
  ask: Ask & { readonly path: '/v1/forecast'; readonly covers: (point: Point) => boolean; readonly headers: Readonly<Record<string, string>> },
): Promise<ReferencePressures> {
  const wanted = sites.flatMap(({ pressureStep }) => (pressureStep === null ? [] : [pressureStep.a, pressureStep.b]));
  const points = [...new Map(wanted.filter(ask.covers).map((point) => [keyOf(point), point])).values()];
  const series = points.length === 0 ? new Map<string, Series>() : await seriesOf(host, points, ask);
  const at = (point: Point, validAt: string) => series.get(keyOf(point))?.get(validAt) ?? null;
  return ({ pressureStep }, validAt) => (pressureStep === null ? { a: null, b: null } : { a: at(pressureStep.a, validAt), b: at(pressureStep.b, validAt) });
}

async function seriesOf(host: Host, points: readonly Point[], ask: Parameters<typeof fetchReferencePressures>[2]): Promise<ReadonlyMap<string, Series>> {
  const pressureOnly: Ask = { ...ask, declares: ['seaLevelPressureHpa'], nearGroundM: [], levelsHpa: [], members: 1 };
  const url = forecastUrl({ ...ask, origin: '', points, variables: ['pressure_msl'] });
  const answer = await host.ask({ path: url, headers: ask.headers, weight: points.length * requestWeight({ variables: 1, members: 1, days: 2 }) });
  const read = answer.ok ? readAnswer(answer.value.json, points.length) : answer;
  if (!read.ok) return new Map();
  return new Map(points.map((point, i) => [keyOf(point), pointSeries(read.value[i], point, pressureOnly)]));
}

function pointSeries(location: AnswerLocation | undefined, point: Point, ask: Ask): Series {
  const isLow = location !== undefined && location.groundM !== null && location.groundM <= HIGHEST_GROUND_M;
  if (!isLow) return NOTHING;
  const distanceM = gridDistanceM(point, { latDeg: location.latDeg ?? NaN, lonDeg: location.lonDeg ?? NaN });
  const members = toMembers(location, ask);
  if (distanceM === null || distanceM > MAX_GRID_DISTANCE_M || !members.ok) return NOTHING;
  return new Map((members.value[0] ?? []).map((hour: Conditions) => [hour.validAt, hour.seaLevelPressureHpa ?? null]));
}
