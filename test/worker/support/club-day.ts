// A day of a club on the test database, counted: what the platform would count, and what it would charge for.
import { env } from 'cloudflare:workers';
import { tick } from '../../../worker/morning/tick.ts';
import type { D1 } from '../../../worker/store/database.ts';
import type { Step } from '../../../worker/morning/job.ts';
import { newHouse, type House } from './house.ts';
import { judgedAs } from './stand-ins.ts';

export interface Club {
  readonly sites: number;
  readonly subscribers: number;
  /** How many of them fly a wing of their own, so that nobody shares their brief. */
  readonly personalWings: number;
}

export interface DayCount {
  readonly invocations: number;
  readonly most: { readonly calls: number; readonly where: string };
  readonly messages: number;
  readonly statements: number;
  readonly rowsRead: number;
  readonly rowsWritten: number;
  readonly sends: number;
  /** How often a site was asked about at its source. */
  readonly siteFetches: number;
  /** Of the database at the end of the day, with what it began with taken off. */
  readonly storedBytes: number;
  /** The statements that read most, dearest first. */
  readonly dearest: readonly { readonly sql: string; readonly runs: number; readonly rowsRead: number; readonly rowsWritten: number }[];
  /** The last of each half hour was handed over so long after it, min. */
  readonly lateMin: number;
}

/** Counts what D1 itself says it has read and written. */
export class Meter {
  rowsRead = 0;
  rowsWritten = 0;
  statements = 0;
  sizeBytes = 0;
  /** Rows read by each statement's text. */
  readonly bySql = new Map<string, { runs: number; rowsRead: number; rowsWritten: number }>();

  around(d1: D1): D1 {
    const count = <T extends { readonly meta: Record<string, unknown> }>(result: T, sql: string): T => {
      this.statements += 1;
      this.rowsRead += Number(result.meta['rows_read'] ?? 0);
      this.rowsWritten += Number(result.meta['rows_written'] ?? 0);
      const before = this.bySql.get(sql) ?? { runs: 0, rowsRead: 0, rowsWritten: 0 };
      this.bySql.set(sql, { runs: before.runs + 1, rowsRead: before.rowsRead + Number(result.meta['rows_read'] ?? 0), rowsWritten: before.rowsWritten + Number(result.meta['rows_written'] ?? 0) });
      this.sizeBytes = Number(result.meta['size_after'] ?? this.sizeBytes);
      return result;
    };
    const counted = (statement: D1PreparedStatement, sql: string): D1PreparedStatement => new Proxy(statement, {
      get: (target, name) => {
        if (name === 'bind') return (...values: unknown[]) => counted(target.bind(...values), sql);
        if (name === 'all' || name === 'run') return async () => count(await target[name](), sql);
        if (name === 'bare') return { statement: target, sql };
        return Reflect.get(target, name) as unknown;
      },
    });
    const bare = (statement: D1PreparedStatement) => (statement as unknown as { readonly bare: { readonly statement: D1PreparedStatement; readonly sql: string } }).bare;
    return {
      prepare: (sql) => counted(d1.prepare(sql), sql),
      batch: async <T>(statements: D1PreparedStatement[]) => {
        const known = statements.map(bare);
        return (await d1.batch<T>(known.map(({ statement }) => statement))).map((result, index) => count(result, known[index]?.sql ?? ''));
      },
    };
  }
}

const DAY_BEGINS = '2027-05-14T02:00:00Z';

/** What was sent in a fortnight is kept, and read past: a house is seldom new. */
async function lastFortnight(): Promise<void> {
  await env.DB.prepare(`INSERT INTO outbox (id, subscription_id, channel_id, due_local_date, kind, seq, format, due_at, ready_by, valid_until, state, reason, attempts,
      next_attempt_at, content, created_at, settled_at)
    WITH RECURSIVE day(n) AS (SELECT 1 UNION ALL SELECT n + 1 FROM day WHERE n < 13), sent AS (
      SELECT s.id, c.id AS channel, day.n, s.next_due_at - day.n * 86400000 AS due FROM day CROSS JOIN subscription AS s JOIN channel AS c ON c.subscription_id = s.id)
    SELECT 'day' || n || channel, id, channel, date(due / 1000, 'unixepoch'), 'brief', 1, 1, due, due, due, 'sent', 'taken by the receiver', 1, due, '{"briefs":[]}', due, due FROM sent`).run();
}

/** Four hours of minutes around the morning, then the rest of the day hour by hour: a minute of each kind stands for all. */
export async function clubDay({ sites: siteCount, subscribers: subscriberCount, personalWings }: Club): Promise<{ readonly count: DayCount; readonly house: House }> {
  const meter = new Meter();
  const house = await newHouse({ nowIso: DAY_BEGINS, judge: (input) => judgedAs(input, 'close'), around: (d1) => meter.around(d1) });
  const sites = Array.from({ length: siteCount }, (_, index) => `site-${index}`);
  const subscribers = Array.from({ length: subscriberCount }, (_, index) => ({
    id: `s${index}`,
    sites: [...new Set([sites[index % siteCount] ?? '', sites[(index * 7 + 3) % siteCount] ?? ''])],
    urls: [`http://127.0.0.1:${9000 + (index % 50_000)}/hook`],
    // Chosen times cluster on the hour and the half hour.
    deliverMinute: 300 + (index % 5) * 30,
    dueIso: new Date(Date.parse('2027-05-14T03:00:00Z') + (index % 5) * 30 * 60_000).toISOString(),
    ...(index < personalWings ? { wing: `own-${index}` } : {}),
  }));
  await house.seed(subscribers, sites);
  const { stores } = house.services();
  await lastFortnight();
  await stores.db.together(stores.published.replaceAll(sites.map((siteId) => ({ siteId, wingKey: 'EN B', sheetId: 'hill' }))));
  const sizeBefore = meter.sizeBytes;
  Object.assign(meter, { rowsRead: 0, rowsWritten: 0, statements: 0 });
  meter.bySql.clear();

  let most = { calls: 0, where: '' };
  let messages = 0;
  let invocations = 0;
  const counted = async (where: string, work: () => Promise<void>): Promise<void> => {
    house.calls = { db: 0, fetch: 0, queue: 0 };
    const before = house.queue.length;
    await work();
    invocations += 1;
    const calls = house.calls.db + house.calls.fetch + house.calls.queue;
    if (calls > most.calls) most = { calls, where };
    messages += Math.max(0, house.queue.length - before);
  };
  const minute = async (): Promise<void> => {
    const services = house.services();
    await counted('tick', () => tick(services, house.nowMs));
    for (let step = house.queue.shift(); step !== undefined; step = house.queue.shift()) {
      const next: Step = step;
      await counted(next, () => house.answer(next));
    }
  };
  for (let index = 0; index < 4 * 60; index += 1) {
    await minute();
    house.nowMs += 60_000;
  }
  /** A minute like so many others of its hour. */
  const minuteLike = async (others: number): Promise<void> => {
    const before = { invocations, messages, statements: meter.statements, rowsRead: meter.rowsRead, rowsWritten: meter.rowsWritten };
    await minute();
    invocations += others * (invocations - before.invocations);
    messages += others * (messages - before.messages);
    meter.statements += others * (meter.statements - before.statements);
    meter.rowsRead += others * (meter.rowsRead - before.rowsRead);
    meter.rowsWritten += others * (meter.rowsWritten - before.rowsWritten);
  };
  for (let hour = 0; hour < 20; hour += 1) {
    // The minutes of the board and of the recheck, each with two in which notices are looked for, then those in which nothing happens.
    for (const [atMin, others] of [[7, 0], [8, 0], [9, 0], [10, 0], [11, 0], [12, 0], [14, 42], [15, 10]] as const) {
      house.nowMs = Date.parse('2027-05-14T06:00:00Z') + hour * 3_600_000 + atMin * 60_000;
      await minuteLike(others);
    }
  }
  const lateMin = Math.max(...house.posts.map((post) => (post.atMs % 1_800_000) / 60_000));
  const dearest = [...meter.bySql].map(([sql, counts]) => ({ sql, ...counts })).sort((one, other) => other.rowsRead - one.rowsRead).slice(0, 8);
  const { statements, rowsRead, rowsWritten, sizeBytes } = meter;
  return { house, count: { invocations, most, messages, statements, rowsRead, rowsWritten, sends: house.posts.length, siteFetches: house.asked.reduce((sum, { sites: of }) => sum + of.length, 0), storedBytes: sizeBytes - sizeBefore, dearest, lateMin } };
}
