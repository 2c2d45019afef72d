/**
 * MET Norway's Locationforecast 2.0 `complete` as an independent source of surface weather: asked with an identifying
 * User-Agent, four decimals, and no more often than its `Expires` allows. Credit: data from MET Norway, CC BY 4.0.
 */
import { toMetForecast } from './to-forecast.ts';
import { askCached, type SourceCache } from '../caching.ts';
import { chosenHours } from '../hours.ts';
import type { Host } from '../host.ts';
import { oneByOne } from '../one-by-one.ts';
import type { Report, Source, SourceAnswer, SourceRequest } from '../source.ts';
import { fourDecimals, userAgent } from '../who-asks.ts';
import { coversPlace, type PlainSource } from '../../../lib/config/source-order.ts';
import { gridDistanceM } from '../../../lib/forecast/place.ts';
import { failure, success } from '../../../lib/result.ts';
import type { Site } from '../../../lib/site.ts';
import { HOUR_MS, isoUtc } from '../../../lib/time.ts';

/** An answer is about 150 kB. */
const MAX_SITES = 2;

export function createMetNorway(
  entry: PlainSource,
  host: Host,
  { cache, contact, report }: { readonly cache: SourceCache; readonly contact: string | null; readonly report: Report },
): Source {
  async function ask(site: Site, request: SourceRequest): Promise<SourceAnswer> {
    if (!coversPlace(entry, site)) return failure({ kind: 'not-covered' });
    // Without a contact every question would be refused, and rightly.
    if (contact === null) return failure({ kind: 'not-fetched' });
    const answer = await askCached(host, cache, {
      version: 1,
      path: `/weatherapi/locationforecast/2.0/complete?lat=${fourDecimals(site.latDeg)}&lon=${fourDecimals(site.lonDeg)}`,
      headers: { 'user-agent': userAgent(contact) },
      read: toMetForecast,
      freshMs: HOUR_MS / 2,
      keepMs: 24 * HOUR_MS,
    });
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
