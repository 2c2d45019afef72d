// A whole Dawnmargin in this process, on an in-memory SQLite: for tests that need thousands of ticks. The clock, the queues
// and the world outside are in the test's hands.
import './no-sockets.ts';
import type { DayInput } from '../../lib/brief/day-input.ts';
import type { JudgedDay } from '../../lib/brief/day.ts';
import type { Conditions } from '../../lib/forecast/conditions.ts';
import { success } from '../../lib/result.ts';
import { HOUR_MS, isoUtc } from '../../lib/time.ts';
import { answerCalls } from '../../worker/morning/queue.ts';
import { jobFor, type Step } from '../../worker/morning/job.ts';
import { tick } from '../../worker/morning/tick.ts';
import { assemble } from '../../worker/services.ts';
import type { Services } from '../../worker/service-set.ts';
import { readSettings } from '../../worker/settings.ts';
import type { SourceAnswer, SourceRequest } from '../../worker/sources/source.ts';
import type { D1 } from '../../worker/store/database.ts';
import type { Faults } from '../worker/support/faults.ts';
import { judgedAs, launchFeature } from '../worker/support/stand-ins.ts';
import { sqliteD1, type SqliteD1 } from './sqlite-d1.ts';

export interface FastPost {
  readonly url: string;
  readonly id: string;
  readonly type: string;
  readonly data: { readonly id: string; readonly title: string; readonly text: string; readonly issuedAt: string; readonly validUntil: string; readonly days: readonly { readonly siteId: string; readonly localDate: string; readonly verdict: string }[] };
  readonly atMs: number;
}

export interface FastOptions {
  readonly nowIso: string;
  readonly answer?: (post: FastPost) => Response;
  /** In place of every answer of the world outside. */
  readonly fetch?: (url: string, init: RequestInit) => Promise<Response>;
  /** One that is always the middle where none is given. */
  readonly random?: () => number;
  /** One that takes no time where none is given. */
  readonly sleep?: (ms: number) => Promise<void>;
  readonly source?: (request: SourceRequest) => Promise<ReadonlyMap<string, SourceAnswer>>;
  readonly judge?: (input: DayInput) => JudgedDay;
  readonly around?: (d1: D1) => D1;
  readonly faults?: Faults;
  /** Anything of the services replaced. */
  readonly instead?: (services: Services) => Partial<Services>;
  readonly env?: Readonly<Record<string, string>>;
  /** Another place than the usual launch, by site id. */
  readonly feature?: (siteId: string) => unknown;
}

export interface FastSubscriber {
  readonly id: string;
  readonly sites: readonly string[];
  readonly urls: readonly string[];
  readonly dueIso: string;
  readonly timeZone?: string;
  readonly deliverMinute?: number;
}

export const hook = (name: string): string => `http://127.0.0.1:9/${name}`;

export class FastHouse {
  nowMs: number;
  options: FastOptions;
  queue: Step[] = [];
  readonly d1: SqliteD1 = sqliteD1();
  readonly posts: FastPost[] = [];
  /** Of the running log. */
  readonly lines: string[] = [];
  readonly fetched: string[] = [];
  readonly asked: SourceRequest[] = [];
  #ids = 0;

  constructor(options: FastOptions) {
    this.options = options;
    this.nowMs = Date.parse(options.nowIso);
  }

  services(): Services {
    const settings = readSettings({ LOCAL: '1', LINK_KEY: 'a-link-key-for-tests-only-0123456789', PUBLIC_URL: 'http://127.0.0.1:8787', ...this.options.env });
    if (!settings.ok) throw new Error('the settings of the test house are wrong');
    const { faults } = this.options;
    faults?.begin();
    const queueOf = (step: Step) => ({
      sendBatch: async (messages: Iterable<unknown>) => {
        const send = async (): Promise<void> => { for (const _ of messages) this.queue.push(step); };
        await (faults?.call('queue', send) ?? send());
        return undefined as never;
      },
    });
    const services = assemble(
      {
        settings: settings.value, db: this.options.around?.(this.d1) ?? faults?.around(this.d1) ?? this.d1,
        queues: { fetch: queueOf('fetch'), assess: queueOf('assess'), deliver: queueOf('deliver') },
        fetch: (url, init) => faults?.call('fetch', () => this.#fetch(url, init)) ?? this.#fetch(url, init), sleep: this.options.sleep ?? (async () => undefined),
        clock: { nowMs: () => this.nowMs }, ids: { next: () => `by-${(this.#ids += 1)}` }, random: this.options.random ?? (() => 0.5), patienceMs: 25, write: (line) => { this.lines.push(line); },
      },
      { sourcesFor: () => [{ id: 'stand-in:one', kind: 'deterministic', covers: () => true, fetch: (request) => this.#answers(request) }], judge: (input) => this.options.judge?.(input) ?? judgedAs(input, 'within') },
    );
    return { ...services, ...this.options.instead?.(services) };
  }

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

  /** A tick a minute up to then. */
  async until(iso: string): Promise<void> {
    await this.minutes(Math.max(0, Math.round((Date.parse(iso) - this.nowMs) / 60_000)));
  }

  async answerAll(): Promise<void> {
    for (let step = this.queue.shift(); step !== undefined; step = this.queue.shift()) {
      await answerCalls(this.services(), [{ id: 'call', body: jobFor(step), attempts: 1, ack: () => undefined, retry: () => undefined }]);
    }
  }

  rows(): { kind: string; seq: number; state: string; reason: string | null; due_local_date: string; subscription_id: string; due_at: number }[] {
    return this.d1.ask('SELECT kind, seq, state, reason, due_local_date, subscription_id, due_at FROM outbox ORDER BY created_at, subscription_id, seq');
  }

  async seed(subscribers: readonly FastSubscriber[], siteIds: readonly string[] = [...new Set(subscribers.flatMap(({ sites }) => sites))]): Promise<void> {
    const { stores } = this.services();
    await stores.db.together([
      ...stores.site.replaceAll(siteIds.map((id) => ({ id, feature: JSON.stringify(this.options.feature?.(id) ?? launchFeature(id)), demo: false })), this.nowMs),
      stores.sheet.put([{ id: 'hill', version: 1, body: JSON.stringify({ id: 'hill', name: 'Hill', kind: 'launch', limits: { maxMeanMps: 6 } }) }], this.nowMs),
      stores.wing.put([{ key: 'EN B', name: 'EN B', body: JSON.stringify({ class: 'EN B' }) }]),
      ...stores.subscription.put(subscribers.map(({ id, timeZone = 'Europe/Vienna', deliverMinute = 360, dueIso, sites }) => ({
        id, timeZone, deliverMinute, nextDueAtMs: Date.parse(dueIso), pairs: sites.map((siteId) => ({ siteId, wingKey: 'EN B', sheetId: 'hill' })),
      })), this.nowMs),
      stores.channel.put(subscribers.flatMap(({ id, urls }) => urls.map((url, rank) => ({ id: `${id}-${rank}`, subscriptionId: id, rank, state: 'active' as const, kind: 'webhook', target: JSON.stringify({ url }) }))), this.nowMs),
    ]);
  }

  async #answers(request: SourceRequest): Promise<ReadonlyMap<string, SourceAnswer>> {
    this.asked.push(request);
    if (this.options.source !== undefined) return this.options.source(request);
    return answersTo(request, this.nowMs);
  }

  async #fetch(url: string, init: RequestInit): Promise<Response> {
    this.fetched.push(url);
    if (this.options.fetch !== undefined) return this.options.fetch(url, init);
    if (!url.startsWith('http://127.0.0.1:9/')) return new Response(null, { status: 204 });
    const body = JSON.parse(typeof init.body === 'string' ? init.body : '{}') as Pick<FastPost, 'type' | 'data'>;
    const post = { url, id: new Headers(init.headers).get('webhook-id') ?? '', ...body, atMs: this.nowMs };
    const response = this.options.answer?.(post) ?? new Response(null, { status: 204 });
    if (response.ok) this.posts.push(post);
    return response;
  }
}

export function answersTo(request: SourceRequest, nowMs: number): ReadonlyMap<string, SourceAnswer> {
  const hours: Conditions[] = [];
  for (let at = Date.parse(request.fromUtc); at <= Date.parse(request.toUtc); at += HOUR_MS) hours.push({ validAt: isoUtc(at), gridElevationM: 900, wind10m: { speedMps: 3, fromDeg: 250 } });
  const forecast = {
    source: 'stand-in:one', kind: 'deterministic' as const, runAt: isoUtc(Math.floor(nowMs / (6 * HOUR_MS)) * 6 * HOUR_MS), fetchedAt: isoUtc(nowMs),
    declares: ['wind10m'] as const, members: [hours], gridDistanceM: 500, demo: false, trustedWithoutRunTime: false,
  };
  return new Map(request.sites.map((site) => [site.id, success(forecast)]));
}
