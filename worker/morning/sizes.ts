/**
 * How much is done in one invocation. The bounds are those of a free plan: 10 ms of processor time, and fifty calls of
 * fetch, database and queue together.
 */

/** Sites asked of one source at once: their answer stays well under 256 kB. */
export const FETCH_CHUNK = 8;

/** Pairs of one site-day judged at once. */
export const ASSESS_CHUNK = 4;

/** Calls of fetch, database and queue that one invocation may make. */
export const MOST_CALLS = 50;

/** Messages taken at once. Those for which the calls of the invocation do not suffice go back. */
export const SEND_CHUNK = 20;

/** Connections that may be open at once. */
export const SENDS_SIDE_BY_SIDE = 6;
