/** Limit sheets by form: what a change loosens is shown before it counts, and has to be meant. */
import { parseSheet } from '../../lib/config/sheet.ts';
import { sheetChanges, type SheetChange } from '../../lib/config/sheet-change.ts';
import type { LimitSheet } from '../../lib/margin/sheet.ts';
import type { Issue } from '../../lib/result.ts';
import { sheetJson } from '../security/subscribe.ts';
import type { DeskServices } from '../service-set.ts';
import { textIn } from '../web/forms/wishes.ts';
import { kebab } from '../web/operator/site-json.ts';
import { formOfSheet, SHEET_NAMES, sheetPage, sheetsPage } from '../web/operator/sheet-page.ts';
import { sitesAndSheets } from './forms-data.ts';
import { call } from './operator-calls.ts';
import type { Visit } from './operator-sites.ts';
import { seeOther, shown } from './page-answers.ts';

export async function allSheets({ services, stamp }: Visit): Promise<Response> {
  return shown(sheetsPage({ title: 'Limit sheets', stamp, sheets: (await sitesAndSheets(services)).sheets }));
}

async function heldTo({ stores }: DeskServices, sheetId: string): Promise<number> {
  const [row] = await stores.db.read<{ n: number }>('SELECT COUNT(DISTINCT subscription_id) AS n FROM subscription_site WHERE sheet_id = ?', sheetId);
  return row?.n ?? 0;
}

/** The fields as a sheet; what no field shows stays, but for the basis of a number that is gone. */
function jsonOf(form: FormData, before: LimitSheet): Readonly<Record<string, unknown>> {
  const limits = Object.fromEntries(SHEET_NAMES.flatMap((name) => {
    const text = textIn(form, `limit.${name}`).replace(',', '.');
    return text === '' ? [] : [[name, Number.isFinite(Number(text)) ? Number(text) : text]];
  }));
  const basis = Object.fromEntries(Object.entries(before.basis).filter(([name]) => name in limits && limits[name] === ({ ...before.limits, ...before.parameters } as Record<string, unknown>)[name]));
  return { ...(sheetJson(before) as object), name: textIn(form, 'name'), for: textIn(form, 'for'), limits, basis };
}

interface Show {
  readonly form: FormData;
  readonly problems: readonly Issue[];
  readonly changes: readonly SheetChange[] | null;
  readonly status: number;
}

/** A version as it is asked for. */
interface Wanted {
  readonly body: unknown;
  readonly etag: string;
  readonly headers: Readonly<Record<string, string>>;
}

/** What is written where, and how its page is shown again. */
interface Sent {
  readonly services: DeskServices;
  readonly id: string;
  readonly form: FormData;
  readonly wanted: Wanted;
  readonly changes: readonly SheetChange[];
  readonly show: (show: Show) => Response;
}

function needsSecond({ settings }: DeskServices, changes: readonly SheetChange[]): boolean {
  return settings.secondTokenSha256 !== null && changes.some(({ loosens }) => loosens);
}

/** The header that lets this very version through, for who holds the second key; null for anybody else. */
async function approved(services: DeskServices, path: string, wanted: Wanted, token: string): Promise<Readonly<Record<string, string>> | null> {
  const asked = await call(services, 'POST', `${path}/approval`, { ...wanted, headers: { ...wanted.headers, authorization: `Bearer ${token}` } });
  const { approval } = asked.body as { readonly approval?: string | null };
  return typeof approval === 'string' ? { approval } : null;
}

function wrong(problem: string, allowed: string, path = '$'): Issue {
  return { path, value: 'as typed', problem, allowed };
}

/** Saves what was looked at, when all that it lets pass besides is meant. */
async function save({ services, id, form, wanted, changes, show }: Sent): Promise<Response> {
  const refused = (problems: readonly Issue[], status = 400): Response => show({ form, problems, changes, status });
  if (changes.some(({ loosens }) => loosens) && form.get('aware') !== '1') return refused([wrong('this lets more pass than before', 'to say below that it is meant')]);
  const path = `/sheets/${encodeURIComponent(id)}`;
  const approval = needsSecond(services, changes) ? await approved(services, path, wanted, textIn(form, 'second')) : {};
  if (approval === null) return refused([wrong('what loosens needs the second key here', 'the token of whoever holds it, typed below')]);
  const written = await call(services, 'PUT', path, { ...wanted, headers: { ...wanted.headers, ...approval } });
  if (written.problems.length > 0) return refused(written.problems, written.status === 412 ? 412 : 400);
  return seeOther(`/operator/sheets/${encodeURIComponent(id)}?said=${'copy-of' in wanted.headers ? 'made' : 'saved'}`);
}

const SAID: Readonly<Record<string, string>> = {
  saved: 'Saved. From the next brief on this version counts; whoever it loosens is told with it.',
  made: 'Saved as a new sheet. It is there to be chosen; nobody is held to it yet.',
};
const OF_FIELDS = /^\$\.(?:name|id|limits\.\w+)$/;

export async function oneSheet(visit: Visit, id: string, sent: FormData | null): Promise<Response | null> {
  const { services, stamp, said } = visit;
  const sheet = (await sitesAndSheets(services)).sheets.find((known) => known.id === id);
  if (sheet === undefined) return null;
  const now = await call(services, 'GET', `/sheets/${encodeURIComponent(id)}`);
  const etag = now.status === 200 ? now.etag : '';
  const [history, held] = await Promise.all([services.stores.sheetHistory.of(id), heldTo(services, id)]);
  const show = ({ form, problems, changes, status }: Show): Response => shown(sheetPage({
    title: sheet.name, stamp, said: SAID[said ?? ''] ?? null, sheet, form, etag, history, held, changes, asksSecond: changes !== null && needsSecond(services, changes),
    isCopy: false, fieldProblems: problems, problems: problems.filter(({ path }) => !OF_FIELDS.test(path)),
  }), status);
  if (sent === null) return show({ form: formOfSheet(sheet), problems: [], changes: null, status: 200 });
  const json = jsonOf(sent, sheet);
  const parsed = parseSheet(json, { basis: 'optional', kind: sheet.kind });
  if (!parsed.ok) return show({ form: sent, problems: parsed.error, changes: null, status: 400 });
  const changes = sheetChanges(sheet, parsed.value);
  if (textIn(sent, 'to') !== 'save') return show({ form: sent, problems: [], changes, status: 200 });
  return save({ services, id, form: sent, wanted: { body: json, etag: textIn(sent, 'etag'), headers: {} }, changes, show });
}

/** A new sheet, begun as a copy of another: what it lets pass beyond that one has to be meant as well. */
export async function copiedSheet({ services, stamp }: Visit, id: string, sent: FormData | null): Promise<Response | null> {
  const { sheets } = await sitesAndSheets(services);
  const sheet = sheets.find((known) => known.id === id);
  if (sheet === undefined) return null;
  const show = ({ form, problems, changes, status }: Show): Response => shown(sheetPage({
    title: `A copy of ${sheet.name}`, stamp, sheet, form, etag: '', history: [], held: 0, changes, asksSecond: changes !== null && needsSecond(services, changes),
    isCopy: true, fieldProblems: problems, problems: problems.filter(({ path }) => !OF_FIELDS.test(path)),
  }), status);
  if (sent === null) {
    const form = formOfSheet(sheet);
    form.set('name', '');
    return show({ form, problems: [], changes: null, status: 200 });
  }
  const json = { ...jsonOf(sent, sheet), id: kebab(textIn(sent, 'name')), version: 1 };
  const parsed = parseSheet(json, { basis: 'optional', kind: sheet.kind });
  const taken = sheets.some((known) => known.id === json.id) ? [wrong('a sheet of this name is here already', 'another name', '$.name')] : [];
  // Without a name there is no id either: that is said once.
  const unread = parsed.ok ? [] : parsed.error.filter(({ path }) => path !== '$.id' || textIn(sent, 'name') !== '');
  if (!parsed.ok || taken.length > 0) return show({ form: sent, problems: [...unread, ...taken], changes: null, status: 400 });
  const changes = sheetChanges(sheet, parsed.value);
  if (textIn(sent, 'to') !== 'save') return show({ form: sent, problems: [], changes, status: 200 });
  return save({ services, id: json.id, form: sent, wanted: { body: json, etag: '', headers: { 'copy-of': id } }, changes, show });
}
