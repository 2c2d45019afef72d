/**
 * A fixed number in [0, 1) for a date and a purpose: with the sun, all that makes one invented day unlike the next. It
 * hangs on month and day only, so that the 366 dates of a leap year are all the days there are. FNV-1a, 32 bit.
 */
export function dateShare(date: string, purpose: string): number {
  let hash = 0x811c9dc5;
  for (const character of `${purpose} ${date.slice(5)}`) {
    hash = Math.imul(hash ^ (character.codePointAt(0) ?? 0), 0x01000193) >>> 0;
  }
  // The last letters of a date barely move the high bits of FNV: stir once more (Murmur3's finish).
  hash = Math.imul(hash ^ (hash >>> 16), 0x85ebca6b) >>> 0;
  hash = Math.imul(hash ^ (hash >>> 13), 0xc2b2ae35) >>> 0;
  return ((hash ^ (hash >>> 16)) >>> 0) / 2 ** 32;
}

/** The same, spread over -1 to 1. */
export function dateSwing(date: string, purpose: string): number {
  return 2 * dateShare(date, purpose) - 1;
}

/** 0 below `from`, 1 above `to`, without a corner in between. */
export function ease(value: number, from: number, to: number): number {
  const share = Math.min(1, Math.max(0, (value - from) / (to - from)));
  return share * share * (3 - 2 * share);
}
