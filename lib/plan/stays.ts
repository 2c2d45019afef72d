/** Every way in which one group can spend so many hours in so many stays, in a fixed order: earlier first. */
import { range } from './bits.ts';
import type { Puzzle, Stay } from './puzzle.ts';
import type { GroupRoom } from './room.ts';

export interface Wanted {
  readonly group: number;
  readonly room: GroupRoom;
  readonly hours: number;
  readonly stays: number;
}

/** Calls `visit` for each; ends early when that returns true. */
export function eachWay(puzzle: Puzzle, wanted: Wanted, visit: (stays: readonly Stay[]) => boolean): boolean {
  const { room } = wanted;
  const minHours = puzzle.groups[wanted.group]?.minHours ?? Infinity;
  const chosen: Stay[] = [];

  function more(hoursLeft: number, staysLeft: number): boolean {
    if (staysLeft === 0) return visit(chosen);
    const before = chosen.at(-1);
    const longest = hoursLeft - (staysLeft - 1) * minHours;
    const shortest = staysLeft === 1 ? hoursLeft : minHours;
    for (let from = before?.to ?? 0; from + shortest <= puzzle.slots; from += 1) {
      for (const [site, bits] of room.bySite.entries()) {
        if ((bits & (1 << from)) === 0) continue;
        if (before !== undefined && !canFollow(before, site, from)) continue;
        for (let hours = longest; hours >= shortest; hours -= 1) {
          const needed = range(from, from + hours);
          if ((bits & needed) !== needed) continue;
          chosen.push({ site, from, to: from + hours });
          if (more(hoursLeft - hours, staysLeft - 1)) return true;
          chosen.pop();
        }
      }
    }
    return false;
  }

  /** A pause is an hour at least, or it is no pause; on the way between sites the instructors are needed too. */
  function canFollow(before: Stay, site: number, from: number): boolean {
    if (site === before.site) return from > before.to;
    const gap = puzzle.gapSlots[before.site]?.[site] ?? Infinity;
    if (from - before.to < gap) return false;
    const way = range(from - gap, from);
    return (room.staffed & way) === way;
  }

  return more(wanted.hours, wanted.stays);
}
