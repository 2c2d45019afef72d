import type { StoredChannel } from '../store/channel.ts';
import type { Pair } from '../store/published.ts';
import type { StoredSheet } from '../store/sheet.ts';
import type { StoredSite } from '../store/site.ts';
import type { NewSubscription } from '../store/subscription.ts';
import type { StoredWing } from '../store/wing.ts';

/** What a local database begins with, as worker/local writes it and the worker of the same version reads it. */
export interface Seed {
  readonly sites: readonly Omit<StoredSite, 'storedAtMs'>[];
  readonly sheets: readonly StoredSheet[];
  readonly wings: readonly StoredWing[];
  readonly published: readonly Pair[];
  readonly subscriptions: readonly SeedSubscription[];
}

export interface SeedSubscription extends Omit<NewSubscription, 'nextDueAtMs'> {
  readonly channels: readonly Pick<StoredChannel, 'id' | 'rank' | 'kind' | 'target'>[];
}

const PARTS = ['sites', 'sheets', 'wings', 'published', 'subscriptions'] as const;

/** The parts are lists; what stands in them is checked by the readers and by the tables. */
export function readSeed(body: unknown): Seed {
  const parts = typeof body === 'object' && body !== null ? (body as Readonly<Record<string, unknown>>) : {};
  const lists = PARTS.map((name) => [name, Array.isArray(parts[name]) ? parts[name] : []] as const);
  return Object.fromEntries(lists) as unknown as Seed;
}
