/** Sets of slots as the bits of a number: slot 0 is the lowest bit, at most 30 of them. */

export function range(from: number, to: number): number {
  return ((1 << (to - from)) - 1) << from;
}

export function count(bits: number): number {
  let left = bits;
  let ones = 0;
  while (left !== 0) {
    left &= left - 1;
    ones += 1;
  }
  return ones;
}

/** Those slots that lie in a run of at least `length`. */
export function inRuns(bits: number, length: number): number {
  let starts = bits;
  for (let step = 1; step < length; step += 1) starts &= bits >> step;
  let covered = starts;
  for (let step = 1; step < length; step += 1) covered |= starts << step;
  return covered;
}

export function longestRun(bits: number): number {
  let left = bits;
  let length = 0;
  while (left !== 0) {
    left &= left >> 1;
    length += 1;
  }
  return length;
}
