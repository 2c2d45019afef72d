/** Pressure altitude, density altitude, and pressure carried down from a known height. */
import { airAt } from '../../../lib/air/column.ts';
import { moistDensityKgm3 } from '../../../lib/air/moist-air.ts';
import { densityAltitudeM, geometricM, pressureAltitudeM, standardAir } from '../../../lib/air/standard-atmosphere.ts';
import { M_PER_FT, ZERO_CELSIUS_K } from '../../../lib/units.ts';
import { table, type Table } from '../../accuracy/table.ts';

/** No vapour worth the name, for sums about dry air. */
const BONE_DRY_C = -90;

const pressureTopic = { topic: 'Pressure altitude', unit: 'm' } as const;
const densityTopic = { topic: 'Density altitude', unit: 'm' } as const;
const carriedTopic = { topic: 'Pressure carried down to another height', unit: 'Pa' } as const;

// ISO 2533 table 1 read backwards: 0.05 Pa is 0.006 m at 2000 m, 0.000005 kg/m3 is 0.06 m.
const iso = { source: 'ISO 2533:1975, table 1, read backwards', standing: 'published', evidence: 'number', count: 3 } as const;
const isoPressure = table(
  { ...pressureTopic, ...iso, rounding: 'pressures to 0.1 Pa, 0.006 m', tolerance: 0.006 },
  [[101325, 0], [89876.3, 1000], [79501.4, 2000]] as const,
  { says: ([pa]) => `of ${pa} Pa, geometric`, expected: ([, heightM]) => heightM, ours: ([pa]) => geometricM(pressureAltitudeM(pa)) },
);
const isoDensity = table(
  { ...densityTopic, ...iso, rounding: 'densities to 0.00001 kg/m³, 0.06 m', tolerance: 0.06 },
  [[1.225, 0], [1.11166, 1000], [1.00655, 2000]] as const,
  { says: ([rho]) => `of ${rho} kg/m³, geometric`, expected: ([, heightM]) => heightM, ours: ([rho]) => geometricM(densityAltitudeM(rho)) },
);

// FAA Pilot's Handbook of Aeronautical Knowledge, chapter on performance, sample problem 1: field at 5883 ft, altimeter
// 30.10 inHg, 70 °F; pressure altitude 5718 ft by the conversion table, density altitude 7700 ft off the chart. Second-hand.
const handbook = { source: "FAA Pilot's Handbook of Aeronautical Knowledge, density altitude chart", standing: 'published', evidence: 'number', count: 1 } as const;
const PA_PER_INHG = 3386.389;
const handbookPressure = table(
  { ...pressureTopic, ...handbook, rounding: 'to 1 ft, 0.3 m', tolerance: 0.5 * M_PER_FT },
  [[5883, 30.1, 5718]] as const,
  {
    says: ([fieldFt, inHg]) => `of a field at ${fieldFt} ft with the altimeter at ${inHg} inHg`,
    expected: ([, , ft]) => ft * M_PER_FT,
    ours: ([fieldFt, inHg]) => fieldFt * M_PER_FT + pressureAltitudeM(inHg * PA_PER_INHG),
  },
);
const handbookDensity = table(
  { ...densityTopic, ...handbook, rounding: 'read off a chart to 100 ft, 30 m', tolerance: 100 * M_PER_FT, wider: 'a chart is read to a whole division' },
  [[5718, 70, 7700]] as const,
  {
    says: ([pressureFt, fahrenheit]) => `at ${pressureFt} ft pressure altitude and ${fahrenheit} °F`,
    expected: ([, , ft]) => ft * M_PER_FT,
    ours: ([pressureFt, fahrenheit]) => densityAltitudeM(
      moistDensityKgm3({ temperatureC: (fahrenheit - 32) / 1.8, dewPointC: BONE_DRY_C, pressureHpa: standardAir(pressureFt * M_PER_FT).pressurePa / 100 }),
    ),
  },
);

/** Pressure `dropM` below the ground of a column of one node. */
function carriedDownPa(air: { readonly temperatureC: number; readonly pressureHpa: number }, dropM: number): number {
  const column = { altitudeM: [dropM], temperatureC: [air.temperatureC], dewPointC: [BONE_DRY_C], pressureHpa: [air.pressureHpa], carriesUp: false };
  return 100 * airAt(column, 0).pressureHpa;
}

const seaLevel = table(
  {
    ...carriedTopic, source: 'psychrometrics/psychrolib @3066345, test of sea level pressure', standing: 'published', evidence: 'number', rounding: 'to 1 Pa', tolerance: 1, count: 1,
    wider: 'the number comes from an on-line calculator with a formula of its own; the test it stands in allows 1 Pa',
  },
  [[101226.5, 105, 17.19, 102484]] as const,
  {
    says: ([pa, heightM, celsius]) => `to the sea from ${heightM} m, ${pa} Pa and ${celsius} °C`,
    expected: ([, , , pa]) => pa,
    ours: ([pa, heightM, temperatureC]) => carriedDownPa({ temperatureC, pressureHpa: pa / 100 }, heightM),
  },
);
const thickness = table(
  {
    ...carriedTopic, source: 'Wallace & Hobbs, Atmospheric Science (2006), eq. 3.29', standing: 'memory', evidence: 'formula', rounding: 'thickness to 0.01 m, 0.06 Pa', tolerance: 0.2, count: 1,
    wider: 'worked out with Rd 287.05 against 287.05287: 9 mm of thickness, 0.1 Pa',
  },
  // 863.52 m thick at 280 K mean: the top of a layer with our lapse below it is colder by half of what the layer warms.
  [[900, 280, 863.52, 1000]] as const,
  {
    says: ([topHpa, meanK, thickM]) => `through ${thickM} m of ${meanK} K below ${topHpa} hPa`,
    expected: ([, , , hpa]) => 100 * hpa,
    ours: ([topHpa, meanK, thickM]) => carriedDownPa({ temperatureC: meanK - ZERO_CELSIUS_K - (0.0065 * thickM) / 2, pressureHpa: topHpa }, thickM),
  },
);

export const altitudes: readonly Table[] = [isoPressure, handbookPressure, isoDensity, handbookDensity, seaLevel, thickness];
