/** Wind chill against the two services' printed charts. */
import { windChillC } from '../../../lib/air/wind-chill.ts';
import { MPS_PER_KMH, MPS_PER_MPH } from '../../../lib/units.ts';
import { table, type Table } from '../../accuracy/table.ts';

// Environment Canada, Wind Chill Calculation Chart (Meteorological Service of Canada, wind chill programme, as on the
// web in February 2006): air temperature across, km/h at 10 m down, whole degrees. First of its two halves.
const airC = [5, 0, -5, -10, -15, -20] as const;
const chart: readonly (readonly number[])[] = [
  [5, 4, -2, -7, -13, -19, -24],
  [10, 3, -3, -9, -15, -21, -27],
  [15, 2, -4, -11, -17, -23, -29],
  [20, 1, -5, -12, -18, -24, -30],
  [25, 1, -6, -12, -19, -25, -32],
  [30, 0, -6, -13, -20, -26, -33],
  [35, 0, -7, -14, -20, -27, -33],
  [40, -1, -7, -14, -21, -27, -34],
  [45, -1, -8, -15, -21, -28, -35],
  [50, -1, -8, -15, -22, -29, -35],
  [55, -2, -8, -15, -22, -29, -36],
  [60, -2, -9, -16, -23, -30, -36],
  [65, -2, -9, -16, -23, -30, -37],
  [70, -2, -9, -16, -23, -30, -37],
  [75, -3, -10, -17, -24, -31, -38],
  [80, -3, -10, -17, -24, -31, -38],
];
const cells = chart.flatMap(([kmh = NaN, ...chills]) => airC.map((celsius, i) => ({ celsius, kmh, chill: chills[i] ?? NaN })));

const topic = { topic: 'Wind chill', unit: '°C' } as const;
const canada = table(
  { ...topic, source: 'Environment Canada, Wind Chill Calculation Chart', standing: 'published', evidence: 'number', rounding: 'to 1 °C', tolerance: 0.5, count: 96 },
  cells,
  { says: ({ celsius, kmh }) => `${celsius} °C in ${kmh} km/h`, expected: ({ chill }) => chill, ours: ({ celsius, kmh }) => windChillC(celsius, kmh * MPS_PER_KMH) },
);

function celsiusOf(fahrenheit: number): number {
  return (fahrenheit - 32) / 1.8;
}
// The chart of the US National Weather Service, four cells as they stand in MetPy's tests.
const nws = table(
  {
    ...topic, source: 'US National Weather Service chart, by Unidata MetPy tests', standing: 'published', evidence: 'number', rounding: 'to 1 °F', tolerance: 0.34, count: 4,
    wider: 'the formulas in °F and in °C have coefficients rounded each for itself: 0.1 °F apart on top of half a degree Fahrenheit',
  },
  [[40, 5, 36], [-10, 55, -46], [-45, 25, -84], [20, 15, 6]] as const,
  { says: ([fahrenheit, mph]) => `${fahrenheit} °F in ${mph} mph`, expected: ([, , chill]) => celsiusOf(chill), ours: ([fahrenheit, mph]) => windChillC(celsiusOf(fahrenheit), mph * MPS_PER_MPH) },
);

export const windChill: readonly Table[] = [canada, nws];
