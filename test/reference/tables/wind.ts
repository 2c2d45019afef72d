/** Wind as a vector, its parts on an axis, calm, and the units it comes in. */
import { TYPICAL_GUST_FACTOR } from '../../../lib/air/gust.ts';
import { speedAt, windAt } from '../../../lib/air/profile.ts';
import { CALM_BELOW_MPS, components, componentsOfVector, fromDegOf, vectorOf } from '../../../lib/air/wind.ts';
import { M_PER_FT, MPS_PER_KMH, MPS_PER_KT, MPS_PER_MPH } from '../../../lib/units.ts';
import { table, type Table } from '../../accuracy/table.ts';

const metpy = { source: 'Unidata MetPy @0b43f7f, tests of wind components', standing: 'published', evidence: 'number' } as const;
const trigonometry = { source: 'trigonometry', standing: 'memory', evidence: 'formula' } as const;
const speed = { topic: 'Wind components', unit: 'm/s' } as const;
const direction = { topic: 'Wind direction', unit: '°', compared: 'around the circle' } as const;

const vector = vectorOf(8, 150);
const vectors = table(
  { ...speed, ...metpy, rounding: 'to 0.0001 m/s', tolerance: 0.00005, count: 2 },
  [['toward the east', -4, vector.uMps], ['toward the north', 6.9282, vector.vMps]] as const,
  { says: ([part]) => `of 8 m/s from 150°, ${part}`, expected: ([, mps]) => mps, ours: ([, , mps]) => mps },
);

// The handbook's crosswind chart says the same: 0.50, 0.71, 0.87 of the wind at 30, 45, 60° off the axis.
const [head, cross] = [components({ speedMps: 20, fromDeg: 300 }, 270), componentsOfVector(vectorOf(20, 300).uMps, vectorOf(20, 300).vMps, 270)];
const parts = table(
  { ...speed, ...trigonometry, rounding: 'to 0.0001 m/s', tolerance: 0.00005, count: 4 },
  [['head', 17.3205, head.headMps], ['cross, from the right,', 10, head.crossMps], ['head, by its vector,', 17.3205, cross.headMps], ['cross, by its vector,', 10, cross.crossMps]] as const,
  { says: ([part]) => `${part} of 20 m/s from 300° on an axis of 270°`, expected: ([, mps]) => mps, ours: ([, , mps]) => mps },
);

/** A layer from 5 m/s out of 350° to 5 m/s out of 10°: halfway up it blows the mean of the two vectors. */
const low = vectorOf(5, 350);
const high = vectorOf(5, 10);
const layer = { altitudeM: [0, 100], uMps: [low.uMps, high.uMps], vMps: [low.vMps, high.vMps] };
const halfway = table(
  { ...speed, ...trigonometry, source: 'vector mean as in WMO-No. 8', rounding: 'to 0.001 m/s', tolerance: 0.0005, count: 1 },
  [[4.924]] as const,
  { says: () => 'halfway between 5 m/s from 350° and from 10°', expected: ([mps]) => mps, ours: () => speedAt(layer, 50) },
);

const directions = table(
  { ...direction, ...metpy, rounding: 'to 0.001°', tolerance: 0.0005, count: 2 },
  [[3, 4, 216.87], [0, -5, 360]] as const,
  { says: ([u, v]) => `of ${u} m/s eastward and ${v} m/s northward`, expected: ([, , deg]) => deg, ours: ([u, v]) => fromDegOf(u, v) ?? NaN },
);
const midway = windAt(layer, 50);
const halfwayDirection = table(
  { ...direction, ...trigonometry, source: 'vector mean as in WMO-No. 8', rounding: 'exact', tolerance: 0.000001, count: 1 },
  [[0]] as const,
  { says: () => 'halfway between 350° and 10°', expected: ([deg]) => deg, ours: () => fromDegOf(midway.uMps, midway.vMps) ?? NaN },
);

const calm = table(
  { topic: 'Wind that counts as calm', unit: 'm/s', source: 'WMO-No. 306, Manual on Codes, Beaufort table', standing: 'published', evidence: 'number', rounding: 'to 0.1 m/s, a definition', tolerance: 0, count: 1 },
  [[0.3]] as const,
  { says: () => 'below the lower bound of force 1', expected: ([mps]) => mps, ours: () => CALM_BELOW_MPS },
);

// Definitions: 1 mile 1609.344 m, 1 nautical mile 1852 m, 1 ft 0.3048 m; to six figures.
const units = table(
  { topic: 'Units of speed and length', unit: 'm/s or m', source: 'definitions of mile, nautical mile and foot', standing: 'memory', evidence: 'formula', rounding: 'to six figures', tolerance: 0.0000005, count: 4 },
  [['a knot', 0.514444, MPS_PER_KT], ['a mile an hour', 0.44704, MPS_PER_MPH], ['a kilometre an hour', 0.277778, MPS_PER_KMH], ['a foot', 0.3048, M_PER_FT]] as const,
  { says: ([unit]) => `${unit} in SI`, expected: ([, si]) => si, ours: ([, , si]) => si },
);

const gustTopic = { topic: 'Typical gust factor, 3 s over 10 min', unit: '', evidence: 'number', rounding: 'to 0.01', tolerance: 0.005 } as const;
const gustFactors = table(
  { ...gustTopic, source: 'WMO/TD-No. 1555 (2010), table 1.1', standing: 'published', count: 3 },
  [['off the land', 1.52, TYPICAL_GUST_FACTOR.offLand], ['off the sea', 1.38, TYPICAL_GUST_FACTOR.offSea], ['at sea', 1.23, TYPICAL_GUST_FACTOR.atSea]] as const,
  { says: ([exposure]) => exposure, expected: ([, factor]) => factor, ours: ([, , factor]) => factor },
);
const gustFactorInland = table(
  { ...gustTopic, source: 'WMO/TD-No. 1555 (2010), table 1.1', standing: 'memory', count: 1 },
  [[1.66]] as const,
  { says: () => 'inland', expected: ([factor]) => factor, ours: () => TYPICAL_GUST_FACTOR.inLand },
);

export const wind: readonly Table[] = [vectors, parts, halfway, directions, halfwayDirection, calm, units, gustFactors, gustFactorInland];
