/** Straight scales from a quantity to pixels. */
export type Scale = (value: number) => number;

/** A span of nothing becomes a span of one, so that a flat picture still has a place for everything. */
export function scaleOf(domain: readonly [number, number], range: readonly [number, number]): Scale {
  const [from, to] = domain;
  const [start, end] = range;
  const width = to === from ? 1 : to - from;
  return (value) => start + ((value - from) / width) * (end - start);
}

export function extent(values: readonly number[]): readonly [number, number] {
  const known = values.filter((value) => Number.isFinite(value));
  return known.length === 0 ? [0, 1] : [Math.min(...known), Math.max(...known)];
}
