import type { ConditionField, Conditions } from '../forecast/conditions.ts';
import { checkHour } from '../forecast/ranges.ts';
import { adviceMps, flightTimeS } from '../margin/advice.ts';
import type { Margin, MarginId, Term, Verdict } from '../margin/ids.ts';
import { alone, judgedRules, measure, viewsOf, workingOf } from '../margin/judge-member.ts';
import { setUp } from '../margin/setup.ts';
import type { LimitSheet } from '../margin/sheet.ts';
import { causesOf, worstVerdict } from '../margin/verdict.ts';
import { windowsOf } from '../margin/window.ts';
import type { Site } from '../site.ts';
import { isoUtc } from '../time.ts';
import type { Wing } from '../wing/wing.ts';
import { CLOSING } from './words/closing.ts';

/** Hours a caller brings, of one deterministic source, judged on their own: no frame, no age, no legal day decides which. */
export interface HoursInput {
  readonly site: Site;
  readonly wing: Wing;
  readonly sheet: LimitSheet;
  readonly hours: readonly Conditions[];
  readonly declares: readonly ConditionField[];
}

export interface AssessedMargin extends Omit<Margin, 'noVote'> {
  readonly working: readonly Term[];
}

export interface AssessedHour {
  readonly validAt: string;
  readonly verdict: Verdict;
  readonly causes: readonly MarginId[];
  readonly margins: readonly AssessedMargin[];
  readonly advice: { readonly speedToFlyMps: number | null; readonly headingDeg?: number };
}

export interface Assessment {
  readonly hours: readonly AssessedHour[];
  readonly windows: readonly { readonly from: string; readonly to: string; readonly lastLaunch: string | null; readonly verdict: Verdict }[];
  readonly notJudged: readonly MarginId[];
  readonly notice: string;
}

/** Judges the hours in the order given. Every margin comes with its working. */
export function judgeHours(input: HoursInput): Assessment {
  const setup = setUp(input);
  const { rules, notJudged } = judgedRules(setup);
  const views = viewsOf(setup, input.hours.map(checkHour), alone(input.declares));
  const judged = views.map((view, i) => {
    const results = rules.flatMap((rule) => {
      const margin = measure(rule, view);
      if (margin === null) return [];
      const { noVote: _, ...shown } = margin;
      return [{ ...shown, working: workingOf(rule, view) }];
    });
    const speed = adviceMps(view);
    const headingDeg = setup.site.kind === 'strip' ? { headingDeg: view.tow.headingDeg } : {};
    return {
      validAt: input.hours[i]?.validAt ?? isoUtc(view.hour.validAtMs),
      verdict: worstVerdict(results.map(({ status }) => status)),
      causes: causesOf(results),
      margins: results,
      advice: { speedToFlyMps: Number.isFinite(speed) ? speed : null, ...headingDeg },
    };
  });
  const windows = windowsOf(judged.flatMap(({ verdict }, i) => {
    const view = views[i];
    return view === undefined ? [] : [{ validAtMs: view.hour.validAtMs, verdict, flightS: flightTimeS(view) }];
  }));
  return {
    hours: judged,
    windows: windows.map(({ fromMs, toMs, lastLaunchMs, verdict }) => ({
      from: isoUtc(fromMs), to: isoUtc(toMs), lastLaunch: lastLaunchMs === null ? null : isoUtc(lastLaunchMs), verdict,
    })),
    notJudged: [...notJudged.map(({ id }) => id), 'agreement'],
    notice: CLOSING,
  };
}
