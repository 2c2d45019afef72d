/**
 * What a plan's holder must be told when the day has been judged anew: each planned block with an instant that may no
 * longer be used. Whoever asks hands in the plan as it was stored and the new judged days, and sends what comes out
 * (worker/morning/plan-notices.ts); nothing comes out when nothing has turned. An hour that is not judged any more counts as unknown.
 */
import type { CombinedMargin } from '../brief/day.ts';
import { tightestFirst } from '../brief/tightest.ts';
import type { Verdict } from '../margin/ids.ts';
import { moreSevere } from '../margin/verdict.ts';
import { epochOf } from '../time.ts';
import { instantsOf } from './blocks.ts';
import { mayBeUsed } from './cells.ts';
import type { Block, DayPlan } from './day-plan.ts';
import { dayKey, type JudgedDays, type PlanRequest } from './request.ts';

export interface PlanNotice {
  readonly group: string;
  readonly block: Pick<Block, 'site' | 'siteName' | 'from' | 'to'>;
  /** The worst that it has turned to. */
  readonly verdict: Verdict;
  /** The first instant that has turned to it. */
  readonly validAt: string;
  /** What says so there; null where nothing was judged. */
  readonly margin: CombinedMargin | null;
  /** When the new judged day was made; null where there is none. */
  readonly asOf: string | null;
}

/** The most restrictive first, then the earliest. Of hours before `fromMs` nothing is news any more. */
export function planChanges(request: Pick<PlanRequest, 'groups'>, plan: DayPlan, days: JudgedDays, fromMs = -Infinity): PlanNotice[] {
  const notices = plan.groups.flatMap(({ name, wing, sheet, blocks }, index) => blocks.flatMap((block): PlanNotice[] => {
    const day = days.get(dayKey({ site: block.site, wing, sheet }));
    const close = request.groups[index]?.close ?? false;
    const turned = instantsOf(block).filter((validAt) => epochOf(validAt) >= fromMs).flatMap((validAt) => {
      const hour = day?.hours.find((each) => each.validAt === validAt);
      const verdict = hour?.verdict ?? 'unknown';
      return mayBeUsed(verdict, close) ? [] : [{ validAt, verdict, margin: hour === undefined ? null : tightestFirst(hour.margins)[0] ?? null }];
    });
    const [worst] = turned.sort((a, b) => moreSevere(b.verdict, a.verdict));
    if (worst === undefined) return [];
    const { site, siteName, from, to } = block;
    return [{ group: name, block: { site, siteName, from, to }, ...worst, asOf: day?.issuedAt ?? null }];
  }));
  return notices.sort((a, b) => moreSevere(b.verdict, a.verdict) || (a.validAt < b.validAt ? -1 : a.validAt > b.validAt ? 1 : 0));
}
