/**
 * A training day as a puzzle of whole hours. A slot is the hour between two judged instants; everything that closes a
 * slot (weather, opening hours, the group's own hours) is already in `spare`, so that nothing here knows of weather.
 */
export interface PuzzleGroup {
  /** Least hours at a stretch at one site. */
  readonly minHours: number;
  /** Most hours over the day. */
  readonly wishHours: number;
  /** Instructors who are with the group in every hour at a site, and on the way to the next. */
  readonly instructors: number;
  /** By site, then slot: what is left of the tightest margin, in close bands; NaN where the group may never be. */
  readonly spare: readonly (readonly number[])[];
}

export interface Puzzle {
  /** At most 30: slots are bits. */
  readonly slots: number;
  readonly instructors: number;
  /** Groups at once, by site. */
  readonly capacity: readonly number[];
  /** Whole slots between leaving one site and beginning at another. */
  readonly gapSlots: readonly (readonly number[])[];
  readonly groups: readonly PuzzleGroup[];
}

/** A group at a site from slot `from` until the beginning of slot `to`. */
export interface Stay {
  readonly site: number;
  readonly from: number;
  readonly to: number;
}

/** What makes one plan better than another, the first difference deciding: more placed, more spare, more hours, fewer moves. */
export interface Objective {
  readonly placed: number;
  /** The smallest over all slots used; Infinity when none is. */
  readonly spare: number;
  readonly hours: number;
  /** Stays after a group's first: the times it packs up and begins again, at another site or after a pause. */
  readonly moves: number;
}

/** Positive when `a` is the better. */
export function better(a: Objective, b: Objective): number {
  if (a.placed !== b.placed) return a.placed - b.placed;
  if (a.spare !== b.spare) return a.spare > b.spare ? 1 : -1;
  return a.hours === b.hours ? b.moves - a.moves : a.hours - b.hours;
}

export function objectiveOf(puzzle: Puzzle, stays: readonly (readonly Stay[])[]): Objective {
  let objective: Objective = { placed: 0, spare: Infinity, hours: 0, moves: 0 };
  for (const [index, own] of stays.entries()) {
    if (own.length === 0) continue;
    let { spare, hours } = objective;
    for (const { site, from, to } of own) {
      for (const value of puzzle.groups[index]?.spare[site]?.slice(from, to) ?? []) spare = Math.min(spare, value);
      hours += to - from;
    }
    objective = { placed: objective.placed + 1, spare, hours, moves: objective.moves + own.length - 1 };
  }
  return objective;
}
