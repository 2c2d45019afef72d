/** The one statistic the model computes beyond counting: a sample quantile. */
import { quantile } from '../../../lib/numeric/quantile.ts';
import { table, type Table } from '../../accuracy/table.ts';

const oneToTen = [1, 2, 3, 4, 5, 6, 7, 8, 9, 10];

// Definition of type 8 by Hyndman & Fan (1996) Am. Statistician 50, 361; worked out with numpy.
const typeEight = table(
  { topic: 'Sample quantile, type 8', unit: '', source: 'Hyndman & Fan (1996), by numpy', standing: 'memory', evidence: 'formula', rounding: 'to 0.000001', tolerance: 0.0000005, count: 5 },
  [[0.1, 1.366667], [0.25, 2.916667], [0.5, 5.5], [0.75, 8.083333], [0.9, 9.633333]] as const,
  { says: ([share]) => `${share} of 1 to 10`, expected: ([, value]) => value, ours: ([share]) => quantile(oneToTen, share) },
);

export const statistics: readonly Table[] = [typeEight];
