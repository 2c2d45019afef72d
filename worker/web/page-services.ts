/** What the pages ask of the rest: stored briefs, one judged day, and the working behind its numbers. No page computes. */
import type { JudgedDay, JudgedHour } from '../../lib/brief/day.ts';
import type { OwnNumbers } from './own-numbers.ts';
import type { AssessedHour } from '../../lib/brief/judge-hours.ts';
import type { MarginId, Term } from '../../lib/margin/ids.ts';

export interface BoardSite {
  readonly siteId: string;
  readonly siteName: string;
  readonly kind: 'launch' | 'strip';
  readonly timeZone: string;
  /** Today's stored brief of every published wing and sheet; empty when none was made yet. */
  readonly days: readonly JudgedDay[];
}

export interface DayQuery {
  readonly siteId: string;
  /** yyyy-mm-dd; null for the day that "this morning" means. */
  readonly date: string | null;
  readonly wing: string | null;
  readonly sheet: string | null;
}

export interface Choice {
  readonly id: string;
  readonly name: string;
}

export interface MarginWorking {
  readonly id: MarginId;
  readonly terms: readonly Term[];
}

/** A point of a path: metres along the track, metres above mean sea level. */
export interface PathPoint {
  readonly alongM: number;
  readonly altitudeM: number;
}

export interface GlidePicture {
  readonly launchM: number;
  readonly landingM: number;
  readonly distanceM: number;
  readonly stillAir: readonly PathPoint[];
  readonly inWind: readonly PathPoint[];
  readonly arrivalM: number | null;
  /** Height over the landing that the sheet asks for. */
  readonly askedM: number | null;
}

export interface LadderRung {
  readonly altitudeM: number;
  /** Along the launch axis, positive against the wing. */
  readonly headMps: number;
  /** Across it, positive from the right. */
  readonly crossMps: number;
}

export interface LadderPicture {
  readonly rungs: readonly LadderRung[];
  readonly trimMps: number;
  readonly launchM: number;
  readonly landingM: number | null;
}

export interface TowPicture {
  readonly headingDeg: number;
  readonly lineLengthM: number;
  /** Metres from the start toward the winch, metres above the strip. */
  readonly climb: readonly { readonly alongM: number; readonly heightM: number }[];
  readonly releaseM: number;
  readonly driftM: number | null;
  readonly lineClearM: number | null;
  readonly headMps: number;
  readonly crossMps: number;
  readonly gustMps: number | null;
}

/** Direct sun on the launch face, by the sun's place and the slope alone: ground around it is not known. */
export interface SunPicture {
  readonly first: string | null;
  readonly last: string | null;
  /** Between the sun and the slope's normal in this hour: 0 is square on; null when none falls on it. */
  readonly incidenceDeg: number | null;
}

/** What belongs to one hour: the sums behind its margins, and its pictures. */
export interface HourDetail {
  /** Only of margins whose numbers can still be worked out: a forecast may have been renewed since the brief. */
  readonly workings: readonly MarginWorking[];
  readonly sun: SunPicture | null;
  /** The forecast's own numbers of the hour, from which a "what if" starts. */
  readonly given: OwnNumbers | null;
  readonly glide: GlidePicture | null;
  readonly ladder: LadderPicture | null;
  readonly tow: TowPicture | null;
}

export type DayAnswer =
  | {
    readonly kind: 'day';
    readonly day: JudgedDay;
    readonly detail: (hour: JudgedHour) => HourDetail;
    readonly choices: Choices;
  }
  | { readonly kind: 'no-site' }
  /** A date, wing or sheet that cannot be, each as a sentence. */
  | { readonly kind: 'bad-query'; readonly problems: readonly string[] };

/** Wings and sheets that a visitor may choose at a site. */
export interface Choices {
  readonly wings: readonly Choice[];
  readonly sheets: readonly Choice[];
}

/** A question of "what if": a day, an hour of it, and numbers as they were typed. */
export interface WhatIfQuery extends DayQuery {
  readonly hour: string | null;
  readonly numbers: OwnNumbers;
  /** What was wrong with the typed numbers: nothing is judged then. */
  readonly problems: readonly string[];
}

/** One hour judged with own numbers, from the forecast of one source; or what stood in the way. */
export type WhatIf =
  | { readonly kind: 'judged'; readonly hour: AssessedHour; readonly source: string }
  | { readonly kind: 'problems'; readonly problems: readonly string[] };

export type WhatIfAnswer =
  | { readonly kind: 'answer'; readonly day: JudgedDay; readonly hour: string; readonly given: OwnNumbers; readonly answer: WhatIf }
  | { readonly kind: 'no-site' }
  | { readonly kind: 'bad-query'; readonly problems: readonly string[] };

export interface PageServices {
  now(): Date;
  board(): Promise<readonly BoardSite[]>;
  day(query: DayQuery): Promise<DayAnswer>;
}

/** The same for the page on which a reader's own numbers are judged. */
export interface WhatIfServices {
  now(): Date;
  whatIf(query: WhatIfQuery): Promise<WhatIfAnswer>;
}
