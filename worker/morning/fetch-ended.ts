import { askAgainMs } from '../../lib/forecast/ask-again.ts';
import { isOfTheHost, type SourceFailure } from '../../lib/forecast/failure.ts';
import type { SourceAnswer } from '../sources/source.ts';
import { runKeyOf } from '../store/forecast.ts';
import type { LogEntry } from '../store/log.ts';
import type { EndedFetch, FetchRun } from '../store/run-work.ts';

/** What becomes of a fetch by its answer: done, or wanted again when the service may be asked again. */
export function endedFetch({ key }: FetchRun, answer: SourceAnswer | undefined, nowMs: number): EndedFetch {
  if (answer === undefined) return { key, outcome: { ok: false, error: { kind: 'not-covered' } } };
  if (answer.ok) return { key, outcome: { ok: true, runAt: runKeyOf(answer.value) } };
  return { key, outcome: { ok: false, error: answer.error }, askAgainMs: askAgainMs(answer.error, nowMs), keepsLast: isOfTheHost(answer.error) };
}

/** What an operator should know of a source that gave nothing: an entry a kind of failure, however many sites it cost. */
export function failureEntries(source: string, answers: ReadonlyMap<string, SourceAnswer>): LogEntry[] {
  const failures = new Map<string, { readonly failed: SourceFailure; sites: number }>();
  for (const answer of answers.values()) {
    if (answer.ok || isSilent(answer.error)) continue;
    const found = failures.get(answer.error.kind) ?? { failed: answer.error, sites: 0 };
    failures.set(answer.error.kind, { ...found, sites: found.sites + 1 });
  }
  return [...failures.values()].map(({ failed, sites }) => ({
    level: isForPeople(failed) ? 'error' : 'warning', step: 'fetch', event: 'source-failed',
    detail: { source, kind: failed.kind, sites, ...('status' in failed ? { status: failed.status } : {}), ...('why' in failed ? { why: failed.why } : {}) },
  }));
}

/** A pause that is being kept, and a place that a service does not know, are nothing new. */
function isSilent({ kind }: SourceFailure): boolean {
  return kind === 'breaker-open' || kind === 'rate-limited' || kind === 'not-covered';
}

/** What no waiting mends: a key that was revoked, an address that has moved, another form of answer. */
function isForPeople({ kind }: SourceFailure): boolean {
  return kind === 'refused' || kind === 'redirected' || kind === 'content-type' || kind === 'unit' || kind === 'shape' || kind === 'ground' || kind === 'place';
}

/** A ground that jumped costs its source the vote until somebody has looked at it. */
export function groundEntry({ siteId, source, byM }: { readonly siteId: string; readonly source: string; readonly byM: number }): LogEntry {
  return { level: 'error', step: 'fetch', event: 'ground-moved', detail: { source, site: siteId, byM } };
}
