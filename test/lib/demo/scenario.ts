// The demo as a test needs it: its configuration, a site's answers on a date, and that day judged.
import { judgeDay } from '../../../lib/brief/judge-day.ts';
import type { JudgedDay } from '../../../lib/brief/day.ts';
import type { DayInput } from '../../../lib/brief/day-input.ts';
import { loadConfig } from '../../../lib/config/load.ts';
import { publishedPairs } from '../../../lib/config/published.ts';
import { inventedForecast } from '../../../lib/forecast/invented/forecast.ts';
import type { Conditions, Forecast } from '../../../lib/forecast/conditions.ts';
import type { Site } from '../../../lib/site.ts';
import { HOUR_MS, isoUtc, localDay, shiftDate } from '../../../lib/time.ts';
import demo from '../../../config/demo.json' with { type: 'json' };
import planDemo from '../../../config/plan-demo.json' with { type: 'json' };
import published from '../../../config/published.json' with { type: 'json' };
import sheets from '../../../config/sheets.json' with { type: 'json' };
import sites from '../../../config/sites.json' with { type: 'json' };
import sources from '../../../config/sources.json' with { type: 'json' };
import subscribers from '../../../config/subscribers.json' with { type: 'json' };
import thresholds from '../../../config/thresholds.json' with { type: 'json' };
import wingClasses from '../../../config/wing-classes.json' with { type: 'json' };
import { valueOf } from '../config/fixtures.ts';

export const config = valueOf(loadConfig({ demo, planDemo, published, sheets, sites, sources, subscribers, thresholds, wingClasses }, { nowMs: Date.UTC(2028, 0, 1) }));

export function site(id: string): Site {
  const found = config.sites.find((each) => each.id === id);
  if (found === undefined) throw new Error(`the demo has no site "${id}"`);
  return found;
}

/** Asks every invented source for the local day and an hour on either side, as the morning does. */
export function answers(id: string, date: string, clockHour = 4): DayInput['answers'] {
  const place = site(id);
  const { fromMs, toMs } = localDay(date, place.timeZone);
  const request = { site: place, fromUtc: isoUtc(fromMs - HOUR_MS), toUtc: isoUtc(toMs + HOUR_MS), now: isoUtc(fromMs + clockHour * HOUR_MS) };
  return config.demo.sources.map((source) => ({ source: source.id, kind: source.kind, outcome: inventedForecast(config.demo, source, request) }));
}

export function forecast(id: string, date: string, source: string): Forecast {
  const answer = answers(id, date).find((each) => each.source === source);
  if (answer === undefined) throw new Error(`the demo has no source "${source}"`);
  if (!answer.outcome.ok) throw new Error(`"${source}" gave ${answer.outcome.error.kind}`);
  return answer.outcome.value;
}

/** The hours of the date itself, without the one on either side. */
export function hours(id: string, date: string, source = 'invented:valley'): readonly Conditions[] {
  return (forecast(id, date, source).members[0] ?? []).slice(1, -2);
}

/** The day as the operator publishes it, its first pair of wing and sheet. */
export function judged(id: string, date: string): JudgedDay {
  const place = site(id);
  const pair = publishedPairs(config.published, place)[0];
  const sheet = config.sheets.find((each) => each.id === pair?.sheet);
  if (pair === undefined || sheet === undefined) throw new Error(`nothing is published for "${id}"`);
  const { fromMs, toMs } = localDay(date, place.timeZone);
  return judgeDay({
    site: place, wing: config.wingClasses[pair.wing], wingKey: pair.wing, wingName: pair.wing, sheet, localDate: date,
    issuedAt: isoUtc(fromMs + 4 * HOUR_MS), validUntil: isoUtc(toMs), answers: answers(id, date), demo: true, thresholds: config.thresholds, storedGroundM: {},
  });
}

/** All dates of the leap year 2028, or every n-th. */
export function datesOf2028(every = 1): string[] {
  return Array.from({ length: Math.ceil(366 / every) }, (_, i) => shiftDate('2028-01-01', i * every));
}
