import type { Caution } from './cautions.ts';
import type { HeadingReason } from '../margin/tow-heading.ts';
import type { ConditionField } from '../forecast/conditions.ts';
import type { MemberSpread } from '../margin/agreement.ts';
import type { MarginId, MarginUnit, Verdict } from '../margin/ids.ts';

/**
 * The judged day of one site for one wing and one sheet: the brief as data. Stored as JSON, rendered by words, pages,
 * feeds and messages; nothing downstream computes a number of its own.
 */
export interface JudgedDay {
  readonly siteId: string;
  readonly siteName: string;
  readonly kind: 'launch' | 'strip';
  readonly timeZone: string;
  /** yyyy-mm-dd in the site's zone. */
  readonly localDate: string;
  readonly wingKey: string;
  readonly wingName: string;
  readonly sheetId: string;
  readonly sheetName: string;
  readonly sheetVersion: number;
  readonly issuedAt: string;
  readonly validUntil: string;
  /** Invented weather. */
  readonly demo: boolean;
  /** The legal day in UTC, or why there is none. */
  readonly legalDay: { readonly from: string; readonly to: string } | { readonly none: string };
  readonly verdict: Verdict;
  /** The most restrictive cause of the day, null when nothing limits it. */
  readonly cause: { readonly id: MarginId; readonly validAt: string } | null;
  readonly windows: readonly JudgedWindow[];
  readonly hours: readonly JudgedHour[];
  readonly sources: readonly SourceVote[];
  readonly cautions: readonly Caution[];
  /** Margins this sheet, site or set of sources does not judge, each with the reason. */
  readonly notJudged: readonly { readonly id: MarginId; readonly why: string }[];
  readonly localRules: string | null;
}

export interface JudgedWindow {
  readonly from: string;
  readonly to: string;
  /** Whole minute; null when the flight time is unknown or longer than the window. */
  readonly lastLaunch: string | null;
  readonly verdict: Verdict;
}

export interface JudgedHour {
  readonly validAt: string;
  readonly verdict: Verdict;
  /** Margins that make the verdict, beyond first. */
  readonly causes: readonly MarginId[];
  readonly margins: readonly CombinedMargin[];
  /** Each deterministic source's own verdict of this hour. */
  readonly bySource: readonly { readonly source: string; readonly verdict: Verdict }[];
  readonly airspeed: AirspeedColumn | null;
  readonly speedToFlyMps: number | null;
  /** Mean wind where the wing is launched, least and most over the sources with a vote, each one's direction, and whether its hour is interpolated; null when none says. */
  readonly wind: { readonly leastMps: number; readonly mostMps: number; readonly bySource: readonly { readonly source: string; readonly meanMps: number; readonly gustMps: number | null; readonly fromDeg: number | null; readonly interpolated?: true }[] } | null;
  /** What the ensemble's members say: the margins they agree about, median and adverse decile of each spare; `between` where the hour is interpolated between the ensemble's own steps. */
  readonly ensemble: { readonly about: readonly MarginId[]; readonly spreads: readonly MemberSpread[]; readonly between?: { readonly stepHours: number } } | null;
  /** Strips: the recommended heading (direction of tow) and why. */
  readonly heading: { readonly headingDeg: number; readonly reason: HeadingReason; readonly releaseM: number | null; readonly lineDriftM: number | null } | null;
}

export interface CombinedMargin {
  readonly id: MarginId;
  readonly spare: number | null;
  readonly limit: number | null;
  readonly demand: number | null;
  readonly unit: MarginUnit;
  readonly status: Verdict;
  readonly missing: readonly string[];
  /** The source whose number this is; null when nobody had a vote. */
  readonly source: string | null;
}

/**
 * How the hour's trim airspeed is spent, top to bottom, in m/s: head (mean headwind), crab loss, gust, reserve the
 * sheet demands; what is left is the spare (negative: a deficit). trim = head + crab + gust + reserve + spare.
 */
export interface AirspeedColumn {
  readonly trimMps: number;
  readonly headMps: number;
  readonly gustMps: number;
  readonly crabMps: number;
  readonly reserveMps: number;
  /** null when the crosswind is larger than trim: no solution. */
  readonly spareMps: number | null;
}

export interface SourceVote {
  readonly source: string;
  /** voted: delivered a trusted frame; otherwise no vote, and why. */
  readonly state: 'voted' | 'no vote';
  readonly why: string | null;
  readonly runAt: string | null;
  readonly fetchedAt: string | null;
  readonly runAgeHours: number | null;
  readonly kind: 'deterministic' | 'ensemble';
  readonly members: number;
  readonly declares: readonly ConditionField[];
  readonly gridElevationM: number | null;
  /** How far apart the model's own steps are, where that is more than an hour. */
  readonly stepHours?: number;
}
