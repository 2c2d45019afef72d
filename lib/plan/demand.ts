/** What of the room the groups still to be placed could fight over: all that a search must remember of its past. */
import type { Puzzle } from './puzzle.ts';
import type { Room } from './room.ts';

export interface Demand {
  /** Places that more groups could want than there are, with those still to come. */
  readonly places: readonly { readonly site: number; readonly slot: number; readonly groups: number }[];
  /** Instructors that the groups to come would need all together. */
  readonly staff: number;
}

/** By number of groups already placed, in their order. */
export function demandOf(puzzle: Puzzle, slots: readonly (readonly number[])[], order: readonly number[]): Demand[] {
  const wanting = (site: number, slot: number, groups: readonly number[]): number => groups.filter((group) => ((slots[group]?.[site] ?? 0) & (1 << slot)) !== 0).length;
  const fought = puzzle.capacity.flatMap((capacity, site) => Array.from({ length: puzzle.slots }, (_, slot) => ({ site, slot })).filter(({ slot }) => wanting(site, slot, order) > capacity));
  const needs = (groups: readonly number[]): number => groups.reduce((sum, group) => sum + (puzzle.groups[group]?.instructors ?? 0), 0);
  const isStaffShort = needs(order) > puzzle.instructors;
  return order.map((_, depth) => {
    const toCome = order.slice(depth);
    return {
      places: fought.map(({ site, slot }) => ({ site, slot, groups: wanting(site, slot, toCome) })).filter(({ groups }) => groups > 0),
      staff: isStaffShort ? needs(toCome) : 0,
    };
  });
}

/** Two states with the same text have the same future. */
export function stateOf(demand: Demand, room: Room): string {
  let text = '';
  for (const { site, slot, groups } of demand.places) text += String.fromCharCode(48 + Math.min(groups, room.capacityLeft[site]?.[slot] ?? 0));
  if (demand.staff > 0) for (const left of room.staffLeft) text += String.fromCharCode(48 + Math.min(demand.staff, left));
  return text;
}
