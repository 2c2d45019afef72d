/**
 * Sample quantile of Hyndman & Fan (1996) Am. Statistician 50, type 8: approximately median-unbiased whatever the
 * distribution, position p (n + 1/3) + 1/3. NaN for an empty sample.
 */
export function quantile(sample: readonly number[], probability: number): number {
  const sorted = [...sample].sort((a, b) => a - b);
  const n = sorted.length;
  if (n === 0) return NaN;
  const position = probability * (n + 1 / 3) + 1 / 3;
  const below = Math.min(Math.max(Math.floor(position), 1), n);
  const above = Math.min(below + 1, n);
  const share = Math.min(Math.max(position - below, 0), 1);
  return sorted[below - 1]! + share * (sorted[above - 1]! - sorted[below - 1]!);
}
