/** Sites by form and by file: read and written through the handlers of the API, whose checks are the only ones. */
import { parseJsonStrict } from '../../lib/config/json.ts';
import { valueAt } from '../../lib/config/path.ts';
import { parseSiteFeature } from '../../lib/config/site.ts';
import { parseSites } from '../../lib/config/sites.ts';
import type { Issue } from '../../lib/result.ts';
import type { Site } from '../../lib/site.ts';
import type { DeskServices } from '../service-set.ts';
import { textIn } from '../web/forms/wishes.ts';
import { computedRows } from '../web/operator/computed.ts';
import { boardForm } from '../web/operator/home-page.ts';
import { importPage, type ImportPlan } from '../web/operator/import-page.ts';
import { featureOf, formOfFeature, newSiteForm } from '../web/operator/site-json.ts';
import { elsewhere, sitePage } from '../web/operator/site-page.ts';
import { sitesAndSheets } from './forms-data.ts';
import { call } from './operator-calls.ts';
import { seeOther, shown } from './page-answers.ts';

type Feature = Readonly<Record<string, unknown>>;

export interface Visit {
  readonly services: DeskServices;
  readonly stamp: string;
  readonly said: string | null;
}

interface Sites {
  readonly features: readonly Feature[];
  readonly etag: string;
}

async function sitesNow(services: DeskServices): Promise<Sites> {
  const { body, etag } = await call(services, 'GET', '/sites');
  const features = valueAt(body, ['features']);
  return { features: Array.isArray(features) ? (features as Feature[]) : [], etag };
}

const SAID: Readonly<Record<string, string>> = {
  added: 'Saved. Rehearse a brief to see what these figures do, then show it on the board.', saved: 'Saved. From the next brief on this counts.',
  shown: 'It is on the board from the next morning on, or as soon as its forecasts are there.', hidden: 'It is off the board.',
};

function kindOf(feature: Feature | undefined): Site['kind'] {
  return valueAt(feature, ['properties', 'kind']) === 'strip' ? 'strip' : 'launch';
}

/** The page of a site as it is, or as it was typed. */
async function page(visit: Visit, at: { readonly id: string | null; readonly kind: Site['kind']; readonly form: FormData; readonly feature: unknown; readonly etag: string; readonly problems: readonly Issue[]; readonly status: number }): Promise<Response> {
  const { services, stamp, said } = visit;
  const { id, kind, form, feature, etag, problems, status } = at;
  const [published, known] = id === null ? [[], null] : [await services.stores.published.all(), await sitesAndSheets(services)];
  const name = textIn(form, 'name');
  return shown(sitePage({
    title: name === '' ? `A new ${kind}` : name, stamp, said: said === null ? null : (SAID[said] ?? null), problems: elsewhere(problems), fieldProblems: problems, kind, id, form, etag,
    computed: computedRows(feature, services.clock.nowMs()), action: id === null ? `/operator/new/${kind}` : `/operator/sites/${encodeURIComponent(id)}`,
    board: id === null || known === null ? null : boardForm({ id, kind, sheets: known.sheets, pairs: published.filter(({ siteId }) => siteId === id), stamp }),
  }), status);
}

export async function newSite(visit: Visit, kind: Site['kind']): Promise<Response> {
  const { etag } = await sitesNow(visit.services);
  return page(visit, { id: null, kind, form: newSiteForm(kind), feature: null, etag, problems: [], status: 200 });
}

export async function oneSite(visit: Visit, id: string): Promise<Response | null> {
  const { features, etag } = await sitesNow(visit.services);
  const feature = features.find((one) => one['id'] === id);
  return feature === undefined ? null : page(visit, { id, kind: kindOf(feature), form: formOfFeature(feature), feature, etag, problems: [], status: 200 });
}

/** `id`: null for a new site. Looks, or saves what can be saved; the rest comes back as it was typed. */
export async function sentSite(visit: Visit, { id, kind: asked }: { readonly id: string | null; readonly kind: Site['kind'] }, form: FormData): Promise<Response | null> {
  const { services } = visit;
  const { features, etag } = await sitesNow(services);
  const before = id === null ? undefined : features.find((one) => one['id'] === id);
  if (id !== null && before === undefined) return null;
  const to = textIn(form, 'to');
  if (to === 'retire') return retire(visit, id ?? '', features, textIn(form, 'etag'));
  const kind = before === undefined ? asked : kindOf(before);
  const { feature, issues } = featureOf(form, kind, before);
  const parsed = parseSiteFeature(feature, { nowMs: services.clock.nowMs() });
  // What the fields could not even be written as is said once, and not as missing besides.
  const rest = parsed.ok ? [] : parsed.error.filter(({ path }) => issues.every((issue) => path !== issue.path && !path.startsWith(`${issue.path}[`)));
  const isTaken = id === null && features.some((one) => one['id'] === feature['id']);
  const taken: Issue[] = isTaken ? [{ path: '$.id', value: JSON.stringify(feature['id']), problem: 'a site of this name is here already', allowed: 'another name' }] : [];
  const problems = [...issues, ...rest, ...taken];
  const again = (found: readonly Issue[], status: number): Promise<Response> => page(visit, { id, kind, form, feature, etag: status === 412 ? etag : textIn(form, 'etag') || etag, problems: found, status });
  if (to !== 'save') return again([], 200);
  if (problems.length > 0) return again(problems, 400);
  const list = id === null ? [...features, feature] : features.map((one) => (one === before ? feature : one));
  const written = await call(services, 'PUT', '/sites', { body: { type: 'FeatureCollection', features: list }, etag: textIn(form, 'etag') });
  if (written.status === 412) return again([{ path: '$', value: '', problem: 'somebody else has changed the sites since this page was made', allowed: 'to save once more, if what you typed still holds' }], 412);
  if (written.problems.length > 0) return again(written.problems.map((issue) => ({ ...issue, path: issue.path.replace(`$.features[${list.indexOf(feature)}]`, '$') })), 400);
  return seeOther(`/operator/sites/${encodeURIComponent(String(feature['id']))}?said=${id === null ? 'added' : 'saved'}`);
}

async function retire(visit: Visit, id: string, features: readonly Feature[], etag: string): Promise<Response> {
  const written = await call(visit.services, 'PUT', '/sites', { body: { type: 'FeatureCollection', features: features.filter((one) => one['id'] !== id) }, etag });
  const feature = features.find((one) => one['id'] === id);
  const problems = written.problems.map((issue) => (issue.path === '$.features' ? { ...issue, problem: 'the last site cannot be retired', allowed: 'another site first' } : issue));
  if (problems.length > 0) return page(visit, { id, kind: kindOf(feature), form: formOfFeature(feature), feature, etag: (await sitesNow(visit.services)).etag, problems, status: 400 });
  return seeOther('/operator?said=retired');
}

/** The pairs of the board, one more or one less. */
export async function board({ services }: Visit, form: FormData): Promise<Response> {
  const [site, wing, sheet] = [textIn(form, 'site'), textIn(form, 'wing'), textIn(form, 'sheet')];
  const pairs = (await services.stores.published.all()).map(({ siteId, wingKey, sheetId }) => ({ site: siteId, wing: wingKey, sheet: sheetId }));
  const others = pairs.filter((pair) => pair.site !== site || pair.wing !== wing || pair.sheet !== sheet);
  const isShow = textIn(form, 'to') === 'show';
  const written = await call(services, 'PUT', '/published', { body: isShow ? [...others, { site, wing, sheet }] : others });
  const said = written.problems.length > 0 ? '' : isShow ? '?said=shown' : '?said=hidden';
  return seeOther(`/operator/sites/${encodeURIComponent(site)}${said}#board`);
}

export async function exported(services: DeskServices): Promise<Response> {
  const { body } = await call(services, 'GET', '/sites');
  return new Response(`${JSON.stringify(body, null, 2)}\n`, { headers: { 'content-type': 'application/geo+json', 'content-disposition': 'attachment; filename="dawnmargin-sites.geojson"', 'cache-control': 'no-store', 'x-content-type-options': 'nosniff' } });
}

export async function importStart({ services, stamp }: Visit): Promise<Response> {
  const { features, etag } = await sitesNow(services);
  return shown(importPage({ title: 'Sites in and out', stamp, text: '', isWhole: false, plan: null, fieldProblems: [], etag, count: features.length }));
}

export async function imported({ services, stamp }: Visit, form: FormData): Promise<Response> {
  const { features: now, etag } = await sitesNow(services);
  const file = form.get('file');
  const typed = form.get('text');
  const text = typeof file === 'object' && file !== null && file.size > 0 ? await file.text() : typeof typed === 'string' ? typed : '';
  const isWhole = form.get('whole') === '1';
  const answer = (fieldProblems: readonly Issue[], plan: ImportPlan | null, status: number): Response => shown(importPage({ title: 'Sites in and out', stamp, text, isWhole, plan, fieldProblems, etag, count: now.length }), status);
  const json = parseJsonStrict(text);
  if (!json.ok) return answer(json.error, null, 400);
  const sites = parseSites(json.value, { nowMs: services.clock.nowMs() });
  if (!sites.ok) return answer(sites.error, null, 400);
  const given = (json.value as { readonly features: readonly Feature[] }).features;
  const has = (list: readonly Feature[], one: Feature): Feature | undefined => list.find((other) => other['id'] === one['id']);
  const ids = (list: readonly Feature[]): string[] => list.map((one) => String(one['id']));
  const plan: ImportPlan = {
    added: ids(given.filter((one) => has(now, one) === undefined)),
    same: ids(given.filter((one) => JSON.stringify(has(now, one)) === JSON.stringify(one))),
    changed: ids(given.filter((one) => { const old = has(now, one); return old !== undefined && JSON.stringify(old) !== JSON.stringify(one); })),
    retired: isWhole ? ids(now.filter((one) => has(given, one) === undefined)) : [],
  };
  if (textIn(form, 'to') !== 'save') return answer([], plan, 200);
  const list = isWhole ? given : [...now.filter((one) => has(given, one) === undefined), ...given];
  const written = await call(services, 'PUT', '/sites', { body: { type: 'FeatureCollection', features: list }, etag: textIn(form, 'etag') });
  if (written.problems.length > 0) return answer(written.problems, plan, written.status === 412 ? 412 : 400);
  return seeOther('/operator?said=imported');
}
