import { issue } from '../../lib/config/check.ts';
import { parseSheet } from '../../lib/config/sheet.ts';
import { sheetChanges, type SheetChange } from '../../lib/config/sheet-change.ts';
import type { Result } from '../../lib/result.ts';
import { base64Url, derivedKey, sha256Hex } from '../secrets.ts';
import type { DeskServices } from '../service-set.ts';
import { jsonBody } from './body.ts';
import { sitesAndSheets } from './forms-data.ts';
import { problem } from './problem.ts';
import { staleness } from './staleness.ts';

const MAX_BODY_BYTES = 256 * 1024;

/** The version of a sheet that a request would make. */
export interface NextSheet {
  readonly version: number;
  /** As it will be stored. */
  readonly body: string;
  readonly against: number | null;
  readonly changes: readonly SheetChange[];
  /** Something of it lets more pass than before, or what was before cannot be read. */
  readonly loosens: boolean;
}

/**
 * Reads it from a request that names the version it replaces; or the answer that says why it cannot be. The first version of a
 * sheet replaces nothing; where the header copy-of names the sheet it was made from, it is held against that one.
 */
export async function nextSheet(services: DeskServices, id: string, request: Request): Promise<Result<NextSheet, Response>> {
  const refused = (error: Response): Result<never, Response> => ({ ok: false, error });
  const [row] = await services.stores.sheet.newestOf([id]);
  const stale = await staleness(request.headers.get('if-match') ?? undefined, row === undefined ? null : `"${row.version}"`);
  if (stale !== null) return refused(stale);
  const json = await jsonBody(request, MAX_BODY_BYTES);
  if (!json.ok) return json;
  const shipped = services.shippedSheets().find((sheet) => sheet.id === id);
  const read = row === undefined ? undefined : services.read.sheet(row);
  const before = read?.ok === true ? read.value : row === undefined ? shipped : undefined;
  const version = (row?.version ?? shipped?.version ?? 0) + 1;
  const given = typeof json.value === 'object' && json.value !== null ? { ...json.value, version } : json.value;
  const sheet = parseSheet(given, { basis: 'optional', ...(before === undefined ? {} : { kind: before.kind }) });
  if (!sheet.ok) return refused(problem('bad-input', { problems: sheet.error }));
  if (sheet.value.id !== id) return refused(problem('bad-input', { problems: [issue(['id'], sheet.value.id, { problem: 'not the id of the address', allowed: id })] }));
  if (before !== undefined && before.kind !== sheet.value.kind) return refused(problem('bad-input', { problems: [issue(['kind'], sheet.value.kind, { problem: 'people are held to this sheet at sites of the other kind', allowed: before.kind })] }));
  const copied = row === undefined && before === undefined ? request.headers.get('copy-of') : null;
  const model = copied === null ? before : (await sitesAndSheets(services)).sheets.find((known) => known.id === copied);
  if (copied !== null && model === undefined) return refused(problem('bad-input', { problems: [issue(['copy-of'], copied, { problem: 'no sheet of this id is here', allowed: 'the id of a sheet' })] }));
  const changes = model === undefined ? [] : sheetChanges(model, sheet.value);
  const isBlind = row !== undefined && before === undefined;
  return { ok: true, value: { version, body: JSON.stringify(given), against: before?.version ?? null, changes, loosens: isBlind || changes.some(({ loosens }) => loosens) } };
}

/** What the holder of the second key is given for exactly this version of exactly this text; null where nothing can be derived. */
export async function approvalOf({ settings }: DeskServices, id: string, next: NextSheet): Promise<string | null> {
  if (settings.linkKey === null) return null;
  const key = await derivedKey(settings.linkKey, { purpose: 'approval', id: `${id}|${settings.secondTokenSha256 ?? ''}|${await sha256Hex(next.body)}`, version: next.version });
  return base64Url(key.subarray(0, 24));
}
