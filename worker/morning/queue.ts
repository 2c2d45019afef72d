import { confirmStep } from '../security/confirm.ts';
import type { Services } from '../service-set.ts';
import { assessStep } from './assess.ts';
import { deliverStep } from './deliver.ts';
import { fetchStep } from './fetch.ts';
import { parseJob, type Step } from './job.ts';

/** What of a queue message is used. */
export interface Call {
  readonly id: string;
  readonly body: unknown;
  readonly attempts: number;
  ack(): void;
  retry(options?: { delaySeconds?: number }): void;
}

const RETRY_DELAY_S = 30;

function work(services: Services, step: Step): Promise<boolean> {
  switch (step) {
    case 'fetch': return fetchStep(services);
    case 'assess': return assessStep(services);
    // Briefs first: however many sign up, a morning does not wait for them.
    case 'deliver': return deliverStep(services).then(async (wasBusy) => { if (!wasBusy) await confirmStep(services); return wasBusy; });
  }
}

/**
 * Answers wake-up calls. Calls for the same step in one batch are one call; each message is acked or retried by itself,
 * and a call nobody understands is written down and dropped, since there is nothing in it that could be lost.
 */
export async function answerCalls(services: Services, calls: readonly Call[]): Promise<void> {
  const results = new Map<Step, boolean>();
  for (const call of calls) {
    const job = parseJob(call.body);
    if (job === null) {
      await note(services, { event: 'unknown-call', message: call.id, attempts: call.attempts });
      call.ack();
      continue;
    }
    const isDone = results.get(job.step) ?? (await tried(services, job.step, call));
    results.set(job.step, isDone);
    if (isDone) call.ack();
    else call.retry({ delaySeconds: RETRY_DELAY_S });
  }
}

async function tried(services: Services, step: Step, call: Call): Promise<boolean> {
  try {
    await work(services, step);
    return true;
  } catch (error) {
    console.error(`${step} failed: ${error instanceof Error ? error.message : 'unknown'}`);
    await note(services, { event: `${step}-failed`, message: call.id, attempts: call.attempts });
    return false;
  }
}

/** Dead letters: calls that were given up by the queue. Their work still stands in the database and is woken by the sweep. */
export async function recordDeadLetters(services: Services, calls: readonly Call[]): Promise<void> {
  for (const call of calls) {
    await note(services, { event: 'dead-letter', message: call.id, attempts: call.attempts });
    call.ack();
  }
}

/** A log that cannot be written must not turn one fault into two. */
async function note(services: Services, entry: { readonly event: string; readonly message: string; readonly attempts: number }): Promise<void> {
  try {
    const { event, ...detail } = entry;
    await services.stores.log.write([{ level: 'error', step: 'queue', event, detail }], services.clock.nowMs());
  } catch {
    console.error(`${entry.event} could not be logged`);
  }
}
