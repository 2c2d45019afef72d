import { judgeDay } from '../lib/brief/judge-day.ts';
import { success, type Issue, type Result } from '../lib/result.ts';
import { addressesOf } from './channels/addresses.ts';
import { mailChannel } from './channels/mail.ts';
import { bindingMailer } from './channels/mail-binding.ts';
import { smtpMailer } from './channels/mail-smtp.ts';
import { pushChannel } from './channels/push/push.ts';
import { storedQuarrels } from './channels/push/quarrels.ts';
import { vapid, type Authorize } from './channels/push/vapid.ts';
import { terminalChannel } from './channels/terminal.ts';
import { webhookChannel } from './channels/webhook.ts';
import { heart } from './morning/heartbeat.ts';
import type { Job, Step } from './morning/job.ts';
import { selfTester } from './morning/self-test.ts';
import { ownData, ownReaders } from './own-data.ts';
import type { Clock, IdSource, Services, Stores } from './service-set.ts';
import type { Mailer } from './security/mailer.ts';
import { readSettings, type Env, type Settings } from './settings.ts';
import { demoSources } from './sources/demo.ts';
import { liveSources } from './sources/order.ts';
import { absenceStore } from './store/absence.ts';
import { breakerStore } from './store/breaker.ts';
import { briefStore } from './store/brief.ts';
import { channelStore } from './store/channel.ts';
import { database, type D1, type Database } from './store/database.ts';
import { forecastStore } from './store/forecast.ts';
import { logStore } from './store/log.ts';
import { metaStore } from './store/meta.ts';
import { outboxStore } from './store/outbox.ts';
import { outboxUpkeepStore } from './store/outbox-upkeep.ts';
import { planStore } from './store/plan.ts';
import { publishedStore } from './store/published.ts';
import { rateStore } from './store/rate.ts';
import { runStore } from './store/run.ts';
import { runWorkStore } from './store/run-work.ts';
import { sheetStore } from './store/sheet.ts';
import { sheetHistoryStore } from './store/sheet-history.ts';
import { signupStore } from './store/signup.ts';
import { siteStore } from './store/site.ts';
import { sourceCacheStore } from './store/source-cache.ts';
import { sourceGroundStore } from './store/source-ground.ts';
import { subscriptionStore } from './store/subscription.ts';
import { suppressionStore } from './store/suppression.ts';
import { terminalStore } from './store/terminal.ts';
import { tokenStore } from './store/token.ts';
import { windowStateStore } from './store/window-state.ts';
import { wingStore } from './store/wing.ts';
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
  /** How long database and queue are waited for. */
  readonly patienceMs?: number;
}

/** The services of one invocation, or every setting that is wrong. */
export function createServices(env: Env): Result<Services, Issue[]> {
  const settings = readSettings(env);
  if (!settings.ok) return settings;
  return success(assemble({
    settings: settings.value,
    db: env.DB,
    queues: { fetch: env.FETCH_QUEUE, assess: env.ASSESS_QUEUE, deliver: env.DELIVER_QUEUE },
    fetch: (url, init) => fetch(url, init),
    sleep: (ms) => new Promise((resolve) => setTimeout(resolve, ms)),
    clock: { nowMs: () => Date.now() },
    ids: { next: () => crypto.randomUUID() },
    random: () => Math.random(),
    mailer: mailerOf(settings.value, env),
  }));
}

function mailerOf({ smtp, mailFrom }: Settings, env: Env): Mailer | null {
  if (mailFrom === null) return null;
  if (smtp !== null) return smtpMailer(smtp, mailFrom);
  return env.MAIL === undefined ? null : bindingMailer(env.MAIL, mailFrom);
}

export function assemble(world: World, instead: Partial<Pick<Services, 'sourcesFor' | 'judge' | 'selfTest'>> = {}): Services {
  const { settings, clock, ids, random, mailer = null } = world;
  const stores = storesOn(database(world.db, { sleep: world.sleep, random, timeoutMs: world.patienceMs ?? PATIENCE_MS }));
  return {
    settings, clock, ids, random, stores,
    read: ownReaders,
    wingClasses: ownData.wingClasses,
    shippedSheets: ownData.sheets,
    thresholds: ownData.thresholds,
    wake: waker(world.queues, world.patienceMs ?? PATIENCE_MS),
    sourcesFor: sourcesOf(world, stores),
    judge: judgeDay,
    // A stand-in for the judge stands in a test and not before subscribers: it is not asked what it knows.
    selfTest: instead.judge === undefined ? selfTester(judgeDay, ownData.thresholds) : () => [],
    heartbeat: heart(settings.heartbeatUrl, world.fetch),
    mailer,
    addresses: addressesOf(settings),
    channels: {
      webhook: webhookChannel({ fetch: world.fetch, linkKey: settings.linkKey, local: settings.local, publicUrl: settings.publicUrl }),
      push: pushChannel({ fetch: world.fetch, authorize: authorizer(settings), local: settings.local, publicUrl: settings.publicUrl, quarrels: storedQuarrels(stores) }),
      ...(mailer === null ? {} : { mail: mailChannel({ mailer, linkKey: settings.linkKey, publicUrl: settings.publicUrl, mailFrom: settings.mailFrom ?? '' }) }),
      ...(settings.local ? { terminal: terminalChannel(stores.terminal) } : {}),
    },
    ...instead,
  };
}

/** Kept for the life of an isolate: a token is signed once for each origin and hour. */
const authorizers = new Map<string, Authorize>();

function authorizer({ vapid: keys, contact, publicUrl }: Settings): Authorize | null {
  if (keys === null) return null;
  const subject = contact === null ? publicUrl : contact.includes(':') ? contact : `mailto:${contact}`;
  const name = `${keys.publicKey} ${subject}`;
  const found = authorizers.get(name) ?? vapid(keys, subject);
  authorizers.set(name, found);
  return found;
}

/** Invented weather for the places of the demo, and for nobody else. */
function sourcesOf({ settings, fetch, clock }: World, stores: Stores): Services['sourcesFor'] {
  const live = liveSources(ownData.sources(), settings, {
    fetch, now: clock.nowMs, local: settings.local, cache: stores.sourceCache, breakers: stores.breaker,
    report: ({ source, notice }) => console.warn(`${source}: ${notice}`),
  });
  const demo = demoSources(ownData.demo(), clock.nowMs);
  return (place) => (place.demo ? demo : live(place.site));
}

function storesOn(db: Database): Stores {
  return {
    db,
    meta: metaStore(db),
    site: siteStore(db),
    sheet: sheetStore(db),
    wing: wingStore(db),
    plan: planStore(db),
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
    windowState: windowStateStore(db),
    absence: absenceStore(db),
    terminal: terminalStore(db),
    log: logStore(db),
    signup: signupStore(db),
    token: tokenStore(db),
    rate: rateStore(db),
    suppression: suppressionStore(db),
    sheetHistory: sheetHistoryStore(db),
  };
}
