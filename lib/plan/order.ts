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

/** The most confined first; among equals the one that needs more instructors, then as given. */
export function inOrder(puzzle: Puzzle, roomOf: (group: number) => GroupRoom): number[] {
  const sizes = puzzle.groups.map((_, group) => roomOf(group).bySite.reduce((sum, bits) => sum + count(bits), 0));
  const needs = puzzle.groups.map(({ instructors }) => instructors);
  return [...puzzle.groups.keys()].sort((a, b) => (sizes[a] ?? 0) - (sizes[b] ?? 0) || (needs[b] ?? 0) - (needs[a] ?? 0) || a - b);
}
