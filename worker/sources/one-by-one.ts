/**
 * Services that answer for one place at a time and want to know who asks: their places are asked in turn, and no longer
 * once the host has shown that it does not answer, so that a dead host costs a morning seconds and not its whole list.
 */
import type { CachedAnswer, SourceCache } from './caching.ts';
import { chosenHours } from './hours.ts';
import type { Report, Source, SourceAnswer, SourceRequest } from './source.ts';
import { userAgent } from './who-asks.ts';
import { coversPlace, type PlainSource } from '../../lib/config/source-order.ts';
import type { Conditions } from '../../lib/forecast/conditions.ts';
import { isOfTheHost, type SourceFailure } from '../../lib/forecast/failure.ts';
import { gridDistanceM } from '../../lib/forecast/place.ts';
import { failure, success, type Result } from '../../lib/result.ts';
import type { Site } from '../../lib/site.ts';
import { isoUtc } from '../../lib/time.ts';

/** What is kept of such an answer: every hour it has, and where and when it is from. */
export interface PlaceForecast {
  readonly runAt: string | null;
  readonly latDeg: number | null;
  readonly lonDeg: number | null;
  readonly hours: readonly Conditions[];
}

export interface OneByOneWorld {
  readonly cache: SourceCache;
  /** null: nobody says who asks, so that every question would be refused, and rightly. */
  readonly contact: string | null;
  readonly report: Report;
}

type AskPlace = (site: Site, headers: Readonly<Record<string, string>>) => Promise<Result<CachedAnswer<PlaceForecast>, SourceFailure>>;

/** A source that is asked by `askPlace`. `maxSites`: its answers are so long that more would not fit into one message. */
export function oneByOneSource(entry: PlainSource, { contact, report }: OneByOneWorld, given: { readonly maxSites: number; readonly origin: string; readonly askPlace: AskPlace }): Source {
  async function ask(site: Site, request: SourceRequest): Promise<SourceAnswer> {
    if (!coversPlace(entry, site)) return failure({ kind: 'not-covered' });
    if (contact === null) return failure({ kind: 'not-fetched' });
    const answer = await given.askPlace(site, { 'user-agent': userAgent(contact) });
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
    host: given.origin,
    maxSites: given.maxSites,
    covers: (place) => coversPlace(entry, place),
    fetch: (request) => oneByOne(request.sites, (site) => ask(site, request)),
  };
}

const FAULTS_TO_STOP = 2;

async function oneByOne(sites: readonly Site[], ask: (site: Site) => Promise<SourceAnswer>): Promise<ReadonlyMap<string, SourceAnswer>> {
  const answers = new Map<string, SourceAnswer>();
  let faults = 0;
  let lastFault: SourceFailure = { kind: 'unreachable' };
  for (const site of sites) {
    const answer: SourceAnswer = faults < FAULTS_TO_STOP ? await ask(site) : failure(lastFault);
    answers.set(site.id, answer);
    const isFault = !answer.ok && isOfTheHost(answer.error);
    faults = isFault ? faults + 1 : 0;
    if (!answer.ok && isFault) lastFault = answer.error;
    // Told to wait, we wait: the next question would only be refused. And one hang has cost all the time there is for a source.
    if (!answer.ok && (answer.error.kind === 'rate-limited' || answer.error.kind === 'timeout')) faults = FAULTS_TO_STOP;
  }
  return answers;
}
