import { Hono } from 'hono/tiny';
import type { Issue } from '../../lib/result.ts';
import { sweep } from '../morning/sweep.ts';
import { tick } from '../morning/tick.ts';
import { followingDueMs, SHORT_PATIENCE } from '../morning/times.ts';
import { sameText } from '../secrets.ts';
import type { Services } from '../service-set.ts';
import { jsonBody } from './body.ts';
import { json, problem } from './problem.ts';
import { readSeed } from './seed.ts';

/** What the commands of worker/local ask of a worker on the same machine; mounted with LOCAL=1 only, behind the token of that start. */
const MAX_SEED_BYTES = 16 * 1024 * 1024;

export function local(services: Services): Hono {
  const { stores, clock } = services;
  const app = new Hono();

  app.use(async (c, next) => {
    const token = /^Bearer (\S+)$/.exec(c.req.header('authorization') ?? '')?.[1];
    const isOurs = token !== undefined && services.settings.localToken !== null && (await sameText(token, services.settings.localToken));
    return isOurs ? next() : problem('not-allowed');
  });

  /** Sites, sheets, wings and subscribers as of now; those that are left out are retired. */
  app.post('/seed', async (c) => {
    const body = await jsonBody(c.req.raw, MAX_SEED_BYTES);
    if (!body.ok) return body.error;
    const nowMs = clock.nowMs();
    const seed = readSeed(body.value);
    const issues: Issue[] = [
      ...seed.sites.flatMap((site) => issuesOf(services.read.site({ ...site, storedAtMs: nowMs }))),
      ...seed.sheets.flatMap((sheet) => issuesOf(services.read.sheet(sheet))),
      ...seed.wings.flatMap((wing) => issuesOf(services.read.wing(wing))),
    ];
    if (issues.length > 0) return problem('bad-input', { problems: issues });
    await stores.db.together([
      ...stores.site.replaceAll(seed.sites, nowMs),
      stores.sheet.put(seed.sheets, nowMs),
      stores.wing.put(seed.wings),
      ...stores.published.replaceAll(seed.published),
      ...stores.subscription.put(seed.subscriptions.map((item) => ({ ...item, nextDueAtMs: followingDueMs(item, nowMs) })), nowMs),
      stores.channel.put(seed.subscriptions.flatMap((item) => item.channels.map((channel) => ({ ...channel, subscriptionId: item.id, state: 'active' as const }))), nowMs),
    ]);
    return json({ sites: seed.sites.length, subscriptions: seed.subscriptions.length });
  });

  /** A new start on a folder that only one start can hold: leases of the one before would only make everybody wait. */
  app.post('/begin', async () => {
    await stores.db.together(stores.outboxUpkeep.dropLeases());
    return json({ at: clock.nowMs() });
  });

  /** This morning, now. */
  app.post('/morning', async () => {
    const nowMs = clock.nowMs();
    const due = stores.subscription.makeAllDue(nowMs);
    await stores.db.write(due.sql, ...due.values);
    await tick(services, nowMs, SHORT_PATIENCE);
    return json({ at: nowMs });
  });

  app.post('/sweep', async () => {
    await sweep(services, clock.nowMs());
    return json({ at: clock.nowMs() });
  });

  app.get('/progress', async () => json({ work: await stores.run.openCounts(), outbox: await stores.outboxUpkeep.counts() }));

  app.get('/terminal', async (c) => json(await stores.terminal.after(Number(c.req.query('after') ?? 0) || 0)));

  return app;
}

function issuesOf(result: { readonly ok: true } | { readonly ok: false; readonly error: Issue[] }): Issue[] {
  return result.ok ? [] : result.error;
}
