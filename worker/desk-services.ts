import { judgeDay } from '../lib/brief/judge-day.ts';
import { sourcesFor } from '../lib/config/source-order.ts';
import { success, type Issue, type Result } from '../lib/result.ts';
import { addressesOf } from './channels/addresses.ts';
import { feedDoor, type FeedDoor } from './feeds/door.ts';
import type { Job, Step } from './morning/job.ts';
import { ownData, ownReaders } from './own-data.ts';
import type { Mailer } from './security/mailer.ts';
import type { Clock, DeskServices, IdSource } from './service-set.ts';
import { sayer } from './say.ts';
import { readSettings, type Env, type Settings } from './settings.ts';
import { withCompanions } from './sources/order.ts';
import { database, type D1 } from './store/database.ts';
import { storesOn } from './store/stores.ts';
import { waker } from './wake.ts';

const PATIENCE_MS = 10_000;

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
  readonly mailer?: Mailer | null;
  /** Whether there is a mailer, where none is given here. */
  readonly sendsMail?: boolean;
  /** Where lines of the running log go; the console unless a test says otherwise. */
  readonly write?: (line: string) => void;
  /** Before the feeds: kept for the life of an isolate. One that keeps nothing where none is given. */
  readonly feedDoor?: FeedDoor;
  /** How long database and queue are waited for. */
  readonly patienceMs?: number;
}

let door: FeedDoor | undefined;

function pause(ms: number): Promise<void> {
  return new Promise((resolve) => setTimeout(resolve, ms));
}

/** The world of one invocation, or every setting that is wrong. */
export function worldOf(env: Env): Result<World, Issue[]> {
  const settings = readSettings(env);
  if (!settings.ok) return settings;
  return success({
    settings: settings.value,
    db: env.DB,
    queues: { fetch: env.FETCH_QUEUE, assess: env.ASSESS_QUEUE, deliver: env.DELIVER_QUEUE },
    fetch: (url, init) => fetch(url, init),
    sleep: pause,
    clock: { nowMs: () => Date.now() },
    ids: { next: () => crypto.randomUUID() },
    random: () => Math.random(),
    sendsMail: settings.value.mailFrom !== null && (settings.value.smtp !== null || env.MAIL !== undefined),
    feedDoor: (door ??= feedDoor(caches.default, pause)),
  });
}

export function deskServices(world: World): DeskServices {
  const { settings, clock, ids, random } = world;
  const patienceMs = world.patienceMs ?? PATIENCE_MS;
  const stores = storesOn(database(world.db, { sleep: world.sleep, random, timeoutMs: patienceMs }));
  return {
    settings, clock, ids, random, stores,
    sleep: world.sleep,
    read: ownReaders,
    wingClasses: ownData.wingClasses,
    shippedSheets: ownData.sheets,
    thresholds: ownData.thresholds,
    say: sayer(clock.nowMs, world.write ?? ((line) => console.log(line))),
    wake: waker(world.queues, patienceMs),
    sourceNames: ({ site, demo }) => (demo && !settings.rehearsal ? ownData.demo().sources : withCompanions(sourcesFor(ownData.sources(), site))),
    judge: judgeDay,
    sendsMail: world.sendsMail ?? (world.mailer ?? null) !== null,
    addresses: addressesOf(settings),
    feedDoor: world.feedDoor ?? feedDoor(null, world.sleep),
  };
}
