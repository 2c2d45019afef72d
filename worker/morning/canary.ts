import { failureSentence } from '../../lib/brief/words/index.ts';
import type { SourceFailure } from '../../lib/forecast/failure.ts';
import { checkFrame } from '../../lib/forecast/frame.ts';
import { HOUR_MS, isoUtc } from '../../lib/time.ts';
import type { Place, Services } from '../service-set.ts';
import type { Source } from '../sources/source.ts';
import { instantsAround, judgedDate } from './times.ts';

const WEEK_MS = 7 * 24 * HOUR_MS;
/** Weeks begin on Wednesday at noon UTC: time began on a Thursday, and at noon nobody waits for a brief. */
const BEGINS_MS = 12 * HOUR_MS;

/** Reading a site costs processor time of the tick, and twenty show every region of a club. */
const MOST_SITES = 20;

/** How a source that stands by did when it was last tried. */
export interface Tried {
  readonly week: number;
  readonly atMs: number;
  readonly failed: SourceFailure | null;
}

interface Canaries {
  /** The last week in which every one was tried. */
  readonly doneWeek: number;
  readonly tried: Readonly<Record<string, Tried>>;
}

/** As kept under the meta key `canary`; what cannot be read has not been tried. */
function readCanaries(text: string | undefined): Canaries {
  try {
    const found = JSON.parse(text ?? '') as Partial<Canaries>;
    if (typeof found.doneWeek === 'number' && typeof found.tried === 'object') return { doneWeek: found.doneWeek, tried: found.tried };
  } catch {
    // Nothing is kept before the first week.
  }
  return { doneWeek: -1, tried: {} };
}

/**
 * Once a week each source that stands by behind those a site asks every morning is asked for one of its sites, so that one
 * that has broken is known before it is needed: moved up, or left over when others end. In a minute without other work, one
 * source a minute. One that asks for a pause is tried again in a later minute.
 */
export async function tryCanary(services: Services, nowMs: number, kept: string | undefined): Promise<void> {
  const { stores } = services;
  const { doneWeek, tried } = readCanaries(kept);
  const week = Math.floor((nowMs + BEGINS_MS) / WEEK_MS);
  if (doneWeek === week) return;
  const { fetch, assess } = await stores.run.openCounts();
  if (fetch + assess > 0) return;
  const standBys = await standBysOf(services);
  const next = [...standBys].find(([id]) => tried[id]?.week !== week);
  const now: Record<string, Tried> = Object.fromEntries(Object.entries(tried).filter(([id]) => standBys.has(id)));
  if (next !== undefined) {
    const [id, { source, place }] = next;
    const failed = await failureOf(source, place, nowMs);
    if (failed?.kind === 'rate-limited' || failed?.kind === 'breaker-open') return;
    now[id] = { week, atMs: nowMs, failed };
    if (failed !== null) await stores.log.write([{ level: 'warning', step: 'canary', event: 'stand-by-failed', detail: { source: id, kind: failed.kind } }], nowMs);
  }
  const isDone = [...standBys.keys()].every((id) => now[id]?.week === week);
  await stores.meta.set('canary', JSON.stringify({ doneWeek: isDone ? week : doneWeek, tried: now } satisfies Canaries));
}

/** Each with the first site that it stands by for. */
async function standBysOf(services: Services): Promise<ReadonlyMap<string, { readonly source: Source; readonly place: Place }>> {
  const found = new Map<string, { source: Source; place: Place }>();
  for (const row of (await services.stores.site.all()).slice(0, MOST_SITES)) {
    const place = services.read.site(row);
    for (const source of place.ok ? services.standBysFor(place.value) : []) {
      if (place.ok && !found.has(source.id)) found.set(source.id, { source, place: place.value });
    }
  }
  return found;
}

/** Asked as in a morning and checked as in a morning: null when it would have had a vote. */
async function failureOf(source: Source, { site }: Place, nowMs: number): Promise<SourceFailure | null> {
  const { fromMs, toMs } = instantsAround(site, judgedDate(site, nowMs));
  const answers = await source.fetch({ sites: [site], fromUtc: isoUtc(fromMs), toUtc: isoUtc(toMs) });
  const answer = answers.get(site.id);
  if (answer === undefined) return { kind: 'not-covered' };
  const frame = answer.ok ? checkFrame(answer.value, { now: isoUtc(nowMs), site, storedGroundM: {}, judgedInstants: [] }) : answer;
  return frame.ok ? null : frame.error;
}

/** For whoever looks: every source that stands by, when it was last tried, and what was wrong with it. */
export function canaryNotes(kept: string | undefined): { readonly source: string; readonly triedAt: string; readonly wrong: string | null }[] {
  return Object.entries(readCanaries(kept).tried).map(([source, { atMs, failed }]) => ({
    source, triedAt: new Date(atMs).toISOString(), wrong: failed === null ? null : failureSentence(failed),
  }));
}
