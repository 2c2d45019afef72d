/**
 * The US National Weather Service's forecast grid as a source: a place leads to a grid cell, which is remembered for a
 * day, and the cell to its layers. Addresses in their answers are not followed, only their three numbers are used.
 * Public domain; no endorsement is implied.
 */
import { toNwsForecast } from './to-forecast.ts';
import { askCached } from '../caching.ts';
import type { Host } from '../host.ts';
import { oneByOneSource, type OneByOneWorld } from '../one-by-one.ts';
import type { Source } from '../source.ts';
import { fieldOf } from '../values.ts';
import { fourDecimals } from '../who-asks.ts';
import type { PlainSource } from '../../../lib/config/source-order.ts';
import type { SourceFailure } from '../../../lib/forecast/failure.ts';
import { failure, success, type Result } from '../../../lib/result.ts';
import { HOUR_MS } from '../../../lib/time.ts';

/** An answer is about 130 kB. */
const MAX_SITES = 2;
const DAY_MS = 24 * HOUR_MS;

export function createNws(entry: PlainSource, host: Host, world: OneByOneWorld): Source {
  return oneByOneSource(entry, world, {
    maxSites: MAX_SITES,
    origin: host.origin,
    askPlace: async (site, headers) => {
      const cell = await askCached(host, world.cache, {
        version: 1, path: `/points/${fourDecimals(site.latDeg)},${fourDecimals(site.lonDeg)}`, headers, read: toGridPath, freshMs: DAY_MS, keepMs: DAY_MS,
      });
      if (!cell.ok) return cell.error.kind === 'refused' && cell.error.status === 404 ? failure({ kind: 'not-covered' }) : cell;
      return askCached(host, world.cache, { version: 1, path: cell.value.value, headers, read: toNwsForecast, freshMs: HOUR_MS / 2, keepMs: DAY_MS });
    },
  });
}

/** Office and cell of a place, put together anew. */
function toGridPath(json: unknown): Result<string, SourceFailure> {
  const properties = fieldOf(json, 'properties');
  const [office, x, y] = ['gridId', 'gridX', 'gridY'].map((name) => String(fieldOf(properties, name)));
  const isCell = /^[A-Z]{3}$/.test(office ?? '') && /^\d{1,4}$/.test(x ?? '') && /^\d{1,4}$/.test(y ?? '');
  return isCell ? success(`/gridpoints/${office}/${x},${y}`) : failure({ kind: 'shape', path: '$.properties.gridId' });
}
