/** Limit sheets by form: what a change loosens is shown before it counts, and has to be meant. */
import { parseSheet } from '../../lib/config/sheet.ts';
import { sheetChanges, type SheetChange } from '../../lib/config/sheet-change.ts';
import type { LimitSheet } from '../../lib/margin/sheet.ts';
import type { Issue } from '../../lib/result.ts';
import { sheetJson } from '../security/subscribe.ts';
import type { DeskServices } from '../service-set.ts';
import { textIn } from '../web/forms/wishes.ts';
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

function needsSecond({ settings }: DeskServices, changes: readonly SheetChange[]): boolean {
  return settings.secondTokenSha256 !== null && changes.some(({ loosens }) => loosens);
}

/** The header that lets this very version through, for who holds the second key; null for anybody else. */
async function approved(services: DeskServices, path: string, wanted: { readonly body: unknown; readonly etag: string }, token: string): Promise<Readonly<Record<string, string>> | null> {
  const asked = await call(services, 'POST', `${path}/approval`, { ...wanted, headers: { authorization: `Bearer ${token}` } });
  const { approval } = asked.body as { readonly approval?: string | null };
  return typeof approval === 'string' ? { approval } : null;
}

export async function oneSheet(visit: Visit, id: string, sent: FormData | null): Promise<Response | null> {
  const { services, stamp, said } = visit;
  const sheet = (await sitesAndSheets(services)).sheets.find((known) => known.id === id);
  if (sheet === undefined) return null;
  const now = await call(services, 'GET', `/sheets/${encodeURIComponent(id)}`);
  const etag = now.status === 200 ? now.etag : '';
  const [history, held] = await Promise.all([services.stores.sheetHistory.of(id), heldTo(services, id)]);
  const show = ({ form, problems, changes, status }: Show): Response => shown(sheetPage({
    title: sheet.name, stamp, said: said === 'saved' ? 'Saved. From the next brief on this version counts; whoever it loosens is told with it.' : null, sheet, form, etag, history, held, changes, asksSecond: changes !== null && needsSecond(services, changes),
    fieldProblems: problems, problems: problems.filter(({ path }) => !/^\$\.limits\.\w+$/.test(path)),
  }), status);
  if (sent === null) return show({ form: formOfSheet(sheet), problems: [], changes: null, status: 200 });
  const json = jsonOf(sent, sheet);
  const parsed = parseSheet(json, { basis: 'optional', kind: sheet.kind });
  if (!parsed.ok) return show({ form: sent, problems: parsed.error, changes: null, status: 400 });
  const changes = sheetChanges(sheet, parsed.value);
  if (textIn(sent, 'to') !== 'save') return show({ form: sent, problems: [], changes, status: 200 });
  if (changes.some(({ loosens }) => loosens) && sent.get('aware') !== '1') {
    return show({ form: sent, problems: [{ path: '$', value: '', problem: 'this lets more pass than before', allowed: 'to say below that it is meant' }], changes, status: 400 });
  }
  const path = `/sheets/${encodeURIComponent(id)}`;
  const wanted = { body: json, etag: textIn(sent, 'etag') };
  const approval = needsSecond(services, changes) ? await approved(services, path, wanted, textIn(sent, 'second')) : {};
  if (approval === null) return show({ form: sent, problems: [{ path: '$', value: 'not shown', problem: 'what loosens needs the second key here', allowed: 'the token of whoever holds it, typed below' }], changes, status: 400 });
  const written = await call(services, 'PUT', path, { ...wanted, headers: approval });
  if (written.problems.length > 0) return show({ form: sent, problems: written.problems, changes, status: written.status === 412 ? 412 : 400 });
  return seeOther(`/operator/sheets/${encodeURIComponent(id)}?said=saved`);
}
