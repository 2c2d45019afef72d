/**
 * Services that answer for one place at a time: asked in turn, and no longer once the host has shown twice in a row that
 * it does not answer, so that a dead host costs a morning seconds and not its whole list.
 */
import { isOfTheHost } from './breaker.ts';
import type { SourceAnswer } from './source.ts';
import type { SourceFailure } from '../../lib/forecast/failure.ts';
import { failure } from '../../lib/result.ts';
import type { Site } from '../../lib/site.ts';

const FAULTS_TO_STOP = 2;

export async function oneByOne(sites: readonly Site[], ask: (site: Site) => Promise<SourceAnswer>): Promise<ReadonlyMap<string, SourceAnswer>> {
  const answers = new Map<string, SourceAnswer>();
  let faults = 0;
  let lastFault: SourceFailure = { kind: 'unreachable' };
  for (const site of sites) {
    const answer: SourceAnswer = faults < FAULTS_TO_STOP ? await ask(site) : failure(lastFault);
    answers.set(site.id, answer);
    const isFault = !answer.ok && isOfTheHost(answer.error);
    faults = isFault ? faults + 1 : 0;
    if (!answer.ok && isFault) lastFault = answer.error;
    // Told to wait, we wait: the next question would only be refused.
    if (!answer.ok && answer.error.kind === 'rate-limited') faults = FAULTS_TO_STOP;
  }
  return answers;
}
