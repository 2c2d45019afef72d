/** The questions of the training day answered from the tables: stored briefs as they were issued, other pairs judged now. */
import type { JudgedDay } from '../../../lib/brief/day.ts';
import type { PlanContext } from '../../../lib/config/plan.ts';
import type { DayPlan } from '../../../lib/plan/day-plan.ts';
import { dayKey, pairsOf, type JudgedDays, type PlanRequest } from '../../../lib/plan/request.ts';
import demoJson from '../../../config/plan-demo.json' with { type: 'json' };
import { answersFor } from '../../morning/answers.ts';
import { dayInput } from '../../morning/assess.ts';
import { placesOf } from '../../morning/places.ts';
import { judgedDate } from '../../morning/times.ts';
import { limiter } from '../../routes/limiter.ts';
import { linkToken, readLinkToken } from '../../secrets.ts';
import { subscriptionOf } from '../../security/manage.ts';
import type { DeskServices } from '../../service-set.ts';
import type { PlanServices } from './plan-services.ts';

/** A plan costs far more than a page. */
const perMinute = limiter(30);

export function planServices(services: DeskServices): PlanServices {
  const { stores, clock, settings } = services;
  return {
    now: () => new Date(clock.nowMs()),
    wait: (who) => (settings.local ? 0 : perMinute.take(who, clock.nowMs())),
    known: () => known(services),
    example: () => demoJson,
    judge: (request) => judgedDays(services, request),
    async keep({ request, plan }, before) {
      if (settings.linkKey === null) return null;
      const id = before?.id ?? services.ids.next();
      const row = { id, revision: (before?.revision ?? 0) + 1, localDate: request.date, request: JSON.stringify(request), body: JSON.stringify(plan) };
      await stores.db.together([...stores.plan.put(row, clock.nowMs()), ...(before?.isTold === true ? [stores.wing.put(wingsOf(request))] : [])]);
      return linkToken(settings.linkKey, { purpose: 'plan', id, version: (await stores.plan.one(id))?.linkVersion ?? 1 });
    },
    async kept(token) {
      const named = settings.linkKey === null ? null : await readLinkToken(settings.linkKey, 'plan', token);
      const row = named === null ? null : await stores.plan.one(named.id);
      if (row === null || row.linkVersion !== named?.version) return null;
      try {
        return { id: row.id, revision: row.revision, request: JSON.parse(row.request) as PlanRequest, plan: JSON.parse(row.body) as DayPlan, isTold: row.subscriptionId !== null };
      } catch {
        return null;
      }
    },
    async tell({ id, request }, manageLink) {
      const detail = manageLink === null ? null : await subscriptionOf(services, 'manage', /[^/\s]*(?=\s*$)/.exec(manageLink)?.[0] ?? '');
      if (manageLink !== null && detail === null) return false;
      await stores.db.together([stores.wing.put(wingsOf(request)), stores.plan.tell(id, detail?.id ?? null)]);
      return true;
    },
  };
}

/** The morning judges the blocks of a plan that somebody is told about anew each hour: it must know their wings. */
function wingsOf(request: PlanRequest): { readonly key: string; readonly name: string; readonly body: string }[] {
  return [...new Set(request.groups.map(({ wing }) => wing))].map((wing) => ({ key: wing, name: wing, body: JSON.stringify({ class: wing }) }));
}

async function known(services: DeskServices): Promise<PlanContext> {
  const [sites, sheets] = await Promise.all([services.stores.site.all(), services.stores.sheet.newest()]);
  return {
    sites: sites.flatMap((row) => { const place = services.read.site(row); return place.ok ? [place.value.site] : []; }),
    sheets: sheets.flatMap((row) => { const sheet = services.read.sheet(row); return sheet.ok ? [sheet.value] : []; }),
    dateAt: (site) => judgedDate(site, services.clock.nowMs()),
  };
}

async function judgedDays(services: DeskServices, request: PlanRequest): Promise<JudgedDays> {
  const pairs = pairsOf(request);
  const localDate = request.date;
  const stored = await services.stores.brief.bodies(pairs.map(({ site, wing, sheet }) => ({ siteId: site, localDate, wingKey: wing, sheetId: sheet })));
  const days = new Map<string, JudgedDay>();
  for (const { siteId, wingKey, sheetId, body } of stored) {
    const day = parsed(body);
    if (day !== null) days.set(dayKey({ site: siteId, wing: wingKey, sheet: sheetId }), day);
  }
  const missing = pairs.filter((pair) => !days.has(dayKey(pair)));
  const [places, { sheets }] = await Promise.all([placesOf(services, [...new Set(missing.map(({ site }) => site))]), known(services)]);
  for (const place of places.values()) {
    const answers = await answersFor(services, place, localDate);
    for (const pair of missing.filter(({ site }) => site === place.site.id)) {
      const sheet = sheets.find(({ id }) => id === pair.sheet);
      if (sheet === undefined) continue;
      const parts = { place, localDate, run: { wingKey: pair.wing }, wing: services.wingClasses()[pair.wing], wingName: pair.wing, sheet, answers, nowMs: services.clock.nowMs() };
      days.set(dayKey(pair), services.judge(dayInput(parts)));
    }
  }
  return days;
}

function parsed(body: string): JudgedDay | null {
  try {
    return JSON.parse(body) as JudgedDay;
  } catch {
    return null;
  }
}
