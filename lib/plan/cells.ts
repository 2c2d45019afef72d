/**
 * Whether a group may be at a site in a slot, and if not, why. A slot is judged by both instants it lies between, the
 * way windows are: it is as restricted as the more restricted of them, and an instant that was not judged closes it.
 */
import type { CombinedMargin, JudgedDay, JudgedHour } from '../brief/day.ts';
import { tightestFirst } from '../brief/tightest.ts';
import { isSignalOnly } from '../brief/words/causes.ts';
import type { Verdict } from '../margin/ids.ts';
import { tightness } from '../margin/sources.ts';
import { isOpen, moreSevere } from '../margin/verdict.ts';
import type { PlanGroup, PlanSite } from './request.ts';
import type { Slot } from './slots.ts';

export type Closed =
  /** Before the group's first hour or after its last. */
  | { readonly kind: 'group hours' }
  | { readonly kind: 'site hours' }
  | { readonly kind: 'lost' }
  /** Outside the legal day, or nothing was judged there. */
  | { readonly kind: 'not judged' }
  /** Beyond, unknown, or close where the group does not take that; the margin that says so, where one does. */
  | { readonly kind: 'margin'; readonly verdict: Verdict; readonly validAt: string; readonly margin: CombinedMargin | null };

export interface Tightest {
  readonly validAt: string;
  readonly margin: CombinedMargin;
}

export interface Cell {
  readonly closed: Closed | null;
  /** In close bands; NaN where closed. */
  readonly spare: number;
  readonly tightest: Tightest | null;
}

export interface CellQuery {
  readonly group: PlanGroup;
  readonly site: PlanSite;
  readonly slot: Slot;
  readonly day: JudgedDay | undefined;
  readonly isLost: boolean;
}

export function cellOf({ group, site, slot, day, isLost }: CellQuery): Cell {
  if (slot.startMin < group.earliestHour * 60 || slot.endMin > group.latestHour * 60) return shut({ kind: 'group hours' });
  if (slot.startMin < site.openFromHour * 60 || slot.endMin > site.openToHour * 60) return shut({ kind: 'site hours' });
  if (isLost) return shut({ kind: 'lost' });
  const [start, end] = [slot.from, slot.to].map((at) => day?.hours.find(({ validAt }) => validAt === at));
  if (start === undefined || end === undefined) return shut({ kind: 'not judged' });
  const worse = moreSevere(end.verdict, start.verdict) > 0 ? end : start;
  if (!mayBeUsed(worse.verdict, group.close)) return shut({ kind: 'margin', verdict: worse.verdict, validAt: worse.validAt, margin: tightestFirst(worse.margins)[0] ?? null });
  const [left, right] = [spareOf(start), spareOf(end)];
  return right.spare < left.spare ? { closed: null, ...right } : { closed: null, ...left };
}

/** Hours that are beyond or unknown are never used, those that are close only where the group takes them. */
export function mayBeUsed(verdict: Verdict, close: boolean): boolean {
  return isOpen(verdict) && (close || verdict !== 'close');
}

function shut(closed: Closed): Cell {
  return { closed, spare: NaN, tightest: null };
}

/** What the tightest margin of an hour leaves. The thunderstorm signal alone has no number to compare. */
function spareOf(hour: JudgedHour): { readonly spare: number; readonly tightest: Tightest | null } {
  let spare = Infinity;
  let tightest: Tightest | null = null;
  for (const margin of hour.margins) {
    if (isSignalOnly(margin)) continue;
    const left = tightness(margin);
    if (left < spare) [spare, tightest] = [left, { validAt: hour.validAt, margin }];
  }
  return { spare, tightest };
}
