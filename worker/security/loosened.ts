import { loosenedSentence } from '../../lib/brief/words/letters.ts';
import { plainText } from '../../lib/brief/words/index.ts';
import type { DeskServices } from '../service-set.ts';
import type { Pair } from '../store/published.ts';

/** Every brief of the day and a half after a sheet was loosened says so to those who are held to it. */
const TOLD_FOR_MS = 36 * 3_600_000;

export async function loosenedNotes({ stores, read, clock }: DeskServices, pairs: readonly (Pair & { readonly subscriptionId: string })[]): Promise<ReadonlyMap<string, readonly string[]>> {
  const sheetIds = [...new Set(pairs.map(({ sheetId }) => sheetId))];
  const changes = await stores.sheetHistory.loosened(sheetIds, clock.nowMs() - TOLD_FOR_MS);
  if (changes.length === 0) return new Map();
  const rows = await stores.sheet.newestOf(changes.map(({ sheetId }) => sheetId));
  const names = new Map(rows.map((row) => { const sheet = read.sheet(row); return [row.id, sheet.ok ? plainText(sheet.value.name) : row.id]; }));
  const notes = new Map<string, string[]>();
  for (const { sheetId, version, changes: all } of changes) {
    const sentence = loosenedSentence({ sheet: names.get(sheetId) ?? sheetId, version, changes: all.filter(({ loosens }) => loosens) });
    for (const id of new Set(pairs.filter((pair) => pair.sheetId === sheetId).map(({ subscriptionId }) => subscriptionId))) notes.set(id, [...(notes.get(id) ?? []), sentence]);
  }
  return notes;
}
