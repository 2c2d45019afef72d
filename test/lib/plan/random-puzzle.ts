// Puzzles by a seed: the weather of a site is a curve over the day, as real ones are, or plain noise.
import type { Puzzle } from '../../../lib/plan/puzzle.ts';
import { seeded } from '../../support/seeded.ts';

export interface Size {
  readonly groups: number;
  readonly sites: number;
  readonly slots: number;
  /** Longest wish in hours. */
  readonly wish: number;
}

export function randomPuzzle(seed: number, size: Size): Puzzle {
  const random = seeded(seed);
  const whole = (from: number, to: number): number => from + Math.floor(random() * (to - from + 1));
  const isNoise = random() < 0.5;
  // Few distinct values make many ties.
  const steps = whole(3, 40);
  const closedShare = random() * 0.6;
  const staffed = whole(1, 2);
  const groups = Array.from({ length: size.groups }, () => {
    const minHours = whole(1, Math.min(3, size.wish));
    const candidates = Array.from({ length: size.sites }, () => random() < 0.7);
    const spare = candidates.map((isCandidate) => {
      const [level, swing, phase] = [random() * 4, random() * 3, random() * size.slots];
      return Array.from({ length: size.slots }, (_, slot) => {
        const value = isNoise ? random() * 5 - 5 * closedShare : level + swing * Math.cos(((slot - phase) * Math.PI) / size.slots) - 4 * closedShare;
        return !isCandidate || value < 0 ? NaN : Math.round(value * steps) / steps;
      });
    });
    return { minHours, wishHours: whole(minHours, size.wish), instructors: whole(1, staffed), spare };
  });
  const gapSlots = Array.from({ length: size.sites }, () => Array.from({ length: size.sites }, () => whole(0, 2)));
  return { slots: size.slots, instructors: whole(1, staffed * size.groups), capacity: Array.from({ length: size.sites }, () => whole(1, 2)), gapSlots, groups };
}
