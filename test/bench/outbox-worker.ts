// Inside the runtime: a hundred thousand subscribers, and how long their morning takes to plan, against the barest write of
// as many rows. The clock of the local runtime moves with every answer of the database.
import { planDue } from '../../worker/morning/due.ts';
import { createServices } from '../../worker/services.ts';
import type { Env } from '../../worker/settings.ts';

const DUE_MS = Date.parse('2027-05-14T04:00:00Z');

// oxlint-disable-next-line import/no-default-export -- a worker is its default export
export default {
  async fetch(request: Request, env: Env): Promise<Response> {
    const { count, feature } = await request.json<{ count: number; feature: string }>();
    const run = (sql: string): Promise<D1Result> => env.DB.prepare(sql).run();
    const numbers = `WITH RECURSIVE n(i) AS (SELECT 1 UNION ALL SELECT i + 1 FROM n WHERE i < ${count})`;
    await env.DB.prepare(`INSERT INTO site (id, feature, demo, stored_at) VALUES ('north', ?, 1, 0)`).bind(feature).run();
    await run(`INSERT INTO subscription (id, state, time_zone, deliver_minute, next_due_at, stored_at) ${numbers} SELECT lower(hex(randomblob(12))), 'active', 'Europe/Vienna', 360, ${DUE_MS}, 0 FROM n`);
    await run(`INSERT INTO channel (id, subscription_id, rank, kind, target, state, stored_at) SELECT id || '-0', id, 0, 'push', '{}', 'active', 0 FROM subscription`);
    await run(`INSERT INTO subscription_site (subscription_id, site_id, wing_key, sheet_id) SELECT id, 'north', 'EN B', 'hill' FROM subscription`);

    const timed = async (work: () => Promise<unknown>): Promise<number> => {
      const begunMs = Date.now();
      await work();
      return Date.now() - begunMs;
    };
    await run('CREATE TABLE bare (subscription_id TEXT, channel_id TEXT, state TEXT, due_at INTEGER)');
    const bareMs = await timed(() => run(`INSERT INTO bare SELECT id, id || '-0', 'pending', ${DUE_MS} FROM subscription`));
    await run('CREATE TABLE keyed (id TEXT PRIMARY KEY, subscription_id TEXT, channel_id TEXT, state TEXT, due_at INTEGER, UNIQUE (subscription_id, channel_id))');
    const keyedMs = await timed(() => run(`INSERT INTO keyed SELECT lower(hex(randomblob(16))), id, id || '-0', 'pending', ${DUE_MS} FROM subscription`));

    const services = createServices(env);
    if (!services.ok) throw new Error('the settings of the bench are wrong');
    const { stores } = services.value;
    const group = { timeZone: 'Europe/Vienna', deliverMinute: 360, nextDueAtMs: DUE_MS, days: 127 };
    const rows = stores.outbox.plan([{ ...group, kind: 'brief', dueLocalDate: '2027-05-13', dueAtMs: DUE_MS - 86_400_000, readyByMs: DUE_MS, validUntilMs: DUE_MS }], DUE_MS);
    const rowsMs = await timed(() => stores.db.together([rows]));
    await run('DELETE FROM outbox');
    const morningMs = await timed(() => planDue(services.value, DUE_MS));
    const planned = (await env.DB.prepare(`SELECT COUNT(*) AS n FROM outbox WHERE state = 'pending'`).first<{ n: number }>())?.n;
    return Response.json({ bareMs, keyedMs, rowsMs, morningMs, planned });
  },
};
