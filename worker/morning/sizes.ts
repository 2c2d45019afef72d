/**
 * How much is done in one invocation. The bounds are those of a free plan: 10 ms of processor time, and fifty calls of
 * fetch, database and queue together.
 */

/** Sites asked of one source at once: their answer stays well under 256 kB. */
export const FETCH_CHUNK = 8;

/** Pairs of one site-day judged at once. */
export const ASSESS_CHUNK = 4;

/** Calls of fetch, database and queue that one invocation may make: those of the free plan, and the most that can be set for another. */
export const FREE_CALLS = 50;
export const PAID_CALLS = 1000;

/** Messages taken at once on the free plan. Those for which the calls of the invocation do not suffice go back. */
export const SEND_CHUNK = 20;

/** The same where more calls may be made: what an invocation costs besides its sends is shared by more of them. */
export function sendChunk(mostCalls: number): number {
  return Math.max(SEND_CHUNK, Math.floor(mostCalls / 10));
}

/** Connections that may be open at once. */
export const SENDS_SIDE_BY_SIDE = 6;
