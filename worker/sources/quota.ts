/**
 * What requests to the Open-Meteo interface weigh, and how to keep inside what it gives for nothing: 600 a minute, 5000 an
 * hour, 10,000 a day, in buckets that are emptied on the full minute, hour and day. A request that would overflow a
 * bucket is still served and closes it for the rest; so each is sent only where it fits. Pure arithmetic.
 */
export const FREE_QUOTA = { perMinute: 600, perHour: 5000, perDay: 10_000 } as const;

export type Quota = { readonly [Bucket in keyof typeof FREE_QUOTA]: number };

/** Per location: variables x members / 10, more beyond 14 days, at least 1. */
export function requestWeight(request: { readonly variables: number; readonly members: number; readonly days: number }): number {
  const tenths = (request.variables * request.members) / 10;
  return Math.max(1, tenths, tenths * (request.days / 14));
}

export interface Planned<T> {
  readonly request: T;
  /** When it is sent, epoch ms. */
  readonly atMs: number;
}

const BUCKETS = [
  { lengthMs: 60_000, of: 'perMinute' },
  { lengthMs: 3_600_000, of: 'perHour' },
  { lengthMs: 86_400_000, of: 'perDay' },
] as const satisfies readonly { lengthMs: number; of: keyof Quota }[];

/**
 * The earliest times at which requests may be sent in their order, one after the other, without overflowing a bucket.
 * A request heavier than a whole bucket goes at the start of an empty one. `gapMs` is how long one takes.
 */
export function schedule<T extends { readonly weight: number }>(
  requests: readonly T[],
  options: { readonly fromMs: number; readonly quota: Quota; readonly gapMs: number },
): Planned<T>[] {
  const used = new Map<string, number>();
  const planned: Planned<T>[] = [];
  let atMs = options.fromMs;
  for (const request of requests) {
    let full = fullBucket(used, options.quota, { atMs, weight: request.weight });
    while (full !== null) {
      atMs = full.untilMs;
      full = fullBucket(used, options.quota, { atMs, weight: request.weight });
    }
    planned.push({ request, atMs });
    for (const { lengthMs } of BUCKETS) {
      const key = bucketKey(atMs, lengthMs);
      used.set(key, (used.get(key) ?? 0) + request.weight);
    }
    atMs += options.gapMs;
  }
  return planned;
}

function bucketKey(atMs: number, lengthMs: number): string {
  return `${lengthMs}:${Math.floor(atMs / lengthMs)}`;
}

/** The longest bucket that a request would overflow, and when it is emptied; null when it fits everywhere. */
function fullBucket(used: ReadonlyMap<string, number>, quota: Quota, request: { readonly atMs: number; readonly weight: number }): { readonly untilMs: number } | null {
  for (const { lengthMs, of } of BUCKETS.toReversed()) {
    const already = used.get(bucketKey(request.atMs, lengthMs)) ?? 0;
    if (already > 0 && already + request.weight > quota[of]) return { untilMs: (Math.floor(request.atMs / lengthMs) + 1) * lengthMs };
  }
  return null;
}
