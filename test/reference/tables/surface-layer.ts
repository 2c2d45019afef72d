/** The log law: worked examples over level ground, and a measured mast. */
import { logLawFactor } from '../../../lib/air/surface-layer.ts';
import { table, type Table } from '../../accuracy/table.ts';

const topic = { topic: 'Log law over level ground', unit: 'm/s' } as const;

type Row = readonly [at10Mps: number, toM: number, roughnessM: number, expectedMps: number];
const column = {
  says: ([at10Mps, toM, roughnessM]: Row): string => `${at10Mps} m/s at 10 m over a roughness of ${roughnessM} m, at ${toM} m`,
  expected: ([, , , mps]: Row): number => mps,
  ours: ([at10Mps, toM, roughnessM]: Row): number => at10Mps * logLawFactor({ fromM: 10, toM, roughnessM }),
};

const windpowerlib = table<Row>(
  { ...topic, source: 'wind-python/windpowerlib @191d8ca, test of wind speed', standing: 'published', evidence: 'number', rounding: 'to 0.00000001 m/s', tolerance: 0.000000005, count: 1 },
  [[5, 100, 0.15, 7.74136523]],
  column,
);
const stull = table<Row>(
  { ...topic, source: 'Stull, Practical Meteorology (2015), § 18.5.2, sample application', standing: 'memory', evidence: 'number', rounding: 'to 0.01 m/s', tolerance: 0.005, count: 1 },
  [[5, 25, 0.5, 6.53]],
  column,
);
const ratios = table<Row>(
  { ...topic, source: 'log law worked out again', standing: 'memory', evidence: 'formula', rounding: 'to 0.0001 m/s', tolerance: 0.00005, count: 4 },
  [[1, 1.5, 0.03, 0.6734], [1, 2, 0.03, 0.7229], [1, 5, 0.03, 0.8807], [1, 30, 0.03, 1.1891]],
  column,
);
const gradient = table(
  { topic: 'Wind lost between 10 m and 2 m', unit: 'm/s', source: 'log law worked out again', standing: 'memory', evidence: 'formula', rounding: 'to 0.001 m/s', tolerance: 0.0005, count: 1 },
  [[8, 0.03, 2.216]] as const,
  {
    says: ([at10Mps, roughnessM]) => `${at10Mps} m/s at 10 m over a roughness of ${roughnessM} m`,
    expected: ([, , mps]) => mps,
    ours: ([at10Mps, roughnessM]) => at10Mps * (1 - logLawFactor({ fromM: 10, toM: 2, roughnessM })),
  },
);

// FAO-56 eq. 47 stands on grass of 0.12 m: displacement 0.08 m, roughness 0.01476 m. Ours has no displacement, so the
// heights are counted from the displaced ground.
const fao = table(
  { topic: 'Wind at 2 m over clipped grass', unit: 'm/s', source: 'FAO-56 (1998), example 14, p. 92', standing: 'published', evidence: 'number', rounding: 'to 0.1 m/s', tolerance: 0.05, count: 1 },
  [[3.2, 2.4]] as const,
  { says: ([at10Mps]) => `${at10Mps} m/s at 10 m`, expected: ([, mps]) => mps, ours: ([at10Mps]) => at10Mps * logLawFactor({ fromM: 9.92, toM: 1.92, roughnessM: 0.01476 }) },
);

// Mast RS, 3 km upwind of the hill, on level ground of roughness 0.03 m (as published); run TU03-A, half-hour means.
const referenceMast = table(
  {
    topic: 'Log law at the Askervein reference mast', unit: '%', source: 'Taylor & Teunissen (1985) MSRB-84-6, table A1.7, p. 103', standing: 'published', evidence: 'nature', compared: 'in percent',
    rounding: 'to 0.01 m/s', tolerance: 5, count: 5, wider: 'real air: half an hour over a few kilometres of ground, against a law for endless even ground',
  },
  [[3, 7.78], [5, 8.65], [8, 9.28], [24, 11.27], [34, 12.11]] as const,
  { says: ([toM]) => `from 10.26 m/s at 15 m, at ${toM} m`, expected: ([, mps]) => mps, ours: ([toM]) => 10.26 * logLawFactor({ fromM: 15, toM, roughnessM: 0.03 }) },
);

export const surfaceLayer: readonly Table[] = [windpowerlib, stull, ratios, gradient, fao, referenceMast];
