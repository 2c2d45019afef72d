/**
 * A second upper bound for the hours that some groups can have together, by instructors alone: everyone who must be
 * placed takes the least hours first, and what is then left of the instructors' hours is spent where an hour needs the
 * fewest of them.
 */
export interface StaffedGroup {
  readonly instructors: number;
  readonly minHours: number;
  readonly mostHours: number;
}

/** `staffHours`: instructors times hours in which anybody could be out. -1 when not even the least hours of all but `leaves` can be staffed. */
export function staffedHours(groups: readonly StaffedGroup[], staffHours: number, leaves: number): number {
  const mayLeaveOut = leaves > 0;
  let left = staffHours;
  let hours = 0;
  if (mayLeaveOut) {
    const least = groups.map(({ instructors, minHours }) => instructors * minHours).sort((a, b) => a - b).slice(0, Math.max(0, groups.length - leaves));
    if (least.reduce((sum, need) => sum + need, 0) > left) return -1;
  } else {
    for (const { instructors, minHours } of groups) {
      left -= instructors * minHours;
      hours += minHours;
    }
    if (left < 0) return -1;
  }
  for (const { instructors, minHours, mostHours } of [...groups].sort((a, b) => a.instructors - b.instructors)) {
    const wanted = mayLeaveOut ? mostHours : mostHours - minHours;
    const given = instructors === 0 ? wanted : Math.min(wanted, Math.floor(left / instructors));
    hours += given;
    left -= given * instructors;
    if (given < wanted) {
      // A part of an hour is none, but it might have been one of somebody who needs fewer: count it.
      return hours + (left > 0 ? 1 : 0);
    }
  }
  return hours;
}

/** The largest sum of some of the needs that is no more than there are: three instructors and groups of two use two. */
export function mostUsed(needs: readonly number[], left: number): number {
  const all = needs.reduce((sum, need) => sum + need, 0);
  if (all <= left || left > 30) return Math.min(all, left);
  let sums = 1;
  for (const need of needs) if (need <= left) sums |= sums << need;
  const within = sums & (2 ** (left + 1) - 1);
  return 31 - Math.clz32(within);
}
