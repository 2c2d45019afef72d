import type { Issue } from '../../lib/result.ts';
import type { DeskServices } from '../service-set.ts';
import type { LimitSheet } from '../../lib/margin/sheet.ts';
import type { Site } from '../../lib/site.ts';
import { managed } from '../security/manage.ts';
import type { SubscriptionDetail } from '../store/subscription.ts';
import { secretLinks } from '../security/letter.ts';
import { readUpTo } from './body.ts';
import { subscribePage } from '../web/subscribe-page.ts';
import { managePage } from './forms.ts';

const MAX_FORM_BYTES = 8 * 1024;

/** A form as programs and browsers send one, up to a size; null for anything else. */
export async function formOf(request: Request): Promise<FormData | null> {
  const type = request.headers.get('content-type') ?? '';
  if (!/^(application\/x-www-form-urlencoded|multipart\/form-data)\s*(;|$)/i.test(type)) return null;
  const bytes = await readUpTo(request.body, MAX_FORM_BYTES);
  if (bytes === null) return null;
  try {
    return await new Response(bytes, { headers: { 'content-type': type } }).formData();
  } catch {
    return null;
  }
}

export async function sitesAndSheets({ stores, read, shippedSheets }: DeskServices): Promise<{ readonly sites: Site[]; readonly sheets: LimitSheet[] }> {
  const [rows, sheetRows] = await Promise.all([stores.site.all(), stores.sheet.newest()]);
  const stored = sheetRows.flatMap((row) => { const sheet = read.sheet(row); return sheet.ok ? [sheet.value] : []; });
  const known = new Set(sheetRows.map(({ id }) => id));
  return {
    sites: rows.flatMap((row) => { const place = read.site(row); return place.ok ? [place.value.site] : []; }),
    sheets: [...stored, ...shippedSheets().filter(({ id }) => !known.has(id))],
  };
}

export async function viewOf(services: DeskServices, detail: SubscriptionDetail, said: readonly string[]): Promise<string> {
  const { settings } = services;
  const { feed } = await secretLinks({ publicUrl: settings.publicUrl, linkKey: settings.linkKey ?? '' }, detail.id, detail.linkVersion);
  return managePage({ kept: await managed(services, detail), ...(await sitesAndSheets(services)), feed, said });
}

export async function subscribeView(services: DeskServices, problems: readonly Issue[], typed: FormData | null): Promise<string> {
  return subscribePage({ ...(await sitesAndSheets(services)), problems, typed });
}

export async function kindsOf({ stores, read }: DeskServices): Promise<ReadonlyMap<string, Site['kind']>> {
  return new Map((await stores.site.all()).flatMap((row) => { const place = read.site(row); return place.ok ? [[row.id, place.value.site.kind] as const] : []; }));
}

/** The form as a request of the API: whatever is wrong in it is found there. */
export function requestOf(form: FormData, kinds: ReadonlyMap<string, Site['kind']>): unknown {
  const text = (name: string): string => { const value = form.get(name); return typeof value === 'string' ? value.trim() : ''; };
  const mass = text('mass').replace(',', '.');
  return {
    sites: form.getAll('site').filter((id) => typeof id === 'string').map((id) => {
      const sheet = text(`sheet-${kinds.get(id) ?? 'launch'}`);
      return { id, ...(sheet === '' ? {} : { sheet }) };
    }),
    wing: { class: text('wing'), ...(mass === '' ? {} : { allUpMassKg: Number.isFinite(Number(mass)) ? Number(mass) : mass }) },
    deliver: { at: text('at'), timeZone: text('zone') },
    units: { ...(text('speed') === '' ? {} : { speed: text('speed') }), ...(text('height') === '' ? {} : { height: text('height') }) },
    channels: [{ kind: 'mail', address: text('address') }],
  };
}
