import type { DayInput } from '../../lib/brief/day-input.ts';
import type { Forecast } from '../../lib/forecast/conditions.ts';
import { failure, success } from '../../lib/result.ts';
import type { DeskServices, Place } from '../service-set.ts';
import type { FetchOutcome, StoredAnswer } from '../store/forecast.ts';

/** What the sources of a site said about a day, in the order of config, and from where on it is a caution. */
export interface DayAnswers extends Pick<DayInput, 'answers' | 'storedGroundM' | 'demo' | 'thresholds'> {
  /** Tells whether anything has changed since a brief was computed. */
  readonly fingerprint: readonly string[];
}

export async function answersFor(services: DeskServices, place: Place, localDate: string): Promise<DayAnswers> {
  const { stores } = services;
  const stored = new Map((await stores.forecast.answers(place.site.id, localDate)).map((answer) => [answer.source, answer]));
  const storedGroundM = await stores.sourceGround.ofSite(place.site.id);
  const answers = services.sourceNames(place).map(({ id, kind }) => ({ source: id, kind, outcome: read(stored.get(id)) }));
  const fingerprint = [...stored.values()].map(({ source, outcome, finishedAtMs }) => `${source} ${finishedAtMs} ${outcome}`).sort();
  return { answers, storedGroundM, fingerprint, demo: place.demo, thresholds: services.thresholds() };
}

/** Rows are our own, but may be of an older version or cut short: what cannot be read has not been fetched. */
function read(stored: StoredAnswer | undefined): DayInput['answers'][number]['outcome'] {
  if (stored === undefined) return failure({ kind: 'not-fetched' });
  try {
    const outcome = JSON.parse(stored.outcome) as FetchOutcome | { readonly ok: 0 };
    if (outcome.ok === true) return stored.body === null ? failure({ kind: 'not-fetched' }) : success(JSON.parse(stored.body) as Forecast);
    return failure('error' in outcome ? outcome.error : { kind: 'not-fetched' });
  } catch {
    return failure({ kind: 'not-fetched' });
  }
}
