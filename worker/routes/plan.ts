/**
 * The training day: its pages and its API. GET reads and changes nothing; POST of the page keeps a plan behind a link of
 * its own and leads there; POST of the API answers and keeps nothing.
 */
import type { Context } from 'hono';
import { Hono } from 'hono/tiny';
import { CLOSING, INVENTED } from '../../lib/brief/words/index.ts';
import { READER } from '../../lib/brief/words/reader.ts';
import { parsePlanRequest } from '../../lib/config/plan.ts';
import { planChanges } from '../../lib/plan/changes.ts';
import { planCsv } from '../../lib/plan/csv.ts';
import { planDay } from '../../lib/plan/plan-day.ts';
import { planSentence, planTitle } from '../../lib/plan/words/index.ts';
import { messagePage } from '../web/message-page.ts';
import { planCalendar } from '../web/plan/calendar.ts';
import { jsonOf, typedOf } from '../web/plan/form-data.ts';
import { planPage, type PlanPage } from '../web/plan/plan-page.ts';
import type { KeptPlan, PlanServices } from '../web/plan/plan-services.ts';
import { jsonBody, readUpTo } from './body.ts';
import { PAGE_HEADERS } from './pages.ts';
import { API_HEADERS, json, problem } from './problem.ts';

const MAX_BYTES = 64 * 1024;

export function planApi(services: PlanServices): Hono {
  const app = new Hono();
  app.post('/', async (c) => {
    const waitS = services.wait(sender(c));
    if (waitS > 0) return problem('too-many', { detail: '30 plans a minute are made', headers: { 'retry-after': String(waitS) } });
    const body = await jsonBody(c.req.raw, MAX_BYTES);
    if (!body.ok) return body.error;
    const request = parsePlanRequest(body.value, await services.known());
    if (!request.ok) return problem('bad-input', { problems: request.error });
    const plan = planDay(request.value, await services.judge(request.value));
    return json({ ...plan, title: planTitle(plan), sentence: planSentence(plan), notice: plan.demo ? `${INVENTED}. ${CLOSING}` : CLOSING });
  });
  return app;
}

export function planPages(services: PlanServices): Hono {
  const app = new Hono();

  app.get('/', async (c) => {
    const known = await services.known();
    const example = exampleDay(services, known);
    const request = parsePlanRequest(example, known);
    const plan = request.ok ? planDay(request.value, await services.judge(request.value)) : null;
    return answer(c, pageOf(services, { known, json: request.ok ? request.value : example, plan }));
  });

  app.post('/', (c) => make(c, services, null));

  app.post('/:token', async (c) => {
    const kept = await services.kept(c.req.param('token'));
    return kept === null ? noPlan(c) : make(c, services, kept);
  });

  app.get('/:token', async (c) => {
    const kept = await services.kept(c.req.param('token'));
    if (kept === null) return noPlan(c);
    const [known, days] = await Promise.all([services.known(), services.judge(kept.request)]);
    const link = `/plan/${c.req.param('token')}`;
    const notices = planChanges(kept.request, kept.plan, days);
    return answer(c, pageOf(services, { known, json: kept.request, plan: kept.plan, action: link, view: { reader: READER, notices, link }, isTold: kept.isTold }));
  });

  app.post('/:token/notice', async (c) => {
    const kept = await services.kept(c.req.param('token'));
    return kept === null ? noPlan(c) : tell(c, services, kept);
  });

  app.get('/:token/:file', async (c) => {
    const { token, file } = c.req.param();
    const kept = file === 'plan.csv' || file === 'plan.ics' ? await services.kept(token) : null;
    if (kept === null) return problem('not-found');
    const isTable = file === 'plan.csv';
    const text = isTable ? planCsv(kept.plan, READER) : planCalendar(kept.plan, { id: kept.id, revision: kept.revision, reader: READER });
    const type = isTable ? 'text/csv; charset=utf-8' : 'text/calendar; charset=utf-8';
    return new Response(text, { headers: { ...API_HEADERS, 'content-type': type, 'content-disposition': `attachment; filename="training-day-${kept.plan.date}.${isTable ? 'csv' : 'ics'}"`, 'x-robots-tag': 'noindex' } });
  });

  return app;
}

/** Reads the form, plans, keeps, and leads to the plan's own address; what is wrong comes back with the form as it was. */
async function make(c: Context, services: PlanServices, before: KeptPlan | null): Promise<Response> {
  if (c.req.header('sec-fetch-site') === 'cross-site') return answer(c, messagePage({ title: 'Not from here', sentences: ['A plan is made from its own page.'] }), 403);
  const waitS = services.wait(sender(c));
  if (waitS > 0) return answer(c, messagePage({ title: 'Too many plans', sentences: [`The next plan can be made in ${waitS} s.`] }), 429);
  const bytes = await readUpTo(c.req.raw.body, MAX_BYTES);
  if (bytes === null) return answer(c, messagePage({ title: 'Too large', sentences: ['The day as it was sent is too large.'] }), 413);
  const typed = jsonOf(typedOf(new URLSearchParams(new TextDecoder().decode(bytes))));
  const known = await services.known();
  const request = parsePlanRequest(typed, known);
  const action = before === null ? '/plan' : c.req.path;
  if (!request.ok) return answer(c, pageOf(services, { known, json: typed, action, problems: request.error }), 400);
  const plan = planDay(request.value, await services.judge(request.value));
  const token = await services.keep({ request: request.value, plan }, before);
  if (token !== null) return new Response(null, { status: 303, headers: { ...PAGE_HEADERS, location: `/plan/${token}` } });
  return answer(c, pageOf(services, { known, json: request.value, plan, action, remark: 'This plan is not kept: no LINK_KEY is set, so that it can have no link.' }));
}

/** Whom to tell when a block turns. What is wrong with the link is not said: that there is no subscription behind it is all. */
async function tell(c: Context, services: PlanServices, kept: KeptPlan): Promise<Response> {
  const link = `/plan/${c.req.param('token')}`;
  if (c.req.header('sec-fetch-site') === 'cross-site') return answer(c, messagePage({ title: 'Not from here', sentences: ['Who is told is changed on the plan’s own page.'] }), 403);
  const waitS = services.wait(sender(c));
  if (waitS > 0) return answer(c, messagePage({ title: 'Too often', sentences: [`Please try again in ${waitS} s.`] }), 429);
  const bytes = await readUpTo(c.req.raw.body, MAX_BYTES);
  const form = new URLSearchParams(new TextDecoder().decode(bytes ?? new Uint8Array()));
  if (!(await services.tell(kept, form.has('stop') ? null : form.get('manage') ?? ''))) {
    return answer(c, messagePage({ title: 'Nobody is told', sentences: ['There is no subscription behind this link. It is the link that every brief carries to change its subscription.'] }), 400);
  }
  return new Response(null, { status: 303, headers: { ...PAGE_HEADERS, location: link } });
}

/** The worked example where its sites are; else every site there is, and a group to begin with. */
function exampleDay(services: PlanServices, known: PlanPage['known']): unknown {
  const example = services.example();
  if (parsePlanRequest(example, known).ok) return example;
  const zone = known.sites[0]?.timeZone;
  const sites = known.sites.filter(({ timeZone }) => timeZone === zone).slice(0, 8).map(({ id }) => ({ id, capacity: 1 }));
  return { instructors: 1, movingMin: 30, sites, groups: [] };
}

function pageOf(services: PlanServices, page: Pick<PlanPage, 'known' | 'json'> & Partial<PlanPage>): string {
  return planPage({ now: services.now(), action: '/plan', plan: null, view: { reader: READER, notices: [], link: null }, problems: [], remark: null, isTold: null, ...page });
}

function answer(c: Context, page: string, status: 200 | 400 | 403 | 404 | 413 | 429 = 200): Response {
  return c.html(page, status, { ...PAGE_HEADERS, 'x-robots-tag': 'noindex' });
}

function noPlan(c: Context): Response {
  return answer(c, messagePage({ title: 'No such plan', sentences: ['Nothing is kept behind this link: it may have been revoked, or its time is over.'] }), 404);
}

function sender(c: Context): string {
  return c.req.header('cf-connecting-ip') ?? 'unknown';
}
