import { HOUR_MS } from '../../lib/time.ts';
import { canaryNotes } from '../morning/canary.ts';
import { imbalances } from '../morning/heartbeat.ts';
import type { Services } from '../service-set.ts';
import { schemaProblem, type MetaKey } from '../store/meta.ts';
import { json, problem } from './problem.ts';

/** A cron that has not come for so long is worth a look. */
const QUIET_MS = 5 * 60_000;

const STEPS = ['tick', 'fetch', 'assess', 'deliver', 'sweep', 'recheck', 'notice', 'absent', 'self-test', 'weekly-test', 'balance', 'heartbeat'] as const;

/** The watchdog is told every five minutes; so long without it is worth a look. */
const UNHEARD_MS = 15 * 60_000;

/** How this service is: 200 with the state of every step, 503 only when the database or its schema cannot be used. */
export async function health(services: Pick<Services, 'stores' | 'clock' | 'settings'>): Promise<Response> {
  const { stores } = services;
  const nowMs = services.clock.nowMs();
  let meta: ReadonlyMap<string, string>;
  try {
    meta = await stores.meta.all();
  } catch {
    return problem('unusable', { detail: 'the database does not answer, or has no tables' });
  }
  const unfit = schemaProblem(meta.get('schema'));
  if (unfit !== null) return problem('unusable', { detail: unfit });
  const [outbox, work, ages, errors, books] = await Promise.all([stores.outboxUpkeep.counts(), stores.run.openCounts(), stores.forecast.ages(), stores.log.newest(10), stores.absence.books(nowMs)]);
  const lastAt = (step: (typeof STEPS)[number]): number | null => {
    const key: MetaKey = `last-${step}`;
    return meta.has(key) ? Number(meta.get(key)) : null;
  };
  const tickMs = lastAt('tick');
  const standBys = canaryNotes(meta.get('canary'));
  const warnings = [
    ...(tickMs === null || nowMs - tickMs > QUIET_MS ? ['no tick for more than five minutes: briefs are not being made'] : []),
    ...imbalances(books, { judge: meta.get('judge-fault') ?? '', clock: meta.get('clock-fault') ?? '' }),
    ...(services.settings.heartbeatUrl !== null && nowMs - (lastAt('heartbeat') ?? 0) > UNHEARD_MS ? ['the watchdog outside has not been told for more than fifteen minutes'] : []),
    ...(services.settings.linkKey === null ? ['LINK_KEY is not set: no webhook can be signed'] : []),
    ...(work.failed > 0 ? [`${work.failed} pieces of work were given up`] : []),
    ...standBys.flatMap(({ source, wrong }) => (wrong === null ? [] : [`the source ${source}, which stands by, failed its weekly trial: ${wrong}`])),
    ...(outbox.dead > 0 ? [`${outbox.dead} messages could not be delivered`] : []),
  ];
  return json({
    status: warnings.length === 0 ? 'working' : 'needs a look',
    at: iso(nowMs),
    warnings,
    steps: Object.fromEntries(STEPS.map((step) => [step, { lastAt: iso(lastAt(step)) }])),
    work: { toFetch: work.fetch, toAssess: work.assess, givenUp: work.failed },
    outbox: { created: Object.values(outbox).reduce((sum, count) => sum + count, 0), ...outbox },
    sources: ages.map(({ source, fetchedAtMs, runAtMs, sites }) => ({
      source, sites, fetchedAt: iso(fetchedAtMs), runAt: runAtMs < 0 ? null : iso(runAtMs),
      runAgeHours: runAtMs < 0 ? null : Math.round(((nowMs - runAtMs) / HOUR_MS) * 10) / 10,
    })),
    standBys,
    log: errors.map(({ at, level, step, event, detail }) => ({ at: iso(at), level, step, event, detail: detail === null ? null : (JSON.parse(detail) as unknown) })),
  });
}

function iso(epochMs: number | null): string | null {
  return epochMs === null ? null : new Date(epochMs).toISOString();
}
