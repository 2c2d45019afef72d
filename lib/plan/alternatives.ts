/** Other plans than the best: the next best one, and what becomes of the day when one hour of it is lost. */
import { bestStays, type Best } from './best-stays.ts';
import { placeOf } from './blocks.ts';
import type { Alternative, IfLost, PlanObjective } from './day-plan.ts';
import type { Posed } from './pose.ts';
import { better, type Objective, type Puzzle, type Stay } from './puzzle.ts';

/** Each of them is one of many searches; one that runs out shows the best it found. */
const NODE_BUDGET = 4_000;

/** The best plan in which at least one block of the best plan does not stand as it stands there. */
export function nextBestOf(posed: Posed, best: Best): Alternative | null {
  let next: Best | null = null;
  for (const [group, stays] of best.stays.entries()) {
    for (const stay of stays) {
      const other = bestStays(without(posed.puzzle, stay, [group]), NODE_BUDGET);
      if (other.objective.placed > 0 && (next === null || better(other.objective, next.objective) > 0)) next = other;
    }
  }
  return next === null ? null : { objective: shownObjective(next.objective), proven: next.proven, changes: changesOf(posed, best, next) };
}

/** For every hour that the best plan uses: the best plan when nobody can be at that site then. */
export function ifLostOf(posed: Posed, best: Best): IfLost[] {
  const used = new Map(best.stays.flat().flatMap(({ site, from, to }) => Array.from({ length: to - from }, (_, nth) => [`${from + nth} ${site}`, { site, from: from + nth, to: from + nth + 1 }] as const)));
  return [...used.values()].sort((a, b) => a.from - b.from || a.site - b.site).map((hour) => {
    const other = bestStays(without(posed.puzzle, hour, [...posed.puzzle.groups.keys()]), NODE_BUDGET);
    return { ...placeOf(posed, hour), objective: shownObjective(other.objective), proven: other.proven, changes: changesOf(posed, best, other) };
  });
}

/** The puzzle in which these groups may not be at a site from a slot to another. */
function without(puzzle: Puzzle, { site, from, to }: Stay, groups: readonly number[]): Puzzle {
  return {
    ...puzzle,
    groups: puzzle.groups.map((group, index) => (groups.includes(index)
      ? { ...group, spare: group.spare.map((values, at) => (at === site ? values.map((value, slot) => (slot >= from && slot < to ? NaN : value)) : values)) }
      : group)),
  };
}

function changesOf(posed: Posed, best: Best, other: Best): Alternative['changes'] {
  return other.stays.flatMap((stays, group) => {
    if (JSON.stringify(stays) === JSON.stringify(best.stays[group])) return [];
    return [{ group: posed.request.groups[group]?.name ?? '', blocks: stays.map((stay) => placeOf(posed, stay)) }];
  });
}

export function shownObjective({ placed, spare, hours, moves }: Objective): PlanObjective {
  return { placed, spare: Number.isFinite(spare) ? spare : null, hours, moves };
}
