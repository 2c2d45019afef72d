import { inTime } from './in-time.ts';
import { jobFor, type Job, type Step } from './morning/job.ts';

/** A batch may hold a hundred messages; no step is ever worth that many calls at once. */
const MOST = 50;

/**
 * Sends wake-up calls, and neither fails nor waits for long: the work stands in the database, and the sweep of the next
 * minute calls again.
 */
export function waker(queues: Readonly<Record<Step, Pick<Queue<Job>, 'sendBatch'>>>, timeoutMs: number): (step: Step, calls: number) => Promise<void> {
  return async (step, calls) => {
    const count = Math.min(MOST, calls);
    if (count <= 0) return;
    try {
      await inTime(queues[step].sendBatch(Array.from({ length: count }, () => ({ body: jobFor(step) }))), timeoutMs, 'the queue');
    } catch {
      console.error(`a wake-up call for ${step} could not be sent; the sweep will call again`);
    }
  };
}
