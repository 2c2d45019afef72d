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

const BUCKETS = [
  { lengthMs: 60_000, of: 'perMinute' },
  { lengthMs: 3_600_000, of: 'perHour' },
  { lengthMs: 86_400_000, of: 'perDay' },
] as const satisfies readonly { lengthMs: number; of: keyof Quota }[];

/** What has been used of the buckets that a moment lies in, by bucket. */
export type Usage = Readonly<Record<string, number>>;

function bucketKey(atMs: number, lengthMs: number): string {
  return `${lengthMs}:${Math.floor(atMs / lengthMs)}`;
}

/** When the longest bucket that a request would overflow is emptied, epoch ms; null when it fits everywhere. */
export function fullUntilMs(usage: Usage, quota: Quota, request: { readonly atMs: number; readonly weight: number }): number | null {
  for (const { lengthMs, of } of BUCKETS.toReversed()) {
    const already = usage[bucketKey(request.atMs, lengthMs)] ?? 0;
    if (already > 0 && already + request.weight > quota[of]) return (Math.floor(request.atMs / lengthMs) + 1) * lengthMs;
  }
  return null;
}

/** The usage after one more request; buckets of the past are forgotten. */
export function afterUse(usage: Usage, request: { readonly atMs: number; readonly weight: number }): Usage {
  const keys = BUCKETS.map(({ lengthMs }) => bucketKey(request.atMs, lengthMs));
  return Object.fromEntries(keys.map((key) => [key, (usage[key] ?? 0) + request.weight]));
}

/** The usage as it is kept; anything that is not one is as good as none. */
export function parseUsage(body: string | null): Usage {
  try {
    const found: unknown = JSON.parse(body ?? '{}');
    const isUsage = typeof found === 'object' && found !== null && Object.values(found).every((value) => typeof value === 'number' && value >= 0);
    return isUsage ? (found as Usage) : {};
  } catch {
    return {};
  }
}

export interface Planned<T> {
  readonly request: T;
  /** When it is sent, epoch ms. */
  readonly atMs: number;
}

/**
 * The earliest times at which requests may be sent in their order, one after the other, without overflowing a bucket.
 * A request heavier than a whole bucket goes at the start of an empty one. `gapMs` is how long one takes.
 */
export function schedule<T extends { readonly weight: number }>(
  requests: readonly T[],
  options: { readonly fromMs: number; readonly quota: Quota; readonly gapMs: number },
): Planned<T>[] {
  let usage: Usage = {};
  let atMs = options.fromMs;
  return requests.map((request) => {
    const { weight } = request;
    for (let full = fullUntilMs(usage, options.quota, { atMs, weight }); full !== null; full = fullUntilMs(usage, options.quota, { atMs, weight })) atMs = full;
    usage = afterUse(usage, { atMs, weight });
    const planned = { request, atMs };
    atMs += options.gapMs;
    return planned;
  });
}
