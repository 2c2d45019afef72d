// Stand-ins for what other parts of the house compute: a site and a day judged as the test says.
import type { DayInput } from '../../../lib/brief/day-input.ts';
import type { JudgedDay, JudgedHour } from '../../../lib/brief/day.ts';
import type { Verdict } from '../../../lib/margin/ids.ts';
import { legalDay } from '../../../lib/sky/sun.ts';
import { hourlyInstants, isoUtc } from '../../../lib/time.ts';

export function launchFeature(id: string): unknown {
  return {
    type: 'Feature', id,
    geometry: { type: 'Point', coordinates: [11.4, 47.2, 1250] },
    properties: {
      kind: 'launch', name: `Site ${id}`, timeZone: 'Europe/Vienna', facingDeg: 250, slopeDeg: 24,
      hill: { form: 'ridge', heightM: 180, halfLengthM: 320 },
      landing: { coordinates: [11.38, 47.19, 900], roughnessM: 0.03 },
    },
  };
}

/** A day all of whose hours have one verdict. */
export function judgedAs(input: DayInput, verdict: Verdict): JudgedDay {
  const { site, sheet } = input;
  const legal = legalDay(site, input.localDate);
  const instants = 'toMs' in legal ? hourlyInstants(legal.fromMs, legal.toMs).map(isoUtc) : [];
  const voted = input.answers.filter((answer) => answer.outcome.ok);
  const seen = voted.length === 0 ? 'unknown' : verdict;
  const isOpen = seen === 'within' || seen === 'close';
  const [first, last] = [instants[0], instants.at(-1)];
  return {
    siteId: site.id, siteName: site.name, kind: site.kind, timeZone: site.timeZone, localDate: input.localDate,
    wingKey: input.wingKey, wingName: input.wingName, sheetId: sheet.id, sheetName: sheet.name, sheetVersion: sheet.version,
    issuedAt: input.issuedAt, validUntil: input.validUntil, demo: voted.some((answer) => answer.outcome.ok && answer.outcome.value.demo),
    legalDay: 'toMs' in legal ? { from: isoUtc(legal.fromMs), to: isoUtc(legal.toMs) } : legal,
    verdict: seen,
    cause: null,
    windows: isOpen && first !== undefined && last !== undefined ? [{ from: first, to: last, lastLaunch: last, verdict: seen }] : [],
    hours: instants.map((validAt) => hourAs(validAt, seen)),
    sources: input.answers.map(({ source, kind, outcome }) => ({
      source, kind, state: outcome.ok ? 'voted' : 'no vote', why: outcome.ok ? null : outcome.error.kind,
      runAt: outcome.ok ? outcome.value.runAt : null, fetchedAt: outcome.ok ? outcome.value.fetchedAt : null,
      runAgeHours: null, members: 1, declares: [], gridElevationM: null,
    })),
    cautions: [], notJudged: [], localRules: null,
  };
}

function hourAs(validAt: string, verdict: Verdict): JudgedHour {
  const margin = { id: 'meanWind', spare: 1, limit: 6, demand: 5, unit: 'm/s', status: verdict, missing: [], source: 'stand-in:one' } as const;
  return { validAt, verdict, causes: ['meanWind'], margins: [margin], bySource: [], wind: null, ensemble: null, airspeed: null, speedToFlyMps: null, heading: null };
}
