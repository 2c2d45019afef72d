/** The order in which the margins of an hour are told: what is passed, what is not known, then the least left first. */
import type { CombinedMargin } from './day.ts';
import { defaultBand } from '../margin/margin.ts';

function rank(margin: CombinedMargin): number {
  switch (margin.status) {
    case 'beyond': return 0;
    case 'unknown': return 1;
    case 'close': return 2;
    case 'within': return 3;
  }
}

/** Spare in close bands of its own unit, so that metres and metres per second compare; no solution is tightest. */
function spareInBands(margin: CombinedMargin): number {
  return margin.spare === null ? -Infinity : margin.spare / (defaultBand(margin.id, margin.unit) || 1);
}

export function tightestFirst(margins: readonly CombinedMargin[]): CombinedMargin[] {
  return [...margins].sort((a, b) => {
    const byRank = rank(a) - rank(b);
    if (byRank !== 0) return byRank;
    const [left, right] = [spareInBands(a), spareInBands(b)];
    return left === right ? 0 : left < right ? -1 : 1;
  });
}
