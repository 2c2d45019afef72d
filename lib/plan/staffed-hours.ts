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

/** `staffHours`: instructors times hours in which anybody could be out. -1 when not even the least hours can be staffed. */
export function staffedHours(groups: readonly StaffedGroup[], staffHours: number, mayLeaveOut: boolean): number {
  let left = staffHours;
  let hours = 0;
  if (!mayLeaveOut) {
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
