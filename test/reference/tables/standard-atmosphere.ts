/** The standard atmosphere below 11 km: temperature, pressure and density against height. */
import { geopotentialM, standardAir } from '../../../lib/air/standard-atmosphere.ts';
import { table, type Passport, type Table } from '../../accuracy/table.ts';

type Row = readonly [heightM: number, temperatureK: number, pressurePa: number, densityKgm3: number];

const temperature = { topic: 'Standard atmosphere, temperature', unit: 'K' } as const;
const pressure = { topic: 'Standard atmosphere, pressure', unit: 'Pa' } as const;
const density = { topic: 'Standard atmosphere, density', unit: 'kg/m³' } as const;

// Geometric height; 0.001 K, 0.1 Pa, 0.00001 kg/m3; the same as ICAO Doc 7488. Transcribed in the tests of airinnova/ambiance @232032b.
const iso = { source: 'ISO 2533:1975, table 1', standing: 'published', evidence: 'number' } as const;
const isoRows: readonly Row[] = [
  [0, 288.15, 101325, 1.225],
  [1000, 281.651, 89876.3, 1.11166],
  [2000, 275.154, 79501.4, 1.00655],
];

// Geometric height; 0.001 K, whole pascals, 0.0001 kg/m3 near the ground. Transcribed in the tests of
// AeroPython/scikit-aero @0695809.
const us76 = { source: 'U.S. Standard Atmosphere 1976, table I', standing: 'published', evidence: 'number' } as const;
const us76Rows: readonly Row[] = [
  [500, 284.9, 95461, 1.1673],
  [550, 284.575, 94890, 1.1616],
  [850, 282.626, 91523, 1.1281],
  [2500, 271.906, 74691, 0.95695],
  [6500, 245.943, 44075, 0.62431],
  [9000, 229.733, 30800, 0.46706],
  [11000, 216.774, 22699, 0.3648],
];

// The same table, rows from memory.
const remembered = { ...us76, standing: 'memory' } as const;
const rememberedRows: readonly Row[] = [
  [1500, 278.402, 84560, 1.0581],
  [3000, 268.659, 70121, 0.90925],
  [4000, 262.166, 61660, 0.81935],
];

// Geopotential height. The standard's defining equations with its constants, worked out once apart from
// this code: they show that the equations are typed right.
const defined = { source: 'ISO 2533:1975, defining equations', standing: 'memory', evidence: 'formula' } as const;
const definedRows: readonly Row[] = [
  [0, 288.15, 101325, 1.225],
  [500, 284.9, 95460.8, 1.16727],
  [1000, 281.65, 89874.6, 1.11164],
  [1500, 278.4, 84556, 1.05807],
  [2000, 275.15, 79495.2, 1.00649],
  [2500, 271.9, 74682.5, 0.95686],
  [3000, 268.65, 70108.5, 0.90912],
  [4000, 262.15, 61640.2, 0.81913],
];

const cut = { rounding: 'cut to 1 Pa', tolerance: 1, wider: 'the table cuts its last figure instead of rounding it: 9000 m is 30 800.67 Pa, 11 000 m 22 699.94 Pa' } as const;

/** The three columns of one printed table. */
function columns(
  from: Pick<Passport, 'source' | 'standing' | 'evidence'>,
  rows: readonly Row[],
  read: { readonly height: 'geometric' | 'geopotential'; readonly pressureTo: number; readonly densityTo: number; readonly cut?: boolean },
): readonly Table[] {
  const says = ([heightM]: Row): string => `at ${heightM} m ${read.height}`;
  const at = ([heightM]: Row): ReturnType<typeof standardAir> => standardAir(read.height === 'geometric' ? geopotentialM(heightM) : heightM);
  const of = (quantity: Pick<Passport, 'topic' | 'unit'>, to: number): Passport => ({ ...quantity, ...from, rounding: `to ${to} ${quantity.unit}`, tolerance: to / 2, count: rows.length });
  return [
    table(of(temperature, 0.001), rows, { says, expected: (row) => row[1], ours: (row) => at(row).temperatureK }),
    table({ ...of(pressure, read.pressureTo), ...(read.cut === true ? cut : {}) }, rows, { says, expected: (row) => row[2], ours: (row) => at(row).pressurePa }),
    table(of(density, read.densityTo), rows, { says, expected: (row) => row[3], ours: (row) => at(row).densityKgm3 }),
  ];
}

/** ASHRAE uses the altitude as if it were geopotential. Transcribed in the tests of psychrometrics/psychrolib @3066345. */
const ashrae = table(
  { ...pressure, source: 'ASHRAE Handbook Fundamentals 2017, ch. 1, table 1', standing: 'published', evidence: 'number', rounding: 'to 1 Pa', tolerance: 0.5, count: 3 },
  [[500, 95461], [1000, 89875], [4000, 61640]] as const,
  { says: ([heightM]) => `at ${heightM} m geopotential`, expected: ([, pa]) => pa, ours: ([heightM]) => standardAir(heightM).pressurePa },
);

const pvlib = table(
  {
    ...pressure, source: 'pvlib-python @6382338, test of alt2pres', standing: 'published', evidence: 'number', rounding: 'to 0.01 Pa', tolerance: 0.5, count: 1,
    wider: 'its formula carries the constants of the standard rounded to six figures, which moves the pressure by 0.2 Pa',
  },
  [[1000, 89874.75]] as const,
  { says: ([heightM]) => `at ${heightM} m geopotential`, expected: ([, pa]) => pa, ours: ([heightM]) => standardAir(heightM).pressurePa },
);

export const standardAtmosphere: readonly Table[] = [
  ...columns(iso, isoRows, { height: 'geometric', pressureTo: 0.1, densityTo: 0.00001 }),
  ...columns(us76, us76Rows, { height: 'geometric', pressureTo: 1, densityTo: 0.0001, cut: true }),
  ...columns(remembered, rememberedRows, { height: 'geometric', pressureTo: 1, densityTo: 0.0001 }),
  ...columns(defined, definedRows, { height: 'geopotential', pressureTo: 0.1, densityTo: 0.00001 }),
  ashrae,
  pvlib,
];
