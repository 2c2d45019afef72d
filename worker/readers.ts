import { parseSheet } from '../lib/config/sheet.ts';
import { parseSiteFeature } from '../lib/config/site.ts';
import { parseWing, type WingClasses } from '../lib/config/wing.ts';
import { failure, success, type Issue, type Result } from '../lib/result.ts';
import type { Readers } from './service-set.ts';

/** Parsed rows by their text: the same text gives the same value, for as long as an isolate lives. */
function remembering<Row, Value>(keyOf: (row: Row) => string, read: (row: Row) => Result<Value, Issue[]>): (row: Row) => Result<Value, Issue[]> {
  const known = new Map<string, Result<Value, Issue[]>>();
  return (row) => {
    const key = keyOf(row);
    const found = known.get(key) ?? read(row);
    if (known.size > 500) known.clear();
    known.set(key, found);
    return found;
  };
}

function json(text: string): Result<unknown, Issue[]> {
  try {
    return success(JSON.parse(text) as unknown);
  } catch {
    return failure([{ path: '$', value: `${text.length} characters`, problem: 'the stored text is not JSON', allowed: 'JSON' }]);
  }
}

/** Readers of stored rows. What was checked when it came in is checked again: a row may be of an older version. */
export function readers(wingClasses: () => WingClasses): Readers {
  return {
    site: remembering((row) => `${row.storedAtMs} ${row.demo} ${row.feature}`, (row) => {
      const feature = json(row.feature);
      if (!feature.ok) return feature;
      const site = parseSiteFeature(feature.value, { nowMs: row.storedAtMs });
      return site.ok ? success({ site: site.value, demo: row.demo }) : site;
    }),
    sheet: remembering((row) => row.body, (row) => {
      const body = json(row.body);
      return body.ok ? parseSheet(body.value, { basis: 'optional' }) : body;
    }),
    wing: remembering((row) => row.body, (row) => {
      const body = json(row.body);
      return body.ok ? parseWing(body.value, wingClasses()) : body;
    }),
  };
}
