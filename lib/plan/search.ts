/** The search for the best plan among the slots with enough spare: branch and bound (branches.ts), by one order of the groups or another. */
import { searchBy } from './branches.ts';
import { better, objectiveOf, type Puzzle, type Stay } from './puzzle.ts';

export interface SearchOptions {
  /** Slots with less spare are not used. */
  readonly threshold: number;
  /** Groups that may be left out. */
  readonly leaveOut: number;
  /** True: any plan that gives everyone the least hours will do. */
  readonly anyPlan: boolean;
  readonly nodeBudget: number;
}

export interface Found {
  /** By group; null when there is no such plan. */
  readonly stays: readonly (readonly Stay[])[] | null;
  /** Ways of groups that were tried. */
  readonly nodes: number;
  /** False when the budget ended the search. */
  readonly proven: boolean;
}

/** Where one order of the groups leads nowhere in a quarter of the budget, the other has the rest of it. */
export function search(whole: Puzzle, options: SearchOptions): Found {
  const isOneOrder = new Set(whole.groups.map(({ instructors }) => instructors)).size < 2;
  const first = searchBy('confined', whole, isOneOrder ? options : { ...options, nodeBudget: Math.ceil(options.nodeBudget / 4) });
  if (isOneOrder || first.proven || (options.anyPlan && first.stays !== null)) return first;
  const second = searchBy('needy', whole, { ...options, nodeBudget: Math.floor((options.nodeBudget * 3) / 4) });
  const nodes = first.nodes + second.nodes;
  if (second.proven || first.stays === null) return { ...second, nodes };
  const isBetter = second.stays !== null && better(objectiveOf(whole, second.stays), objectiveOf(whole, first.stays)) > 0;
  return { stays: isBetter ? second.stays : first.stays, nodes, proven: false };
}
