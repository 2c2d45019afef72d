import { MAX_GROUND_CHANGE_M } from '../../lib/forecast/place.ts';
import { isoUtc } from '../../lib/time.ts';
import { failure } from '../../lib/result.ts';
import type { Place, Services } from '../service-set.ts';
import { traceOf } from '../say.ts';
import type { Source, SourceAnswer } from '../sources/source.ts';
import type { FetchRun } from '../store/run-work.ts';
import { endedFetch, failureEntries, groundEntry } from './fetch-ended.ts';
import { placesOf } from './places.ts';
import { ASSESS_CHUNK, FETCH_CHUNK } from './sizes.ts';
import { instantsAround, LEASE_MS } from './times.ts';

/**
 * Second step: takes open fetches of one source, asks it once for all their sites, and stores what it said, forecast or
 * failure. A source is asked once a morning, and once more when it asked for a pause that ends in time; whether its
 * silence matters is decided by whoever judges. True when there was something to do.
 */
export async function fetchStep(services: Services): Promise<boolean> {
  const { stores, clock } = services;
  const claimed = await stores.runWork.claimFetches({ nowMs: clock.nowMs(), leaseMs: LEASE_MS, by: services.ids.next(), limit: FETCH_CHUNK });
  if (claimed.length === 0) return false;
  const places = await placesOf(services, claimed.map((run) => run.siteId));
  const asked = claimed.flatMap((run) => askedAbout(services, run, places));
  const maxSites = Math.min(FETCH_CHUNK, ...asked.map(({ source }) => source.maxSites ?? FETCH_CHUNK));
  const runs = claimed.slice(0, maxSites);
  const surplus = stores.runWork.release(claimed.slice(maxSites).map((run) => run.key));
  const answers = await answersOf(services, asked.filter(({ run }) => runs.includes(run)));
  const nowMs = clock.nowMs();
  const given = [...answers].flatMap(([siteId, answer]) => (answer.ok ? [{ siteId, forecast: answer.value }] : []));
  const grounds = given.flatMap(({ siteId, forecast }) => groundOf(forecast.members).map((groundM) => ({ siteId, source: forecast.source, groundM })));
  await stores.db.together([
    surplus,
    ...stores.forecast.put(given, nowMs),
    stores.sourceGround.keep(grounds, MAX_GROUND_CHANGE_M, nowMs),
    stores.runWork.finishFetches(runs.map((run) => endedFetch(run, answers.get(run.siteId), nowMs)), nowMs),
    ...behindOf(services, asked, answers).map((sources) => stores.runWork.putBehind(sources, nowMs)),
    stores.meta.setting('last-fetch', String(nowMs)),
  ]);
  sayFetched(services, runs, answers);
  const moved = grounds.length === 0 ? [] : await stores.sourceGround.moved(grounds, MAX_GROUND_CHANGE_M);
  await stores.log.write([...failureEntries(runs[0]?.source ?? '', answers), ...moved.map(groundEntry)], nowMs);
  const ready = await stores.run.ready(nowMs, ASSESS_CHUNK, runs.map((run) => run.siteId));
  await services.wake('assess', ready.assessJobs);
  if (ready.fetch > 0 || claimed.length > runs.length) await services.wake('fetch', 1);
  return true;
}

/** A line a kind of answer, however many sites it is about. */
function sayFetched(services: Services, runs: readonly FetchRun[], answers: ReadonlyMap<string, SourceAnswer>): void {
  const kinds = Map.groupBy(runs, ({ siteId }) => { const answer = answers.get(siteId); return answer === undefined ? 'not asked' : answer.ok ? 'stored' : answer.error.kind; });
  for (const [event, some] of kinds) services.say({ step: 'fetch', event, trace: some.map(traceOf), detail: { source: some[0]?.source ?? '' } });
}

interface Asked {
  readonly run: FetchRun;
  readonly place: Place;
  readonly source: Source;
}

/** Nothing where the site or the source is gone since the fetch was wanted. */
function askedAbout(services: Services, run: FetchRun, places: ReadonlyMap<string, Place>): Asked[] {
  const place = places.get(run.siteId);
  const source = place === undefined ? undefined : services.sourcesFor(place).find((candidate) => candidate.id === run.source);
  return place === undefined || source === undefined ? [] : [{ run, place, source }];
}

async function answersOf(services: Services, asked: readonly Asked[]): Promise<ReadonlyMap<string, SourceAnswer>> {
  const [first] = asked;
  if (first === undefined) return new Map();
  const instants = asked.map(({ place, run }) => instantsAround(place.site, run.localDate));
  try {
    return await askedOf(first.source, asked.map(({ place }) => place), {
      fromMs: Math.min(...instants.map(({ fromMs }) => fromMs)),
      toMs: Math.max(...instants.map(({ toMs }) => toMs)),
    });
  } catch {
    // A source that throws has a fault of ours; for the morning it is a source without an answer.
    await services.stores.log.write([{ level: 'error', step: 'fetch', event: 'source-threw', detail: { source: first.source.id } }], services.clock.nowMs());
    return new Map(asked.map(({ place }) => [place.site.id, failure({ kind: 'unreachable' })]));
  }
}

function askedOf(source: Source, places: readonly Place[], { fromMs, toMs }: { fromMs: number; toMs: number }): Promise<ReadonlyMap<string, SourceAnswer>> {
  return source.fetch({ sites: places.map(({ site }) => site), fromUtc: isoUtc(fromMs), toUtc: isoUtc(toMs) });
}

/** After a hang: all sources of that host, so that the others have their turn before the time is up. */
function behindOf(services: Services, asked: readonly Asked[], answers: ReadonlyMap<string, SourceAnswer>): string[][] {
  const [first] = asked;
  const hasHung = [...answers.values()].some((answer) => !answer.ok && answer.error.kind === 'timeout');
  if (first === undefined || !hasHung) return [];
  const sources = asked.flatMap(({ place }) => services.sourcesFor(place)).filter(({ id, host }) => id === first.source.id || (host !== undefined && host === first.source.host));
  return [[...new Set(sources.map(({ id }) => id))]];
}

/** The model's ground, from the first hour that has it. */
function groundOf(members: readonly (readonly { readonly gridElevationM: number }[])[]): number[] {
  const groundM = members[0]?.[0]?.gridElevationM;
  return groundM !== undefined && Number.isFinite(groundM) ? [groundM] : [];
}
