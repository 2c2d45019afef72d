/**
 * The one way out to a forecast service: configured origins only, no redirects, JSON by content type, 2 MB after unpacking,
 * 10 s for everything, two tries within them. What went wrong comes back as a tagged failure without a word of theirs;
 * whatever the platform throws, for whatever reason it gives, means that the service could not be reached.
 */
import { httpDateMs, isJsonType, retryAfterS } from './answer-headers.ts';
import { before, deadlineIn, PASSED, type Deadline } from './deadline.ts';
import { readBody } from './read-body.ts';
import { readJson } from './read-json.ts';
import { isAllowedUrl } from './web-rules.ts';
import type { SourceFailure } from '../../lib/forecast/failure.ts';
import { failure, success, type Result } from '../../lib/result.ts';

export interface Bounds {
  readonly totalMs: number;
  /** Within which the first try must have its headers; the second may use all that is left. */
  readonly firstTryMs: number;
  readonly maxBytes: number;
}

export const BOUNDS: Bounds = { totalMs: 10_000, firstTryMs: 3000, maxBytes: 2_000_000 };

/** What safeFetch needs of the world. */
export interface Outside {
  readonly fetch: (url: string, init: RequestInit) => Promise<Response>;
  readonly now: () => number;
  /** LOCAL=1: plain http to this machine is allowed. */
  readonly local: boolean;
  readonly bounds?: Bounds;
}

export interface Question {
  readonly url: string;
  readonly origins: readonly string[];
  readonly headers?: Readonly<Record<string, string>>;
}

export interface Answer {
  readonly status: 200 | 203 | 304;
  /** undefined only with 304. */
  readonly json: unknown;
  readonly expiresAtMs: number | null;
  readonly lastModifiedMs: number | null;
}

export async function safeFetch(question: Question, outside: Outside): Promise<Result<Answer, SourceFailure>> {
  if (!isAllowedUrl(question.url, { origins: question.origins, local: outside.local })) return failure({ kind: 'unreachable' });
  const bounds = outside.bounds ?? BOUNDS;
  const total = deadlineIn(bounds.totalMs);
  const header = deadlineIn(bounds.firstTryMs);
  try {
    const first = await tryOnce(question, outside, { total, header });
    const isFinal = first.ok || total.hasPassed() || !isWorthAnotherTry(first.error);
    return isFinal ? first : await tryOnce(question, outside, { total, header: total });
  } finally {
    total.stop();
    header.stop();
  }
}

/** A fault that may be gone in a moment, so that it comes from two tries. What they refused, and what was sent whole and wrong, stays so. */
export function isWorthAnotherTry(why: SourceFailure): boolean {
  return why.kind === 'unreachable' || why.kind === 'timeout' || why.kind === 'server-error' || why.kind === 'not-json';
}

interface Deadlines {
  readonly total: Deadline;
  readonly header: Deadline;
}

async function tryOnce(question: Question, outside: Outside, deadlines: Deadlines): Promise<Result<Answer, SourceFailure>> {
  const bounds = outside.bounds ?? BOUNDS;
  const abort = new AbortController();
  const giveUp = (why: SourceFailure): Result<Answer, SourceFailure> => {
    abort.abort();
    return failure(why);
  };
  try {
    const headers = { accept: 'application/json, application/geo+json', ...question.headers };
    const asked = outside.fetch(question.url, { headers, redirect: 'manual', signal: abort.signal });
    const response = await before(asked, deadlines.header, deadlines.total);
    if (response === PASSED) return giveUp({ kind: 'timeout', afterMs: bounds.totalMs });
    const refusal = refusalOf(response, outside.now());
    if (refusal !== null) return giveUp(refusal);
    const headersOfUse = {
      expiresAtMs: httpDateMs(response.headers.get('expires')),
      lastModifiedMs: httpDateMs(response.headers.get('last-modified')),
    };
    if (response.status === 304) return success({ status: 304, json: undefined, ...headersOfUse });
    const body = await readBody(response, { maxBytes: bounds.maxBytes, deadline: deadlines.total, timeoutMs: bounds.totalMs });
    if (!body.ok) return giveUp(body.error);
    const json = readJson(body.value);
    if (json === undefined) return failure({ kind: 'not-json' });
    return success({ status: response.status === 203 ? 203 : 200, json, ...headersOfUse });
  } catch {
    return giveUp({ kind: 'unreachable' });
  }
}

/** Why an answer is refused by its status and type alone; null when its body is worth reading. */
function refusalOf(response: Response, nowMs: number): SourceFailure | null {
  const { status } = response;
  if (status === 304) return null;
  if (status === 0 || (status >= 300 && status < 400)) return { kind: 'redirected' };
  if (status === 429) return { kind: 'rate-limited', retryAfterS: retryAfterS(response.headers.get('retry-after'), nowMs) };
  if (status >= 500) return { kind: 'server-error', status };
  if (status >= 400) return { kind: 'refused', status };
  if (status !== 200 && status !== 203) return { kind: 'not-json' };
  return isJsonType(response.headers.get('content-type')) ? null : { kind: 'content-type' };
}
