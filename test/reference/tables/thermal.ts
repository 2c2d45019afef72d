/** Strength of thermals, and the hour the sun reaches a slope. */
import { convectiveVelocityMps } from '../../../lib/air/convection.ts';
import { incidenceDeg } from '../../../lib/sky/sun.ts';
import { ZERO_CELSIUS_K } from '../../../lib/units.ts';
import { table, type Table } from '../../accuracy/table.ts';

// Worked out with g 9.81, 300 K, 1.2 kg/m3 and cp 1005; heat flux in W/m2, depth of the mixed layer in m.
const deardorff = table(
  {
    topic: 'Convective velocity', unit: 'm/s', source: 'Deardorff (1970) J. Atmos. Sci. 27, scale velocity', standing: 'memory', evidence: 'formula', rounding: 'to 0.0001 m/s', tolerance: 0.0005, count: 5,
    wider: 'worked out with g 9.81 against 9.80665: 0.01 % of the velocity',
  },
  [[200, 1500, 2.0111], [50, 500, 0.8784], [100, 1000, 1.3944], [300, 2000, 2.5339], [400, 3000, 3.1925]] as const,
  {
    says: ([heatFluxWm2, mixedLayerM]) => `${heatFluxWm2} W/m² into a layer of ${mixedLayerM} m`,
    expected: ([, , mps]) => mps,
    ours: ([heatFluxWm2, mixedLayerM]) => convectiveVelocityMps({ temperatureC: 300 - ZERO_CELSIUS_K, densityKgm3: 1.2, mixedLayerM, heatFluxWm2 }),
  },
);

const slopeSun = table(
  { topic: 'Sun on a slope, angle from square on', unit: '°', source: 'pvlib-python @6382338, tests of irradiance', standing: 'published', evidence: 'number', rounding: 'to 0.0000001°', tolerance: 0.00000005, count: 1 },
  [[{ altitudeDeg: 60, azimuthDeg: 60 }, { facingDeg: 0, slopeDeg: 90 }, 75.5224878]] as const,
  { says: () => 'a north wall, sun 60° high in 060°', expected: ([, , deg]) => deg, ours: ([sun, face]) => incidenceDeg(sun, face) ?? NaN },
);

export const thermal: readonly Table[] = [deardorff, slopeSun];
