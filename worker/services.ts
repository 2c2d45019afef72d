import wingClassesJson from '../config/wing-classes.json' with { type: 'json' };
import { parseWingClasses } from '../lib/config/wing-classes.ts';
import type { WingClasses } from '../lib/config/wing.ts';
import { terminalChannel } from './channels/terminal.ts';
import { webhookChannel } from './channels/webhook.ts';
import type { Job, Step } from './morning/job.ts';
import { readers } from './readers.ts';
import type { Clock, IdSource, Services, Stores } from './service-set.ts';
import type { Settings } from './settings.ts';
import { breakerStore } from './store/breaker.ts';
import { briefStore } from './store/brief.ts';
import { channelStore } from './store/channel.ts';
import { database, type D1, type Database } from './store/database.ts';
import { forecastStore } from './store/forecast.ts';
import { logStore } from './store/log.ts';
import { metaStore } from './store/meta.ts';
import { outboxStore } from './store/outbox.ts';
import { outboxUpkeepStore } from './store/outbox-upkeep.ts';
import { publishedStore } from './store/published.ts';
import { runStore } from './store/run.ts';
import { runWorkStore } from './store/run-work.ts';
import { sheetStore } from './store/sheet.ts';
import { siteStore } from './store/site.ts';
import { sourceCacheStore } from './store/source-cache.ts';
import { sourceGroundStore } from './store/source-ground.ts';
import { subscriptionStore } from './store/subscription.ts';
import { terminalStore } from './store/terminal.ts';
import { wingStore } from './store/wing.ts';
import { waker } from './wake.ts';

const DATABASE_TIMEOUT_MS = 10_000;

function ownData<T>(read: () => { readonly ok: true; readonly value: T } | { readonly ok: false; readonly error: readonly { readonly path: string; readonly problem: string }[] }, file: string): () => T {
  let value: T | undefined;
  return () => {
    if (value !== undefined) return value;
    const result = read();
    if (!result.ok) throw new Error(`config/${file}: ${result.error.map((issue) => `${issue.path}: ${issue.problem}`).join('; ')}`);
    value = result.value;
    return value;
  };
}

const wingClasses: () => WingClasses = ownData(() => parseWingClasses(wingClassesJson), 'wing-classes.json');
const read = readers(wingClasses);

/** What of the world the services are made from. */
export interface World {
  readonly settings: Settings;
  readonly db: D1;
  readonly queues: Readonly<Record<Step, Pick<Queue<Job>, 'sendBatch'>>>;
  readonly fetch: (url: string, init: RequestInit) => Promise<Response>;
  readonly sleep: (ms: number) => Promise<void>;
  readonly clock: Clock;
  readonly ids: IdSource;
  readonly random: () => number;
}

export function assemble(world: World, thinking: Pick<Services, 'sourcesFor' | 'judge'>): Services {
  const { settings, clock, ids, random } = world;
  const stores = storesOn(database(world.db, { sleep: world.sleep, random, timeoutMs: DATABASE_TIMEOUT_MS }));
  return {
    settings, clock, ids, random, stores, read, ...thinking,
    wake: waker(world.queues),
    channels: {
      webhook: webhookChannel({ fetch: world.fetch, linkKey: settings.linkKey, local: settings.local, publicUrl: settings.publicUrl }),
      ...(settings.local ? { terminal: terminalChannel(stores.terminal) } : {}),
    },
  };
}

function storesOn(db: Database): Stores {
  return {
    db,
    meta: metaStore(db),
    site: siteStore(db),
    sheet: sheetStore(db),
    wing: wingStore(db),
    published: publishedStore(db),
    sourceGround: sourceGroundStore(db),
    forecast: forecastStore(db),
    brief: briefStore(db),
    subscription: subscriptionStore(db),
    channel: channelStore(db),
    outbox: outboxStore(db),
    outboxUpkeep: outboxUpkeepStore(db),
    run: runStore(db),
    runWork: runWorkStore(db),
    breaker: breakerStore(db),
    sourceCache: sourceCacheStore(db),
    terminal: terminalStore(db),
    log: logStore(db),
  };
}
