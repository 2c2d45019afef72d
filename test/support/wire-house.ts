// A whole Dawnmargin in this process whose messages really leave it: over loopback to push services and receivers that
// answer as a test says, and that keep what each recipient got. A late answer costs the clock of the house and nobody's time.
// `wireless` leaves out the loopback, for thousands of messages.
import { vi } from 'vitest';
import { vapidKeys } from '../faults/delivery/vapid-keys.ts';
import { FastHouse, type FastOptions } from './fast-house.ts';
import { health } from '../../worker/routes/health.ts';
import { oraclesOf, toldByWebhook, verdictsIn, type Expected, type Told, type WebhookData } from './oracles.ts';
import { startPushSink, type Pushed, type PushSink } from './sinks/push-sink.ts';
import { startWebhookSink, type Received, type WebhookSink } from './sinks/webhook-sink.ts';

/** A push service, another one, a push service that a test stands in for, a receiver of webhooks, or a webhook at an address of its own. */
export type Way = 'push' | 'other push' | 'crowd' | 'webhook' | { readonly url: string };

export interface Knock {
  readonly name: string;
  readonly way: 'push' | 'other push' | 'webhook';
  /** 1 for the first that came to this name by this way. */
  readonly attempt: number;
  readonly atMs: number;
  readonly headers: Readonly<Record<string, string>>;
  readonly body: Buffer | string;
  /** What a browser reads, decrypted by a library that is not ours, or a receiver of webhooks. */
  readonly read: Readonly<Record<string, unknown>>;
}

/** `lateMs`: by the clock of the house. `reset`: the connection ends after everything was read. */
export type Answer = 'reset' | { readonly status: number; readonly headers?: Record<string, string>; readonly body?: string; readonly lateMs?: number };

export interface World {
  readonly push: PushSink;
  readonly other: PushSink;
  readonly hooks: WebhookSink;
  close(): Promise<void>;
}

export async function startWorld(): Promise<World> {
  const [push, other, hooks] = await Promise.all([startPushSink(), startPushSink(), startWebhookSink()]);
  return { push, other, hooks, close: async () => { await Promise.all([push, other, hooks].map((sink) => sink.close())); } };
}

const LATE = 'late-by-ms';
const VAPID = vapidKeys();

export interface WireOptions {
  readonly wireless?: boolean;
  /** What becomes of requests to addresses that are a test's own; null for all others. */
  readonly elsewhere?: (url: string, init: RequestInit) => Promise<Response> | null;
}

export class WireHouse extends FastHouse {
  readonly told: Told[] = [];
  readonly knocks: Knock[] = [];
  answers: (knock: Knock) => Answer;
  readonly #world: World;
  readonly #ends = new WeakMap<AbortSignal, { readonly atMs: number; readonly end: AbortController }>();
  readonly #names = new Map<string, string>();
  readonly #attempts = new Map<string, number>();
  readonly #timers: { readonly atMs: number; readonly ring: () => void }[] = [];

  constructor(world: World, answers: (knock: Knock) => Answer = ({ way }) => ({ status: way === 'webhook' ? 204 : 201 }), { env, wireless, elsewhere, ...options }: Partial<FastOptions> & WireOptions = {}) {
    super({
      nowIso: DUE, env: { VAPID_PUBLIC_KEY: VAPID.publicKey, VAPID_PRIVATE_KEY: VAPID.privateKey, ...env },
      fetch: (url, init) => elsewhere?.(url, init) ?? this.#over(url, init, wireless === true ? (to, what) => this.#straight(to, what) : fetch), ...options,
    });
    this.#world = world;
    this.answers = answers;
    for (const way of ['push', 'other push'] as const) this.#service(way).answer((pushed) => this.#pushed(way, pushed));
    world.hooks.behave((received) => this.#received(received));
    // Time out by the clock of the house.
    vi.spyOn(AbortSignal, 'timeout').mockImplementation((ms) => {
      const end = new AbortController();
      this.#ends.set(end.signal, { atMs: this.nowMs + ms, end });
      return end.signal;
    });
  }

  /** Subscribers who have shown that they want to be told, with the ways that they are told by, the first first. */
  async people(people: Readonly<Record<string, readonly Way[]>>, dueIso = DUE): Promise<void> {
    await this.seed(Object.keys(people).map((id) => ({ id, sites: ['north'], urls: [], dueIso })));
    const { stores } = this.services();
    const channels = Object.entries(people).flatMap(([name, ways]) => ways.map((way, rank) => ({ id: `${name}-${rank}`, subscriptionId: name, rank, state: 'active' as const, ...this.#targetOf(name, way) })));
    await stores.db.together([stores.channel.put(channels, this.nowMs)]);
  }

  of(name: string, way?: Knock['way']): Knock[] {
    return this.knocks.filter((knock) => knock.name === name && (way === undefined || knock.way === way));
  }

  channels(): Record<string, string> {
    return Object.fromEntries(this.d1.ask<{ id: string; state: string }>('SELECT id, state FROM channel ORDER BY id').map(({ id, state }) => [id, state]));
  }

  oracles(expected: Omit<Expected, 'dueIso' | 'verdict'> & Partial<Expected>): Promise<string[]> {
    return oraclesOf({ told: this.told, health: async () => (await health(this.services())).json(), ask: <Row>(sql: string) => Promise.resolve(this.d1.ask<Row>(sql)) }, { dueIso: DUE, verdict: 'within', ...expected });
  }

  /** Waits by the clock of the house: whoever wakes first is woken first, and the clock goes on to then. */
  sleep(ms: number): Promise<void> {
    return new Promise((ring) => {
      this.#timers.push({ atMs: this.nowMs + Math.ceil(ms), ring });
      if (this.#timers.length === 1) setImmediate(() => this.#ring());
    });
  }

  #ring(): void {
    const next = this.#timers.reduce((first, timer) => (timer.atMs < first.atMs ? timer : first));
    this.nowMs = Math.max(this.nowMs, next.atMs);
    next.ring();
    this.#timers.splice(this.#timers.indexOf(next), 1);
    if (this.#timers.length > 0) setImmediate(() => this.#ring());
  }

  #service(way: 'push' | 'other push'): PushSink {
    return way === 'push' ? this.#world.push : this.#world.other;
  }

  #targetOf(name: string, way: Way): { readonly kind: string; readonly target: string } {
    if (way === 'webhook') return { kind: 'webhook', target: JSON.stringify({ url: `${this.#world.hooks.origin}/${name}` }) };
    if (way === 'crowd') return { kind: 'push', target: '{}' };
    if (typeof way === 'object') return { kind: 'webhook', target: JSON.stringify(way) };
    const { target } = this.#service(way).newBrowser();
    this.#names.set(target.endpoint, name);
    return { kind: 'push', target: JSON.stringify(target) };
  }

  #pushed(way: 'push' | 'other push', pushed: Pushed) {
    const name = this.#names.get(`${this.#service(way).origin}${pushed.path}`) ?? pushed.path;
    const read = this.#service(way).decrypt(pushed) as { readonly id: string; readonly title: string; readonly body?: string; readonly validUntil: string };
    const said = `${read.title}\n${read.body ?? ''}`;
    return this.#knocked({ name, way, headers: pushed.headers as Record<string, string>, body: pushed.body, read }, { id: read.id, said, verdicts: verdictsIn(read.title), validUntilMs: Date.parse(read.validUntil) });
  }

  #received({ path, headers, body }: Received) {
    const read = JSON.parse(body) as { readonly data: WebhookData };
    return this.#knocked({ name: path.slice(1), way: 'webhook', headers: headers as Record<string, string>, body, read }, toldByWebhook({ url: path, id: read.data.id, atMs: this.nowMs, taken: true }, read.data));
  }

  #knocked(came: Omit<Knock, 'attempt' | 'atMs'>, what: Omit<Told, 'name' | 'atMs' | 'taken'>) {
    const key = `${came.way} ${came.name}`;
    const knock = { ...came, atMs: this.nowMs, attempt: 1 + (this.#attempts.get(key) ?? 0) };
    this.#attempts.set(key, knock.attempt);
    this.knocks.push(knock);
    const answer = this.answers(knock);
    // The question whether a browser asked is no message.
    if (came.read['kind'] !== 'confirm') this.told.push({ ...what, name: came.name, atMs: this.nowMs, taken: answer === 'reset' || (answer.status >= 200 && answer.status < 300) });
    return answer === 'reset' ? answer : { ...answer, headers: { ...answer.headers, [LATE]: String(answer.lateMs ?? 0) } };
  }

  async #straight(url: string, { headers, body }: RequestInit): Promise<Response> {
    const { origin, pathname } = new URL(url);
    const given = Object.fromEntries(new Headers(headers));
    const answer = origin === this.#world.hooks.origin
      ? this.#received({ path: pathname, id: '', headers: given, body: typeof body === 'string' ? body : '', atMs: this.nowMs })
      : this.#pushed(origin === this.#world.push.origin ? 'push' : 'other push', { path: pathname, headers: given, body: Buffer.from(body as Uint8Array), atMs: this.nowMs });
    if (answer === 'reset') throw new TypeError('the connection has ended');
    return new Response(null, { status: answer.status, headers: answer.headers });
  }

  async #over(url: string, init: RequestInit, over: (url: string, init: RequestInit) => Promise<Response>): Promise<Response> {
    const { signal, ...rest } = init;
    const response = await over(url, rest);
    const lateMs = Number(response.headers.get(LATE));
    const timeOut = signal ? this.#ends.get(signal) : undefined;
    this.nowMs += lateMs;
    // Whoever was sent to at the same time has answered by then.
    if (lateMs > 0 && timeOut !== undefined && timeOut.atMs <= this.nowMs) timeOut.end.abort(new DOMException('The operation timed out', 'TimeoutError'));
    signal?.throwIfAborted();
    return response;
  }
}

export const DUE = '2027-05-14T04:00:00Z';
