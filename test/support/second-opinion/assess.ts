// An independent second implementation of flight-model.md for one deterministic source, as a test oracle: the plainest reading of the
// page, slow on purpose. It imports nothing of lib/ and nothing of worker/; that is its whole worth.
import { airColumn } from './air.ts';
import type { Found, Hourly } from './both-kinds.ts';
import { known } from './numbers.ts';
import { launchFindings } from './launch-margins.ts';
import { stripFindings } from './strip-margins.ts';
import { thermalMps } from './thermal.ts';
import type { Answer, Conditions, HourAnswer, LaunchSite, Sheet, Site, StripSite, WindowAnswer, Wing } from './types.ts';
import { hourVerdict, judge, windowsOf } from './verdict.ts';
import { declaredReachM, windProfile } from './wind.ts';
import { polarOf } from './wing.ts';

;

export type AssessInput = { site: Site; wing: Wing; sheet: Sheet; hours: Conditions[]; declares?: string[]; now?: string };

// architecture.md: "every field that is there (not null, not empty) in at least one of the hours"
function declaredFields(hours: Conditions[]): string[] {
  const names = new Set<string>();
  for (const hour of hours) {
    for (const [name, value] of Object.entries(hour)) {
      if (value === null || value === undefined) continue;
      if (typeof value === 'object' && Object.keys(value).length === 0) continue;
      names.add(name);
    }
  }
  return [...names];
}

export function assess(input: AssessInput): Answer {
  const { site, sheet, hours } = input;
  const polar = polarOf(input.wing);
  const declared = new Set(input.declares ?? declaredFields(hours));
  const reachM = declaredReachM(hours, declared);
  // Section 7: one deterministic source has no members to agree, so `agreement` has no vote.
  const notJudged = new Map<string, boolean>([['agreement', true]]);
  const answers: HourAnswer[] = [];
  const flightS = new Map<string, number>();

  for (const hour of hours) {
    const at = Date.parse(hour.validAt);
    const next = [1, 2].map((step) => hours.find((other) => Date.parse(other.validAt) === at + step * 3_600_000));
    const hourly: Hourly = { hour, next, site, limits: sheet.limits };
    const column = airColumn(hour, declared);
    const profile = windProfile(hour, declared);
    const wStarMps = thermalMps(hour, column, profile);

    let found: [string, Found][];
    let advice: HourAnswer['advice'];
    if (site.properties.kind === 'launch') {
      const result = launchFindings({ ...hourly, site: site as LaunchSite }, polar, column, profile, reachM, wStarMps);
      found = result.found;
      flightS.set(hour.validAt, result.flightS);
      advice = { speedToFlyMps: known(result.speedToFlyMps) ? result.speedToFlyMps : null };
    } else {
      const result = stripFindings({ ...hourly, site: site as StripSite }, polar, column, profile, wStarMps);
      found = result.found;
      flightS.set(hour.validAt, result.flightS);
      advice = { speedToFlyMps: null, headingDeg: result.headingDeg };
    }

    const margins = [];
    for (const [id, finding] of found) {
      if (finding === 'not judged') {
        if (!notJudged.has(id)) notJudged.set(id, true);
        continue;
      }
      notJudged.set(id, false); // judged in at least one hour
      // No limit of its own and no thunder: `storm` is within, with nothing to measure.
      if (id === 'storm' && finding.spare === Infinity) {
        margins.push({ id, unit: finding.unit, limit: null, demand: null, spare: null, status: 'within' as const });
        continue;
      }
      margins.push(judge(finding, sheet));
    }
    answers.push({ validAt: hour.validAt, ...hourVerdict(margins), margins, advice });
  }

  const windows: WindowAnswer[] = windowsOf(answers).map(({ first, last, verdict }) => {
    // "Last launch = its last instant minus the glide time at trim (tow: minus climb and glide)."
    const beforeMs = Date.parse(last.validAt) - (flightS.get(last.validAt) ?? Number.NaN) * 1000;
    return { from: first.validAt, to: last.validAt, lastLaunch: known(beforeMs) ? new Date(beforeMs).toISOString() : null, verdict };
  });
  const unjudged: string[] = [];
  for (const [id, never] of notJudged) {
    if (never) unjudged.push(id);
  }
  return { hours: answers, windows, notJudged: unjudged };
}
