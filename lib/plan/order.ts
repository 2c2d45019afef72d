/** What a group is worth, and which one is placed first. */
import { count } from './bits.ts';
import type { Puzzle } from './puzzle.ts';
import type { GroupRoom } from './room.ts';

/** One hour outweighs every move of a day. */
export const HOUR_WORTH = 1000;

/** What a group is worth with nobody else about. */
export function alone({ mostHours, longest }: GroupRoom): number {
  return mostHours * HOUR_WORTH - (Math.ceil(mostHours / longest) - 1);
}

/** By what a group comes first: few hours that it could have, or many instructors that it needs. */
export type First = 'confined' | 'needy';

/** Among equals by the other of the two, then as given. */
export function inOrder(puzzle: Puzzle, roomOf: (group: number) => GroupRoom, first: First): number[] {
  const sizes = puzzle.groups.map((_, group) => roomOf(group).bySite.reduce((sum, bits) => sum + count(bits), 0));
  const needs = puzzle.groups.map(({ instructors }) => instructors);
  const bySize = (a: number, b: number): number => (sizes[a] ?? 0) - (sizes[b] ?? 0);
  const byNeed = (a: number, b: number): number => (needs[b] ?? 0) - (needs[a] ?? 0);
  return [...puzzle.groups.keys()].sort((a, b) => (first === 'needy' ? byNeed(a, b) || bySize(a, b) : bySize(a, b) || byNeed(a, b)) || a - b);
}
