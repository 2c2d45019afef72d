/**
 * MET Norway's Locationforecast 2.0 `complete` as an independent source of surface weather: asked with an identifying
 * User-Agent, four decimals, and no more often than its `Expires` allows. Credit: data from MET Norway, CC BY 4.0.
 */
import { toMetForecast } from './to-forecast.ts';
import { askCached } from '../caching.ts';
import type { Host } from '../host.ts';
import { oneByOneSource, type OneByOneWorld } from '../one-by-one.ts';
import type { Source } from '../source.ts';
import { fourDecimals } from '../who-asks.ts';
import type { PlainSource } from '../../../lib/config/source-order.ts';
import { HOUR_MS } from '../../../lib/time.ts';

/** An answer is about 150 kB. */
const MAX_SITES = 2;

export function createMetNorway(entry: PlainSource, host: Host, world: OneByOneWorld): Source {
  return oneByOneSource(entry, world, {
    maxSites: MAX_SITES,
    origin: host.origin,
    askPlace: (site, headers) => askCached(host, world.cache, {
      version: 2,
      path: `/weatherapi/locationforecast/2.0/complete?lat=${fourDecimals(site.latDeg)}&lon=${fourDecimals(site.lonDeg)}`,
      headers,
      read: (json) => toMetForecast(json, host.now()),
      freshMs: HOUR_MS / 2,
      keepMs: 24 * HOUR_MS,
    }),
  });
}
