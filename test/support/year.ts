// Mornings upon mornings in twelve zones, while one call in ten fails: database, forecast service, receiver, queue.
import { failure } from '../../lib/result.ts';
import { HOUR_MS, instantOfLocal, localDate, MINUTE_MS, shiftDate } from '../../lib/time.ts';
import type { Verdict } from '../../lib/margin/ids.ts';
import type { D1 } from '../../worker/store/database.ts';
import { judgedAs } from '../worker/support/stand-ins.ts';
import { answersTo, FastHouse, hook } from './fast-house.ts';
import { seeded } from './seeded.ts';

export const ZONES: readonly (readonly [timeZone: string, lonDeg: number, latDeg: number])[] = [
  ['Europe/Vienna', 11.4, 47.2], ['Europe/Oslo', 18.9, 69.6], ['Europe/London', -1.8, 51.2], ['Africa/Cairo', 31.2, 29.9], ['Asia/Beirut', 35.9, 34.1],
  ['Asia/Kathmandu', 84, 28.2], ['Australia/Lord_Howe', 159.1, -31.6], ['Pacific/Auckland', 172.7, -43.5], ['America/New_York', -74.4, 41.7],
  ['America/Havana', -82.4, 23.1], ['America/Santiago', -70.5, -33.4], ['America/Los_Angeles', -117.4, 33.6],
];

const DELIVER = { hour: 6, minute: 0 };
/** Ticks of a morning, minutes after its time, and of every hour: those in which something is due. */
const MORNING = [0, 1, 2, 3, 5, 8, 10, 11, 20, 30];
const HOURLY = [10, 11];

export interface YearReport {
  readonly days: number;
  readonly mornings: number;
  readonly briefs: number;
  readonly absences: number;
  readonly changes: number;
  readonly tests: number;
  readonly calls: number;
  readonly faults: number;
  readonly lateShare: number;
  readonly violations: readonly string[];
}

class Weather {
  calls = 0;
  faults = 0;
  readonly random: () => number;
  readonly share: number;
  constructor(seed: number, share: number) {
    this.random = seeded(seed);
    this.share = share;
  }
  /** Whether this call fails. */
  strikes(): boolean {
    this.calls += 1;
    const hits = this.random() < this.share;
    if (hits) this.faults += 1;
    return hits;
  }
  async through<T>(work: () => Promise<T>): Promise<T> {
    if (!this.strikes()) return work();
    if (this.random() < 0.5) await work();
    throw new Error('Network connection lost.');
  }
  around(d1: D1): D1 {
    const inner = new WeakMap<object, D1PreparedStatement>();
    const wrap = (statement: D1PreparedStatement): D1PreparedStatement => {
      const wrapped = { bind: (...values: unknown[]) => wrap(statement.bind(...values)), all: () => this.through(() => statement.all()), run: () => this.through(() => statement.run()) } as unknown as D1PreparedStatement;
      inner.set(wrapped, statement);
      return wrapped;
    };
    return { prepare: (sql) => wrap(d1.prepare(sql)), batch: (statements) => this.through<unknown>(() => d1.batch(statements.map((statement) => inner.get(statement) ?? statement))) as never };
  }
}

function featureOf(siteId: string): unknown {
  const [timeZone, lonDeg, latDeg] = ZONES[Number(siteId.slice(1))]!;
  return {
    type: 'Feature', id: siteId, geometry: { type: 'Point', coordinates: [lonDeg, latDeg, 1250] },
    properties: {
      kind: 'launch', name: `Site ${siteId}`, timeZone, facingDeg: 250, slopeDeg: 24, hill: { form: 'ridge', heightM: 180, halfLengthM: 320 },
      landing: { coordinates: [lonDeg - 0.02, latDeg - 0.01, 900], roughnessM: 0.03 },
    },
  };
}

/** `days` mornings from a date on. The oracles are asked after each day, so that the tables may be kept short. */
export async function simulate({ from, days, seed, share = 0.1 }: { readonly from: string; readonly days: number; readonly seed: number; readonly share?: number }): Promise<YearReport> {
  const weather = new Weather(seed, share);
  const house = new FastHouse({ nowIso: `${shiftDate(from, -1)}T09:00:00Z`, feature: featureOf });
  await house.seed(ZONES.map(([timeZone], index) => ({ id: `p${index}`, sites: [`s${index}`], urls: [hook(`p${index}`)], timeZone, dueIso: new Date(instantOfLocal(from, DELIVER, timeZone)).toISOString() })));
  const verdicts: readonly Verdict[] = ['within', 'within', 'close', 'beyond'];
  const dice = seeded(seed + 1);
  house.options = {
    ...house.options, around: (d1) => weather.around(d1),
    judge: (input) => judgedAs(input, verdicts[Math.floor(dice() * verdicts.length)] ?? 'unknown'),
    source: async (request) => (weather.strikes() ? new Map(request.sites.map((site) => [site.id, failure({ kind: 'unreachable' } as const)])) : answersTo(request, house.nowMs)),
    answer: () => new Response(null, { status: weather.strikes() ? 503 : 204 }),
    instead: (services) => ({ wake: async (step, calls) => { if (!weather.strikes()) await services.wake(step, calls); } }),
  };
  const told = new Map<string, string[]>();
  const bodies = new Map<string, string>();
  const totals = { mornings: 0, briefs: 0, absences: 0, changes: 0, tests: 0, late: 0 };
  const violations: string[] = [];
  const lastDate = shiftDate(from, days - 1);
  let seen = 0;
  let date = shiftDate(from, -1);
  const endMs = Date.parse(`${shiftDate(lastDate, 1)}T18:00:00Z`);

  for (let hourMs = Date.parse(`${date}T09:00:00Z`); hourMs < endMs; hourMs += HOUR_MS) {
    for (const atMs of ticksIn(hourMs)) {
      house.nowMs = atMs;
      try {
        await house.minute();
      } catch {
        // The platform notes a tick that failed, and goes on; so do the calls that are under way.
        await house.answerAll().catch(() => undefined);
      }
    }
    for (const post of house.posts.slice(seen)) {
      const dueDate = dateOf(post.url, post.data.days[0]?.localDate, post.data.text);
      if (post.atMs >= Date.parse(post.data.validUntil)) violations.push(`${post.id} came after it had ceased to be valid`);
      const body = JSON.stringify(post.data);
      if ((bodies.get(post.id) ?? body) !== body) violations.push(`${post.id} said two things`);
      if (post.type === 'brief.changed' && !bodies.has(post.id)) totals.changes += 1;
      if (post.type === 'service.test' && !bodies.has(post.id)) totals.tests += 1;
      bodies.set(post.id, body);
      if (post.type !== 'brief.issued' && post.type !== 'brief.missed') continue;
      const key = `${post.url} ${dueDate}`;
      const ids = told.get(key) ?? [];
      // The same again, because our mark of the first was lost.
      if (ids.includes(post.id)) continue;
      told.set(key, [...ids, post.id]);
      if (post.type === 'brief.issued') totals.briefs += 1;
      else totals.absences += 1;
      const zone = ZONES[Number(/p(\d+)$/.exec(post.url)?.[1])]?.[0] ?? 'UTC';
      if (post.atMs - instantOfLocal(dueDate, DELIVER, zone) > 30 * MINUTE_MS) totals.late += 1;
    }
    seen = house.posts.length;
    if (new Date(hourMs).getUTCHours() === 12) {
      bodies.clear();
      const wrong = house.d1.ask<{ n: number }>(`SELECT COUNT(*) AS n FROM outbox WHERE (state <> 'pending' AND (reason IS NULL OR settled_at IS NULL)) OR (state = 'pending' AND valid_until < ?)`, house.nowMs - HOUR_MS);
      if (wrong[0]!.n > 0) violations.push(`${wrong[0]!.n} rows are unaccounted for on ${date}`);
      date = shiftDate(date, 1);
    }
  }
  for (let day = from; day <= lastDate; day = shiftDate(day, 1)) {
    for (const index of ZONES.keys()) {
      totals.mornings += 1;
      const ids = told.get(`${hook(`p${index}`)} ${day}`) ?? [];
      if (ids.length !== 1) violations.push(`${ZONES[index]![0]} ${day}: ${ids.length} briefs or notices`);
    }
  }
  house.d1.close();
  const { late, ...counts } = totals;
  return { days, ...counts, calls: weather.calls, faults: weather.faults, lateShare: late / totals.mornings, violations };
}

/** The day a message is about: a brief names it, a notice says it in words. */
function dateOf(url: string, localDateOfSite: string | undefined, text: string): string {
  if (localDateOfSite !== undefined) return localDateOfSite;
  const said = /(\d{1,2} \w+ \d{4})/.exec(text)?.[1];
  return said === undefined ? `no day ${url}` : new Date(Date.parse(`${said} UTC`)).toISOString().slice(0, 10);
}

function ticksIn(hourMs: number): number[] {
  const minutes = new Set(HOURLY);
  for (const [timeZone] of ZONES) {
    for (const ahead of [0, -1]) {
      const dueMs = instantOfLocal(localDate(hourMs + ahead * HOUR_MS, timeZone), DELIVER, timeZone);
      for (const after of MORNING) {
        const minute = (dueMs + after * MINUTE_MS - hourMs) / MINUTE_MS;
        if (minute >= 0 && minute < 60) minutes.add(minute);
      }
    }
  }
  return [...minutes].sort((a, b) => a - b).map((minute) => hourMs + minute * MINUTE_MS);
}
