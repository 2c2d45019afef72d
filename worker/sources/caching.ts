/**
 * The caching contract of the services that ask for one: not again before `Expires`, then with `If-Modified-Since`, and a
 * 304 renews what we have. Kept are our own normalised values and two times; nothing the service wrote as text.
 */
import type { Host } from './host.ts';
import type { SourceFailure } from '../../lib/forecast/failure.ts';
import { failure, success, type Result } from '../../lib/result.ts';

/** Texts kept between invocations under a key that begins with the origin they came from. */
export interface SourceCache {
  get(key: string, nowMs: number): Promise<{ readonly body: string; readonly storedAtMs: number } | null>;
  put(key: string, entry: { readonly body: string; readonly expiresAtMs: number }, nowMs: number): Promise<void>;
}

export function memoryCache(): SourceCache {
  const entries = new Map<string, { body: string; storedAtMs: number; expiresAtMs: number }>();
  return {
    get: (key, nowMs) => {
      const entry = entries.get(key);
      return Promise.resolve(entry !== undefined && entry.expiresAtMs > nowMs ? { body: entry.body, storedAtMs: entry.storedAtMs } : null);
    },
    put: (key, entry, nowMs) => {
      entries.set(key, { ...entry, storedAtMs: nowMs });
      return Promise.resolve();
    },
  };
}

interface Kept<T> {
  readonly freshUntilMs: number;
  readonly lastModifiedMs: number | null;
  readonly fetchedMs: number;
  readonly value: T;
}

export interface CachedQuestion<T> {
  /** Raised when the form of what is kept changes: older entries are then asked for anew. */
  readonly version: number;
  readonly path: string;
  readonly headers: Readonly<Record<string, string>>;
  readonly read: (json: unknown) => Result<T, SourceFailure>;
  /** How long an answer without `Expires` counts as fresh, and how long any is kept for a 304. */
  readonly freshMs: number;
  readonly keepMs: number;
}

export interface CachedAnswer<T> {
  readonly value: T;
  /** When the service last gave or confirmed it. */
  readonly fetchedMs: number;
  /** 203: the service says that this product is on its way out, or not out yet. */
  readonly isDeprecated: boolean;
}

/** `Expires` further off than this is not believed. */
const LONGEST_FRESH_MS = 6 * 3_600_000;

export async function askCached<T>(host: Host, cache: SourceCache, question: CachedQuestion<T>): Promise<Result<CachedAnswer<T>, SourceFailure>> {
  const key = `${host.origin}|${question.version}|${question.path}`;
  const kept = await readKept<T>(cache, key, host.now());
  if (kept !== null && host.now() < kept.freshUntilMs) return success({ value: kept.value, fetchedMs: kept.fetchedMs, isDeprecated: false });
  const since = kept?.lastModifiedMs ?? null;
  const conditional: Record<string, string> = since === null ? {} : { 'if-modified-since': new Date(since).toUTCString() };
  const answer = await host.ask({ path: question.path, headers: { ...question.headers, ...conditional } });
  if (!answer.ok) return answer;
  const nowMs = host.now();
  const isUnchanged = answer.value.status === 304;
  if (isUnchanged && (kept === null || since === null)) return failure({ kind: 'refused', status: 304 });
  const read = isUnchanged && kept !== null ? success(kept.value) : question.read(answer.value.json);
  if (!read.ok) return read;
  const { expiresAtMs, lastModifiedMs, status } = answer.value;
  const next: Kept<T> = {
    freshUntilMs: Math.min(expiresAtMs ?? nowMs + question.freshMs, nowMs + LONGEST_FRESH_MS),
    lastModifiedMs: lastModifiedMs ?? since,
    fetchedMs: nowMs,
    value: read.value,
  };
  const entry = { body: JSON.stringify(next), expiresAtMs: nowMs + question.keepMs };
  await cache.put(key, entry, nowMs).catch(() => undefined);
  return success({ value: read.value, fetchedMs: nowMs, isDeprecated: status === 203 });
}

/** Entries are our own; one that cannot be read is as good as none. */
async function readKept<T>(cache: SourceCache, key: string, nowMs: number): Promise<Kept<T> | null> {
  const entry = await cache.get(key, nowMs).catch(() => null);
  if (entry === null) return null;
  try {
    const kept = JSON.parse(entry.body) as Partial<Kept<T>>;
    return typeof kept.freshUntilMs === 'number' && typeof kept.fetchedMs === 'number' && kept.value !== undefined ? (kept as Kept<T>) : null;
  } catch {
    return null;
  }
}
