/** The plan as data: stored as JSON, put into words, pages, tables and calendars; nothing downstream computes. */
import type { JudgedDay, JudgedWindow } from '../brief/day.ts';
import type { Verdict } from '../margin/ids.ts';
import type { Closed, Tightest } from './cells.ts';

export interface DayPlan {
  readonly date: string;
  readonly timeZone: string;
  /** Invented weather. */
  readonly demo: boolean;
  /** When the oldest of the judged days was made, and until when the first of them holds; null when nothing was judged. */
  readonly asOf: string | null;
  readonly validUntil: string | null;
  readonly objective: PlanObjective;
  /** False when the search ended before it could rule out a better plan. */
  readonly proven: boolean;
  readonly groups: readonly GroupPlan[];
  readonly nextBest: Alternative | null;
  readonly ifLost: readonly IfLost[];
  /** What stands with every verdict: cautions, local rules, sources and ages of the site-days that the plan speaks of. */
  readonly siteDays: readonly SiteDay[];
}

export type SiteDay = Pick<JudgedDay, 'siteId' | 'siteName' | 'timeZone' | 'localDate' | 'wingKey' | 'wingName' | 'sheetId' | 'sheetName' | 'issuedAt' | 'validUntil' | 'demo' | 'sources' | 'cautions' | 'localRules'>;

export interface PlanObjective {
  readonly placed: number;
  /** Smallest spare of all hours used, in close bands; null when none is used. */
  readonly spare: number | null;
  readonly hours: number;
  readonly moves: number;
}

export interface GroupPlan {
  readonly name: string;
  readonly wing: string;
  readonly sheet: string;
  readonly blocks: readonly Block[];
  /** Why there is no block. */
  readonly leftOut: LeftOut | null;
}

export interface Block {
  readonly site: string;
  readonly siteName: string;
  /** ISO 8601 UTC, both on judged instants; at `to` everybody is down. */
  readonly from: string;
  readonly to: string;
  readonly hours: number;
  readonly verdict: Verdict;
  /** Its judged instants that are close to a limit. */
  readonly closeAt: readonly string[];
  /** In close bands. */
  readonly spare: number;
  /** The margin that makes that spare: why the block stands where it stands. */
  readonly tightest: Tightest | null;
  /** The window it lies in, with its last launch. */
  readonly window: JudgedWindow | null;
  /** What ends it; null where the judged day does. */
  readonly endsAt: BlockEnd | null;
  /** Minutes of moving right before it; null for a group's first. */
  readonly movingMin: number | null;
}

export type BlockEnd =
  | Closed
  /** The group has the hours it wished. */
  | { readonly kind: 'wish' }
  /** The hour after it is open, but would leave less than every hour that the plan uses. */
  | { readonly kind: 'less spare'; readonly spare: number }
  /** The place, the instructors or the group itself are wanted elsewhere. */
  | { readonly kind: 'elsewhere' };

export type LeftOut =
  /** No site has its least hours at a stretch, whoever else is there: the site that comes nearest, and what closes most of it. */
  | { readonly kind: 'no hours'; readonly site: string; readonly siteName: string; readonly longestHours: number; readonly cause: Closed | null }
  /** It asks for more instructors than there are. */
  | { readonly kind: 'instructors'; readonly needed: number }
  /** It could be placed alone, but not beside the others. */
  | { readonly kind: 'shared'; readonly lacking: 'places' | 'instructors' | 'places and instructors' };

/** Another plan, by what is different in it. */
export interface Alternative {
  readonly objective: PlanObjective;
  readonly proven: boolean;
  readonly changes: readonly { readonly group: string; readonly blocks: readonly Pick<Block, 'site' | 'siteName' | 'from' | 'to'>[] }[];
}

export interface IfLost extends Alternative {
  readonly site: string;
  readonly siteName: string;
  readonly from: string;
  readonly to: string;
}
