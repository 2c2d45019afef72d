// The same question answered without any cleverness: every group's every way of spending the day, in every combination.
import { better, objectiveOf, type Objective, type Puzzle, type Stay } from '../../../lib/plan/puzzle.ts';

/** All lists of stays of one group that keep its own rules, the empty one too. Written apart from lib/plan/stays.ts. */
function ways(puzzle: Puzzle, index: number): Stay[][] {
  const group = puzzle.groups[index]!;
  const found: Stay[][] = [[]];
  const extend = (stays: readonly Stay[], hours: number): void => {
    const last = stays.at(-1);
    for (let site = 0; site < puzzle.capacity.length; site += 1) {
      const earliest = last === undefined ? 0 : last.to + (last.site === site ? 1 : puzzle.gapSlots[last.site]![site]!);
      for (let from = earliest; from < puzzle.slots; from += 1) {
        for (let to = from + 1; to <= puzzle.slots; to += 1) {
          if (Number.isNaN(group.spare[site]![to - 1])) break;
          if (to - from < group.minHours || hours + to - from > group.wishHours) continue;
          const next = [...stays, { site, from, to }];
          found.push(next);
          extend(next, hours + to - from);
        }
      }
    }
  };
  extend([], 0);
  return found;
}

/** Whether capacities and instructors hold in every slot; a group on its way to another site keeps its instructors. */
function holds(puzzle: Puzzle, plan: readonly (readonly Stay[])[]): boolean {
  for (let slot = 0; slot < puzzle.slots; slot += 1) {
    const here = puzzle.capacity.map(() => 0);
    let staff = 0;
    for (const [index, stays] of plan.entries()) {
      const at = stays.find(({ from, to }) => from <= slot && slot < to);
      const onTheWay = stays.some((stay, nth) => {
        const before = stays[nth - 1];
        return before !== undefined && before.site !== stay.site && stay.from - puzzle.gapSlots[before.site]![stay.site]! <= slot && slot < stay.from;
      });
      if (at !== undefined) here[at.site]! += 1;
      if (at !== undefined || onTheWay) staff += puzzle.groups[index]!.instructors;
    }
    if (staff > puzzle.instructors || here.some((groups, site) => groups > puzzle.capacity[site]!)) return false;
  }
  return true;
}

export function bruteForce(puzzle: Puzzle): Objective {
  const all = puzzle.groups.map((_, index) => ways(puzzle, index));
  let best: Objective = objectiveOf(puzzle, []);
  const combine = (plan: Stay[][]): void => {
    if (!holds(puzzle, plan)) return;
    if (plan.length === all.length) {
      const objective = objectiveOf(puzzle, plan);
      if (better(objective, best) > 0) best = objective;
      return;
    }
    for (const way of all[plan.length]!) combine([...plan, way]);
  };
  combine([]);
  return best;
}

/** Whether every stay keeps the group's own rules. */
export function isLawful(puzzle: Puzzle, plan: readonly (readonly Stay[])[]): boolean {
  return holds(puzzle, plan) && plan.every((stays, index) => {
    const group = puzzle.groups[index]!;
    const hours = stays.reduce((sum, { from, to }) => sum + to - from, 0);
    return hours <= group.wishHours && stays.every(({ site, from, to }, nth) => {
      const before = stays[nth - 1];
      const gap = before === undefined ? 0 : before.site === site ? 1 : puzzle.gapSlots[before.site]![site]!;
      return to - from >= group.minHours && from >= (before?.to ?? 0) + gap && to <= puzzle.slots
        && group.spare[site]!.slice(from, to).every((spare) => !Number.isNaN(spare));
    });
  });
}
