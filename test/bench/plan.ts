// How the planner grows: random days of growing size, the ways tried and the time of each. Tests count the ways; no test
// asserts a clock.
import { bestStays } from '../../lib/plan/best-stays.ts';
import { say } from './turns.ts';
import { randomPuzzle, type Size } from '../lib/plan/random-puzzle.ts';

const SIZES: readonly Size[] = [
  { groups: 2, sites: 3, slots: 8, wish: 4 }, { groups: 4, sites: 4, slots: 10, wish: 4 }, { groups: 6, sites: 5, slots: 12, wish: 4 },
  { groups: 8, sites: 6, slots: 12, wish: 4 }, { groups: 8, sites: 6, slots: 12, wish: 6 }, { groups: 8, sites: 6, slots: 16, wish: 6 }, { groups: 12, sites: 6, slots: 12, wish: 4 },
];

const at = (sorted: readonly number[], share: number): number => sorted[Math.min(sorted.length - 1, Math.floor(share * sorted.length))] ?? NaN;

export function growth(days: number): readonly { readonly size: Size; readonly nodes: number[]; readonly ms: number[]; readonly unproven: number }[] {
  return SIZES.map((size) => {
    const nodes: number[] = [];
    const ms: number[] = [];
    let unproven = 0;
    for (let seed = 1; seed <= days; seed += 1) {
      const puzzle = randomPuzzle(seed * 7919, size);
      const start = performance.now();
      const best = bestStays(puzzle);
      ms.push(performance.now() - start);
      nodes.push(best.nodes);
      unproven += best.proven ? 0 : 1;
    }
    const ascending = (values: number[]): number[] => values.sort((a, b) => a - b);
    return { size, nodes: ascending(nodes), ms: ascending(ms), unproven };
  });
}

if (import.meta.main) {
  const sizes = growth(Number(process.argv[2] ?? 30));
  for (const { size, nodes, ms, unproven } of sizes) {
    const line = (values: readonly number[], digits: number): string => [0.5, 0.95, 1].map((share) => at(values, share).toFixed(digits)).join(' / ');
    say({ name: `plan of ${size.groups} groups, ${size.sites} sites, ${size.slots} h, ${size.wish} h wished`, says: `ways tried ${line(nodes, 0)}; ${line(ms, 1)} ms (median / 95 % / most); ${unproven} of ${nodes.length} not proven` });
  }
}
