/**
 * The best plan, exactly: first how many groups can be placed at all, then the largest spare with which that many still
 * can (a search over the spares that occur, halved each time), then among the slots with at least that spare the most
 * hours in the fewest moves.
 */
import { objectiveOf, type Objective, type Puzzle, type Stay } from './puzzle.ts';
import { search, type Found } from './search.ts';

export interface Best {
  /** By group; empty for one that is left out. */
  readonly stays: readonly (readonly Stay[])[];
  readonly objective: Objective;
  readonly nodes: number;
  /** False when the budget ended a search: then this is a plan that keeps every rule, and a better one may exist. */
  readonly proven: boolean;
}

const NODE_BUDGET = 60_000;

export function bestStays(puzzle: Puzzle, nodeBudget: number = NODE_BUDGET): Best {
  let nodes = 0;
  let proven = true;
  const counted = (found: Found): Found => {
    nodes += found.nodes;
    proven &&= found.proven;
    return found;
  };
  const anyPlan = (threshold: number, leaveOut: number): Found => counted(search(puzzle, { threshold, leaveOut, anyPlan: true, nodeBudget }));

  const groups = puzzle.groups.length;
  let leaveOut = 0;
  let found = anyPlan(-Infinity, leaveOut);
  while (found.stays === null && leaveOut < groups) {
    leaveOut += 1;
    found = anyPlan(-Infinity, leaveOut);
  }
  if (leaveOut === groups || found.stays === null) return { stays: puzzle.groups.map(() => []), objective: objectiveOf(puzzle, []), nodes, proven };

  const spares = [...new Set(puzzle.groups.flatMap(({ spare }) => spare.flat()).filter((value) => !Number.isNaN(value)))].sort((a, b) => a - b);
  const index = (spare: number): number => spares.indexOf(spare);
  // Held: a plan with at least spares[held] is in hand; from `failed` on there is none.
  let held = index(objectiveOf(puzzle, found.stays).spare);
  let failed = spares.length;
  while (failed - held > 1) {
    const middle = Math.floor((held + failed) / 2);
    const next = anyPlan(spares[middle] ?? Infinity, leaveOut);
    if (next.stays === null) failed = middle;
    else {
      found = next;
      held = index(objectiveOf(puzzle, next.stays ?? []).spare);
    }
  }
  const whole = counted(search(puzzle, { threshold: spares[held] ?? -Infinity, leaveOut, anyPlan: false, nodeBudget }));
  const stays = whole.stays ?? found.stays ?? [];
  return { stays, objective: objectiveOf(puzzle, stays), nodes, proven };
}
