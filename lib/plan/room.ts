/** Who may still be where: capacities and instructors that are left, and the slots that leaves to a group. */
import { count, inRuns, longestRun } from './bits.ts';
import type { Puzzle, Stay } from './puzzle.ts';

/** The slots of one group by site, only those in runs long enough for it. */
export interface GroupRoom {
  readonly bySite: readonly number[];
  /** Slots in which it has an instructor, for the way to the next site. */
  readonly staffed: number;
  /** Most hours it could have with nobody else about; 0 when it cannot be placed. */
  readonly mostHours: number;
  readonly longest: number;
}

export interface Room {
  /** Groups that still fit, by site and slot. */
  readonly capacityLeft: readonly number[][];
  readonly staffLeft: number[];
  occupy(group: number, stays: readonly Stay[], by: 1 | -1): void;
  of(group: number): GroupRoom;
}

/** Slots of every group at every site whose spare is at least the threshold. */
export function slotsAt(puzzle: Puzzle, threshold: number): number[][] {
  return puzzle.groups.map(({ spare }) => spare.map((values) => {
    let bits = 0;
    for (const [slot, value] of values.entries()) if (value >= threshold) bits |= 1 << slot;
    return bits;
  }));
}

export function roomFor(puzzle: Puzzle, slots: readonly (readonly number[])[]): Room {
  const capacityLeft = puzzle.capacity.map((places) => Array.from({ length: puzzle.slots }, () => places));
  const staffLeft = Array.from({ length: puzzle.slots }, () => puzzle.instructors);
  const full = capacityLeft.map((places) => bitsWhere(places, 1));

  function occupy(group: number, stays: readonly Stay[], by: 1 | -1): void {
    const need = (puzzle.groups[group]?.instructors ?? 0) * by;
    let before: Stay | null = null;
    for (const stay of stays) {
      const places = capacityLeft[stay.site] ?? [];
      for (let slot = stay.from; slot < stay.to; slot += 1) places[slot] = (places[slot] ?? 0) - by;
      for (let slot = stay.from - wayBefore(puzzle, before, stay); slot < stay.to; slot += 1) staffLeft[slot] = (staffLeft[slot] ?? 0) - need;
      full[stay.site] = bitsWhere(places, 1);
      before = stay;
    }
  }

  function of(group: number): GroupRoom {
    const { minHours, wishHours, instructors } = puzzle.groups[group] ?? { minHours: Infinity, wishHours: 0, instructors: 0 };
    const staffed = ~bitsWhere(staffLeft, instructors);
    const bySite = (slots[group] ?? []).map((bits, site) => inRuns(bits & staffed & ~(full[site] ?? -1), minHours));
    const any = bySite.reduce((all, bits) => all | bits, 0);
    const longest = Math.max(0, ...bySite.map(longestRun));
    // As many stays as its wish has least hours, none of them longer than the longest run.
    return { bySite, staffed, mostHours: any === 0 ? 0 : Math.min(wishHours, count(any), Math.floor(wishHours / minHours) * longest), longest };
  }

  return { capacityLeft, staffLeft, occupy, of };
}

/** Slots in which fewer than `needed` are left. */
function bitsWhere(left: readonly number[], needed: number): number {
  let bits = 0;
  for (const [slot, number] of left.entries()) if (number < needed) bits |= 1 << slot;
  return bits;
}

/** The way to another site takes the slots right before the stay there; a pause at the same site takes none. */
function wayBefore(puzzle: Puzzle, before: Stay | null, stay: Stay): number {
  return before === null || before.site === stay.site ? 0 : puzzle.gapSlots[before.site]?.[stay.site] ?? 0;
}

