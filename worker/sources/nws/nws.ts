/**
 * The US National Weather Service's forecast grid as a source: a place leads to a grid cell, which is remembered for a
 * day, and the cell to its layers. Addresses in their answers are not followed, only their three numbers are used.
 * Public domain; no endorsement is implied.
 */
import { toNwsForecast } from './to-forecast.ts';
import { askCached, type SourceCache } from '../caching.ts';
import { chosenHours } from '../hours.ts';
import type { Host } from '../host.ts';
import { oneByOne } from '../one-by-one.ts';
import type { Report, Source, SourceAnswer, SourceRequest } from '../source.ts';
import { fieldOf } from '../values.ts';
import { fourDecimals, userAgent } from '../who-asks.ts';
import { coversPlace, type PlainSource } from '../../../lib/config/source-order.ts';
import type { SourceFailure } from '../../../lib/forecast/failure.ts';
import { gridDistanceM } from '../../../lib/forecast/place.ts';
import { failure, success, type Result } from '../../../lib/result.ts';
import type { Site } from '../../../lib/site.ts';
import { HOUR_MS, isoUtc } from '../../../lib/time.ts';

/** An answer is about 130 kB. */
const MAX_SITES = 2;
const DAY_MS = 24 * HOUR_MS;

export function createNws(
  entry: PlainSource,
  host: Host,
  { cache, contact, report }: { readonly cache: SourceCache; readonly contact: string | null; readonly report: Report },
): Source {
  async function ask(site: Site, request: SourceRequest): Promise<SourceAnswer> {
    if (!coversPlace(entry, site)) return failure({ kind: 'not-covered' });
    if (contact === null) return failure({ kind: 'not-fetched' });
    const headers = { 'user-agent': userAgent(contact) };
    const point = await askCached(host, cache, {
      version: 1,
      path: `/points/${fourDecimals(site.latDeg)},${fourDecimals(site.lonDeg)}`,
      headers,
      read: toGridPath,
      freshMs: DAY_MS,
      keepMs: DAY_MS,
    });
    if (!point.ok) return point.error.kind === 'refused' && point.error.status === 404 ? failure({ kind: 'not-covered' }) : point;
    const answer = await askCached(host, cache, { version: 1, path: point.value.value, headers, read: toNwsForecast, freshMs: HOUR_MS / 2, keepMs: 24 * HOUR_MS });
    if (!answer.ok) return answer;
    if (answer.value.isDeprecated) report({ source: entry.id, notice: 'deprecated' });
    const { runAt, latDeg, lonDeg, hours } = answer.value.value;
    const distanceM = gridDistanceM(site, { latDeg: latDeg ?? NaN, lonDeg: lonDeg ?? NaN });
    if (distanceM === null) return failure({ kind: 'shape', path: '$.geometry.coordinates' });
    const chosen = chosenHours(hours, { ...request, declares: entry.declares });
    if (!chosen.ok) return chosen;
    return success({
      source: entry.id,
      kind: 'deterministic',
      runAt,
      fetchedAt: isoUtc(answer.value.fetchedMs),
      declares: entry.declares,
      members: [chosen.value],
      gridDistanceM: distanceM,
      demo: false,
      trustedWithoutRunTime: entry.trustWithoutRunTime && runAt === null,
    });
  }

  return {
    id: entry.id,
    kind: entry.kind,
    maxSites: MAX_SITES,
    covers: (place) => coversPlace(entry, place),
    fetch: (request) => oneByOne(request.sites, (site) => ask(site, request)),
  };
}

/** Office and cell of a place, put together anew. */
function toGridPath(json: unknown): Result<string, SourceFailure> {
  const properties = fieldOf(json, 'properties');
  const [office, x, y] = ['gridId', 'gridX', 'gridY'].map((name) => String(fieldOf(properties, name)));
  const isCell = /^[A-Z]{3}$/.test(office ?? '') && /^\d{1,4}$/.test(x ?? '') && /^\d{1,4}$/.test(y ?? '');
  return isCell ? success(`/gridpoints/${office}/${x},${y}`) : failure({ kind: 'shape', path: '$.properties.gridId' });
}
