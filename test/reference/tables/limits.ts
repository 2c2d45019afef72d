/** Published operating limits that the shipped sheets take over: rules of an association, not nature. */
import sheets from '../../../config/sheets.json' with { type: 'json' };
import { MPS_PER_MPH } from '../../../lib/units.ts';
import { table, type Table } from '../../accuracy/table.ts';

function limit(sheet: string, name: string): number {
  const limits: Readonly<Record<string, number>> | undefined = sheets.find(({ id }) => id === sheet)?.limits;
  return limits?.[name] ?? NaN;
}

// USHPA SOP 12-02, recommended operating limitations: novice 12 mph base, 15 mph gusts, within 25° of straight up the
// slope, tow within 25° of the line above 3 mph, slope steeper than 4:1; intermediate 15 and 18 mph. Read second-hand.
const ushpa = { source: 'USHPA SOP 12-02, operating limitations', standing: 'published', evidence: 'number' } as const;

const windRows = [
  ['descent-new', 'maxMeanMps', 12], ['descent-new', 'maxGustMps', 15],
  ['descent-experienced', 'maxMeanMps', 15], ['descent-experienced', 'maxGustMps', 18],
  ['thermal-flight', 'maxMeanMps', 15], ['thermal-flight', 'maxGustMps', 18],
  ...sheets.map(({ id }) => [id, 'lightWindMps', 3] as const),
] as const;
const angleRows = [
  ...['first-hops', 'descent-new', 'solo-tow', 'tandem-tow'].map((id) => [id, 'maxOffAxisDeg', 25] as const),
  ['descent-new', 'minSlopeDeg', 14.036],
] as const;

const column = {
  says: ([sheet, name, value]: readonly [string, string, number]): string => `${name} of ${sheet} (${value})`,
  ours: ([sheet, name]: readonly [string, string, number]): number => limit(sheet, name),
};

export const limits: readonly Table[] = [
  table<readonly [string, string, number]>(
    { topic: 'Published wind limits in the sheets', unit: 'm/s', ...ushpa, rounding: 'whole mph, the sheets to 0.01 m/s', tolerance: 0.005, count: 14 },
    windRows,
    { ...column, expected: ([, , mph]) => mph * MPS_PER_MPH },
  ),
  table<readonly [string, string, number]>(
    { topic: 'Published angles in the sheets', unit: '°', ...ushpa, rounding: 'whole degrees; 4:1 is 14.036°, the sheets to 0.01°', tolerance: 0.005, count: 5 },
    angleRows,
    { ...column, expected: ([, , deg]) => deg },
  ),
];
