/**
 * What a queue carries: a wake-up call and nothing else. What there is to do stands in the database, so a call that is
 * lost, repeated or days late does no harm.
 */
export const STEPS = ['fetch', 'assess', 'deliver'] as const;

export type Step = (typeof STEPS)[number];

export type Job = { readonly v: 1; readonly step: 'fetch' } | { readonly v: 1; readonly step: 'assess' } | { readonly v: 1; readonly step: 'deliver' };

export function jobFor(step: Step): Job {
  return { v: 1, step };
}

/** null for whatever this version does not know. */
export function parseJob(body: unknown): Job | null {
  if (typeof body !== 'object' || body === null) return null;
  const { v, step } = body as { readonly v?: unknown; readonly step?: unknown };
  const known = STEPS.find((name) => name === step);
  return v === 1 && known !== undefined ? jobFor(known) : null;
}
