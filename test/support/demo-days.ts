// The demo scenario judged on this machine: every site, wing class and sheet of config/, for any date.
import demoJson from '../../config/demo.json' with { type: 'json' };
import sheetsJson from '../../config/sheets.json' with { type: 'json' };
import sitesJson from '../../config/sites.json' with { type: 'json' };
import thresholdsJson from '../../config/thresholds.json' with { type: 'json' };
import wingClassesJson from '../../config/wing-classes.json' with { type: 'json' };
import type { DayInput } from '../../lib/brief/day-input.ts';
import { parseScenario } from '../../lib/config/scenario.ts';
import { parseSheet } from '../../lib/config/sheet.ts';
import { parseSites } from '../../lib/config/sites.ts';
import { parseThresholds } from '../../lib/config/thresholds.ts';
import { parseWingClasses } from '../../lib/config/wing-classes.ts';
import { WING_CLASSES } from '../../lib/config/wing.ts';
import { failure } from '../../lib/result.ts';
import type { LimitSheet } from '../../lib/margin/sheet.ts';
import type { Site } from '../../lib/site.ts';
import { isoUtc, localDay } from '../../lib/time.ts';
import { instantsAround } from '../../worker/morning/times.ts';
import { demoSources } from '../../worker/sources/demo.ts';

const nowMs = Date.parse('2027-05-14T03:30:00Z');

function whole<T>(result: { readonly ok: true; readonly value: T } | { readonly ok: false; readonly error: unknown }): T {
  if (!result.ok) throw new Error(`config cannot be read: ${JSON.stringify(result.error)}`);
  return result.value;
}

export const DEMO_SITES: readonly Site[] = whole(parseSites(sitesJson, { nowMs }));

export const SHEETS: readonly LimitSheet[] = (Array.isArray(sheetsJson) ? sheetsJson : []).map((sheet: unknown) => whole(parseSheet(sheet, { basis: 'required' })));

export { WING_CLASSES };

const scenario = whole(parseScenario(demoJson));
const classes = whole(parseWingClasses(wingClassesJson));
const thresholds = whole(parseThresholds(thresholdsJson));

/** What the day of a site is judged from, as the worker would hand it over at half past three UTC. */
export async function demoInput(site: Site, choice: { readonly wing: (typeof WING_CLASSES)[number]; readonly sheet: LimitSheet; readonly date: string }): Promise<DayInput> {
  const { fromMs, toMs } = instantsAround(site, choice.date);
  const atMs = localDay(choice.date, site.timeZone).fromMs + 5 * 3_600_000;
  const answers = await Promise.all(demoSources(scenario, () => atMs).map(async ({ id, kind, fetch }) => {
    const found = (await fetch({ sites: [site], fromUtc: isoUtc(fromMs), toUtc: isoUtc(toMs) })).get(site.id);
    return { source: id, kind, outcome: found ?? failure({ kind: 'not-fetched' as const }) };
  }));
  return {
    site, wing: classes[choice.wing], wingKey: choice.wing, wingName: choice.wing, sheet: choice.sheet, localDate: choice.date,
    issuedAt: isoUtc(atMs), validUntil: isoUtc(localDay(choice.date, site.timeZone).toMs), answers, demo: true, thresholds, storedGroundM: {},
  };
}
