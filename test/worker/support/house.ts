// A whole Dawnmargin on the test database, with a clock, queues and a world outside that the test holds in its hands.
import { env } from 'cloudflare:workers';
import type { DayInput } from '../../../lib/brief/day-input.ts';
import type { JudgedDay } from '../../../lib/brief/day.ts';
import type { Conditions, Forecast } from '../../../lib/forecast/conditions.ts';
import type { SourceFailure } from '../../../lib/forecast/failure.ts';
import { failure, success } from '../../../lib/result.ts';
import { HOUR_MS, isoUtc } from '../../../lib/time.ts';
import type { Job, Step } from '../../../worker/morning/job.ts';
import { answerCalls, type Call } from '../../../worker/morning/queue.ts';
import { tick } from '../../../worker/morning/tick.ts';
import { assemble } from '../../../worker/services.ts';
import type { Services } from '../../../worker/service-set.ts';
import { readSettings } from '../../../worker/settings.ts';
import type { Source, SourceAnswer, SourceRequest } from '../../../worker/sources/source.ts';
import type { D1 } from '../../../worker/store/database.ts';
import type { Faults } from './faults.ts';
import { judgedAs, launchFeature } from './stand-ins.ts';

export const LINK_KEY = 'a-link-key-for-tests-only-0123456789';

export interface Post {
  readonly url: string;
  readonly id: string;
  readonly headers: Headers;
  readonly body: string;
  readonly atMs: number;
}

export interface HouseOptions {
  readonly nowIso: string;
  /** What the webhook at this path answers; 204 where there is none. */
  readonly answer?: (post: Post) => Response | Promise<Response>;
  readonly source?: (request: SourceRequest) => Promise<ReadonlyMap<string, SourceAnswer>>;
  readonly judge?: (input: DayInput) => JudgedDay;
  readonly faults?: Faults;
  /** The real judge and the demo's invented weather instead of stand-ins. */
  readonly real?: boolean;
  /** Between the worker and the database. */
  readonly around?: (d1: D1) => D1;
  readonly env?: Readonly<Record<string, string>>;
}

export class House {
  nowMs: number;
  /** Wake-up calls that are under way. */
  queue: Step[] = [];
  /** With whether the receiver took it: what it never answered is not here. */
  readonly posts: (Post & { readonly taken: boolean })[] = [];
  /** Of the running log. */
  readonly lines: string[] = [];
  readonly asked: SourceRequest[] = [];
  readonly slept: number[] = [];
  calls = { db: 0, fetch: 0, queue: 0 };
  options: HouseOptions;
  #ids = 0;

  constructor(options: HouseOptions) {
    this.options = options;
    this.nowMs = Date.parse(options.nowIso);
  }

  services(): Services {
    const settings = readSettings({ LOCAL: '1', LINK_KEY, PUBLIC_URL: 'http://127.0.0.1:8787', ...this.options.env });
    if (!settings.ok) throw new Error('the settings of the test house are wrong');
    const queueOf = (step: Step): Pick<Queue<Job>, 'sendBatch'> => ({
      sendBatch: async (messages) => {
        this.calls.queue += 1;
        const send = async (): Promise<void> => { for (const _ of messages) this.queue.push(step); };
        await (this.options.faults?.call('queue', send) ?? send());
        return { metadata: { metrics: { backlogCount: 0, backlogBytes: 0 } } } as QueueSendBatchResponse;
      },
    });
    const { faults } = this.options;
    faults?.begin();
    const around = this.options.around ?? ((d1: D1) => faults?.around(d1) ?? d1);
    return assemble(
      {
        settings: settings.value,
        db: around(this.#counted(env.DB)),
        queues: { fetch: queueOf('fetch'), assess: queueOf('assess'), deliver: queueOf('deliver') },
        fetch: (url, init) => faults?.call('fetch', () => this.#post(url, init)) ?? this.#post(url, init),
        sleep: async (ms) => { this.slept.push(ms); },
        clock: { nowMs: () => this.nowMs },
        ids: { next: () => `by-${(this.#ids += 1)}` },
        random: () => 0.5,
        write: (line) => { this.lines.push(line); },
        patienceMs: faults === undefined ? 10_000 : 25,
      },
      this.options.real === true ? {} : { sourcesFor: () => [this.#source()], judge: this.options.judge ?? ((input) => judgedAs(input, 'within')) },
    );
  }

  /** One minute of the platform: the cron, and then every call that it and its followers make. */
  async minute(scheduledAtMs: number = this.nowMs): Promise<void> {
    await tick(this.services(), scheduledAtMs);
    await this.answerAll();
  }

  async minutes(count: number): Promise<void> {
    for (let index = 0; index < count; index += 1) {
      await this.minute();
      this.nowMs += 60_000;
    }
  }

  async answerAll(): Promise<void> {
    for (let step = this.queue.shift(); step !== undefined; step = this.queue.shift()) await this.answer(step);
  }

  async answer(step: Step): Promise<void> {
    this.calls = { db: 0, fetch: 0, queue: 0 };
    await answerCalls(this.services(), [callOf({ v: 1, step })]);
  }

  async outbox(): Promise<{ id: string; state: string; reason: string | null; attempts: number; channel_id: string; kind: string; next_attempt_at: number }[]> {
    const rows = await env.DB.prepare('SELECT id, state, reason, attempts, channel_id, kind, next_attempt_at FROM outbox ORDER BY subscription_id, channel_id, due_local_date').all();
    return rows.results as Awaited<ReturnType<House['outbox']>>;
  }

  async seed(subscribers: readonly Subscriber[], siteIds: readonly string[] = [...new Set(subscribers.flatMap((subscriber) => subscriber.sites))]): Promise<void> {
    const { stores } = this.services();
    const pair = (siteId: string, wingKey = 'EN B') => ({ siteId, wingKey, sheetId: 'hill' });
    const wings = [...new Set(['EN B', ...subscribers.map((subscriber) => subscriber.wing ?? 'EN B')])];
    await stores.db.together([
      ...stores.site.replaceAll(siteIds.map((id) => ({ id, feature: JSON.stringify(launchFeature(id)), demo: false })), this.nowMs),
      stores.sheet.put([{ id: 'hill', version: 1, body: JSON.stringify({ id: 'hill', name: 'Hill', kind: 'launch', limits: { maxMeanMps: 6 } }) }], this.nowMs),
      stores.wing.put(wings.map((key) => ({ key, name: key, body: JSON.stringify({ class: key.startsWith('own') ? 'EN B' : key }) }))),
      ...stores.subscription.put(
        subscribers.map(({ id, timeZone = 'Europe/Vienna', deliverMinute = 360, dueIso, sites, wing }) => ({
          id, timeZone, deliverMinute, nextDueAtMs: Date.parse(dueIso), pairs: sites.map((site) => pair(site, wing)),
        })),
        this.nowMs,
      ),
      stores.channel.put(
        subscribers.flatMap(({ id, urls }) =>
          urls.map((url, rank) => ({
            id: `${id}-${rank}`, subscriptionId: id, rank, state: 'active' as const,
            ...(url === 'terminal' ? { kind: 'terminal', target: '{}' } : { kind: 'webhook', target: JSON.stringify({ url }) }),
          })),
        ),
        this.nowMs,
      ),
    ]);
  }

  #source(): Source {
    return {
      id: 'stand-in:one',
      kind: 'deterministic',
      covers: () => true,
      fetch: async (request) => {
        this.asked.push(request);
        if (this.options.source !== undefined) return this.options.source(request);
        return answersTo(request, this.nowMs);
      },
    };
  }

  async #post(url: string, init: RequestInit): Promise<Response> {
    this.calls.fetch += 1;
    const headers = new Headers(init.headers);
    const post = { url, id: headers.get('webhook-id') ?? '', headers, body: typeof init.body === 'string' ? init.body : '', atMs: this.nowMs };
    const response = await (this.options.answer?.(post) ?? new Response(null, { status: 204 }));
    this.posts.push({ ...post, taken: response.ok });
    return response;
  }

  #counted(d1: D1): D1 {
    return {
      prepare: (sql) => {
        this.calls.db += 1;
        return d1.prepare(sql);
      },
      batch: (statements) => d1.batch(statements),
    };
  }
}

export interface Subscriber {
  readonly id: string;
  readonly sites: readonly string[];
  /** In order of rank; `terminal` for that channel. */
  readonly urls: readonly string[];
  readonly dueIso: string;
  readonly timeZone?: string;
  readonly deliverMinute?: number;
  readonly wing?: string;
}

const TABLES = [
  'site', 'sheet', 'wing', 'published', 'source_ground', 'forecast', 'brief', 'subscription', 'subscription_site', 'channel', 'outbox', 'run', 'breaker',
  'source_cache', 'terminal', 'log',
];

/** An empty house. Emptying the tables is several times faster than making them again. */
export async function newHouse(options: HouseOptions): Promise<House> {
  const clear = TABLES.map((table) => env.DB.prepare(`DELETE FROM ${table}`));
  await env.DB.batch([...clear, env.DB.prepare(`DELETE FROM meta WHERE key <> 'schema'`)]);
  return new House(options);
}

export interface AnsweredCall extends Call {
  readonly fate: () => 'acked' | 'retried' | 'open';
}

export function callOf(body: unknown, attempts = 1): AnsweredCall {
  let fate: 'acked' | 'retried' | 'open' = 'open';
  return {
    id: 'call', body, attempts,
    ack: () => { if (fate === 'open') fate = 'acked'; },
    retry: () => { if (fate === 'open') fate = 'retried'; },
    fate: () => fate,
  };
}

export function answersTo(request: SourceRequest, nowMs: number): ReadonlyMap<string, SourceAnswer> {
  return new Map(request.sites.map((site) => [site.id, success(forecastOf(request, nowMs))]));
}

export function failing(request: SourceRequest, why: SourceFailure): ReadonlyMap<string, SourceAnswer> {
  return new Map(request.sites.map((site) => [site.id, failure(why)]));
}

function forecastOf({ fromUtc, toUtc }: SourceRequest, nowMs: number): Forecast {
  const hours: Conditions[] = [];
  for (let at = Date.parse(fromUtc); at <= Date.parse(toUtc); at += HOUR_MS) hours.push({ validAt: isoUtc(at), gridElevationM: 900, wind10m: { speedMps: 3, fromDeg: 250 } });
  return {
    source: 'stand-in:one', kind: 'deterministic', runAt: isoUtc(Math.floor(nowMs / (6 * HOUR_MS)) * 6 * HOUR_MS), fetchedAt: isoUtc(nowMs),
    declares: ['wind10m'], members: [hours], gridDistanceM: 500, demo: false, trustedWithoutRunTime: false,
  };
}
