/** The order in which the margins of an hour are told: what is passed, what is not known, then the least left first. */
import type { CombinedMargin } from './day.ts';
import { tightness } from '../margin/sources.ts';

function rank(margin: CombinedMargin): number {
  switch (margin.status) {
    case 'beyond': return 0;
    case 'unknown': return 1;
    case 'close': return 2;
    case 'within': return 3;
  }
}

export function tightestFirst(margins: readonly CombinedMargin[]): CombinedMargin[] {
  return [...margins].sort((a, b) => {
    const byRank = rank(a) - rank(b);
    if (byRank !== 0) return byRank;
    const [left, right] = [tightness(a), tightness(b)];
    return left === right ? 0 : left < right ? -1 : 1;
  });
}
