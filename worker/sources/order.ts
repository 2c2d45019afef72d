/**
 * Which sources are asked about a place, in which order: config/sources.json turned into sources that can be asked. A
 * model without a mixed-layer depth of its own is followed by a companion, a source of its own name that gives nothing
 * else; so a working can say whose depth it used.
 */
import { memoryCache, type SourceCache } from './caching.ts';
import { createHost, type BreakerStore, type Host, type SharedQuota } from './host.ts';
import { createMetNorway } from './met-norway/met-norway.ts';
import { createNws } from './nws/nws.ts';
import { originWithKey } from './open-meteo/address.ts';
import { createOpenMeteo } from './open-meteo/open-meteo.ts';
import { FREE_QUOTA, schedule } from './quota.ts';
import type { Outside } from './safe-fetch.ts';
import type { Report, Source } from './source.ts';
import { sourcesFor, standBysFor, type OpenMeteoSource, type SourceEntry, type SourceOrder } from '../../lib/config/source-order.ts';

export interface SourceSettings {
  readonly openMeteoUrl: string;
  readonly openMeteoEnsembleUrl: string;
  readonly metNorwayUrl: string;
  readonly nwsUrl: string;
  readonly openMeteoKey: string | null;
  readonly contact: string | null;
}

export interface SourceWorld extends Outside {
  readonly cache: SourceCache;
  readonly breakers: BreakerStore;
  readonly report?: Report;
}

/** `standBy`: instead of the sources that are asked for a place, those behind them. */
export type SourcesFor = (place: { readonly latDeg: number; readonly lonDeg: number }, which?: 'asked' | 'standBy') => readonly Source[];

/** The real services, for one invocation. */
export function liveSources(order: SourceOrder, settings: SourceSettings, world: SourceWorld): SourcesFor {
  const hosts = new Map<string, Host>();
  const hostAt = (origin: string): Host => {
    const host = hosts.get(origin) ?? createHost(origin, world, quotaOf(origin));
    hosts.set(origin, host);
    return host;
  };
  const known = new Map<string, Source>();
  const sourceOf = (entry: SourceEntry): Source => {
    const source = known.get(entry.id) ?? created(entry);
    known.set(entry.id, source);
    return source;
  };
  const created = (entry: SourceEntry): Source => {
    const { cache, report = () => undefined } = world;
    const { openMeteoKey, contact } = settings;
    switch (entry.provider) {
      case 'open-meteo': {
        const origin = entry.kind === 'ensemble' ? settings.openMeteoEnsembleUrl : settings.openMeteoUrl;
        return createOpenMeteo(entry, hostAt(originWithKey(origin, openMeteoKey)), openMeteoKey);
      }
      case 'met-norway':
        return createMetNorway(entry, hostAt(settings.metNorwayUrl), { cache, contact, report });
      case 'nws':
        return createNws(entry, hostAt(settings.nwsUrl), { cache, contact, report });
    }
  };
  return (place, which = 'asked') => {
    const entries = which === 'asked' ? sourcesFor(order, place) : standBysFor(order, place);
    return withCompanions(entries).filter((entry) => which === 'asked' || entries.some(({ id }) => id === entry.id)).map(sourceOf);
  };
}

/** The free addresses of the Open-Meteo interface count what they are asked; an own server or one for customers does not. */
function quotaOf(origin: string): SharedQuota | null {
  return /^https:\/\/(?:ensemble-)?api\.open-meteo\.com$/.test(origin) ? { name: 'quota:open-meteo', quota: FREE_QUOTA } : null;
}

/** How long questions of these weights take from now on, one after the other, each where the free quota has room for it. */
export function takesMs(weights: readonly number[], nowMs: number): number {
  const gapMs = 2000;
  const planned = schedule(weights.map((weight) => ({ weight })), { fromMs: nowMs, quota: FREE_QUOTA, gapMs });
  return (planned.at(-1)?.atMs ?? nowMs - gapMs) + gapMs - nowMs;
}

/** The entries to ask, the companions behind the last deterministic one that needs them. */
export function withCompanions(entries: readonly SourceEntry[]): SourceEntry[] {
  const companions = new Map<string, SourceEntry>();
  for (const entry of entries) {
    const companion = companionOf(entry);
    if (companion !== null) companions.set(companion.id, companion);
  }
  const asked = entries.map((entry): SourceEntry => (companionOf(entry) === null ? entry : { ...entry, declares: entry.declares.filter((field) => field !== 'mixedLayerM') }));
  const isEnsemble = (entry: SourceEntry) => entry.kind === 'ensemble';
  return [...asked.filter((entry) => !isEnsemble(entry)), ...companions.values(), ...asked.filter(isEnsemble)];
}

function companionOf(entry: SourceEntry): OpenMeteoSource | null {
  if (entry.provider !== 'open-meteo' || entry.mixedLayerFrom === null) return null;
  const { model, runTimeNames } = entry.mixedLayerFrom;
  return {
    ...entry, id: `open-meteo-mixed-layer:${model}`, kind: 'deterministic', regions: [], declares: ['mixedLayerM'], model, runTimeNames,
    nearGroundM: [], levelsHpa: [], members: 1, stepHours: 1, mayGive: [], mixedLayerFrom: null,
  };
}

/** For commands and tests that keep nothing between runs. */
export function forgetful(): Pick<SourceWorld, 'cache' | 'breakers'> {
  const bodies = new Map<string, string>();
  return {
    cache: memoryCache(),
    breakers: {
      get: (host) => Promise.resolve(bodies.get(host) ?? null),
      put: (host, body) => {
        bodies.set(host, body);
        return Promise.resolve();
      },
    },
  };
}
