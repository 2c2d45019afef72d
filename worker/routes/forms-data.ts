import type { DeskServices } from '../service-set.ts';
import type { LimitSheet } from '../../lib/margin/sheet.ts';
import type { Site } from '../../lib/site.ts';
import { readUpTo } from './body.ts';

const MAX_FORM_BYTES = 8 * 1024;

/** A form as programs and browsers send one, up to a size; null for anything else. */
export async function formOf(request: Request, maxBytes: number = MAX_FORM_BYTES): Promise<FormData | null> {
  const type = request.headers.get('content-type') ?? '';
  if (!/^(application\/x-www-form-urlencoded|multipart\/form-data)\s*(;|$)/i.test(type)) return null;
  const bytes = await readUpTo(request.body, maxBytes);
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
