// Two pieces of work in turns, in one process: what is kept is the ratio, because a clock alone says more about the machine
// than about the code. A busy machine slows both.
export interface Pair {
  readonly name: string;
  /** What stands behind the ratio's 1. */
  readonly yardstick: string;
  readonly own: () => unknown;
  readonly yard: () => unknown;
  readonly warmUp?: number;
  readonly rounds?: number;
}

export interface Measured {
  readonly name: string;
  readonly yardstick: string;
  readonly ownMs: number;
  readonly yardMs: number;
  readonly ratio: number;
}

export function median(values: readonly number[]): number {
  const sorted = [...values].sort((a, b) => a - b);
  return sorted[Math.floor(sorted.length / 2)] ?? NaN;
}

let kept: unknown;

export async function inTurns({ name, yardstick, own, yard, warmUp = 50, rounds = 100 }: Pair): Promise<Measured> {
  const ownMs: number[] = [];
  const yardMs: number[] = [];
  for (let round = 0; round < warmUp + rounds; round += 1) {
    const start = performance.now();
    kept = await own();
    const middle = performance.now();
    kept = await yard();
    const end = performance.now();
    if (round < warmUp) continue;
    ownMs.push(middle - start);
    yardMs.push(end - middle);
  }
  if (kept === undefined) throw new Error(`${name}: nothing came out`);
  return { name, yardstick, ownMs: median(ownMs), yardMs: median(yardMs), ratio: median(ownMs) / median(yardMs) };
}

/** The exponent of a power law through these points, by least squares of the logarithms. */
export function exponentOf(points: readonly { readonly size: number; readonly cost: number }[]): number {
  const logs = points.map(({ size, cost }) => [Math.log(size), Math.log(cost)] as const);
  const mean = (index: 0 | 1): number => logs.reduce((sum, log) => sum + log[index], 0) / logs.length;
  const [meanX, meanY] = [mean(0), mean(1)];
  return logs.reduce((sum, [x, y]) => sum + (x - meanX) * (y - meanY), 0) / logs.reduce((sum, [x]) => sum + (x - meanX) ** 2, 0);
}

export interface Growing {
  readonly name: string;
  readonly exponent: number;
  readonly points: readonly { readonly size: number; readonly cost: number }[];
}

export interface Told {
  readonly name: string;
  readonly says: string;
}

/** One line a measure, for whoever started the process. */
export function say(result: Measured | Growing | Told): void {
  console.log(JSON.stringify(result));
}
