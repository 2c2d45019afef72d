import type { Services } from '../service-set.ts';

/**
 * "No brief today": a brief that cannot be made - the judge is not trusted, or the deadline has passed and nobody put it
 * into words - is ended with the reason, and the reason is sent in its place. Mornings that no tick came for are owned up
 * to by the first tick that does (due.ts).
 */
export async function planAbsent(services: Services, nowMs: number, isJudgeBlocked: boolean): Promise<void> {
  const { stores } = services;
  const changed = await stores.db.together([
    ...(isJudgeBlocked ? stores.absence.endUnmade(nowMs, 'self-check') : []),
    ...stores.absence.endUnmade(nowMs, 'not-made'),
    stores.meta.setting('last-absent', String(nowMs)),
  ]);
  const planned = (isJudgeBlocked ? (changed[0] ?? 0) : 0) + (changed.at(-3) ?? 0);
  if (planned > 0) {
    await stores.log.write([{ level: 'error', step: 'absent', event: 'no-brief', detail: { messages: planned, reason: isJudgeBlocked ? 'self-check' : 'not-made' } }], nowMs);
  }
}
