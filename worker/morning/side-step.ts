import type { Services } from '../service-set.ts';

/** A step of the tick that must not keep the others from their work: its failure is written down, and the next tick tries again. */
export async function sideStep(services: Services, step: string, work: () => Promise<unknown>): Promise<void> {
  try {
    await work();
  } catch (error) {
    const fault = error instanceof Error ? error.name : 'unknown';
    console.error(`${step} failed: ${fault}`);
    await services.stores.log.write([{ level: 'error', step, event: 'step-failed', detail: { fault } }], services.clock.nowMs()).catch(() => undefined);
  }
}
