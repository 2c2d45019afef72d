// The air at rest: the standard atmosphere, altitudes by pressure and density, vapour, condensation.
import { describe, expect, test } from 'vitest';
import { airAt } from '../../lib/air/column.ts';
import { condensationHeightM, dewPointC, moistDensityKgm3 } from '../../lib/air/moist-air.ts';
import { densityAltitudeM, geometricM, geopotentialM, pressureAltitudeM, standardAir } from '../../lib/air/standard-atmosphere.ts';
import { holds } from './holds.ts';
import { altitudes } from './tables/altitudes.ts';
import { moistAir } from './tables/moist-air.ts';
import { standardAtmosphere } from './tables/standard-atmosphere.ts';

holds(standardAtmosphere);
holds(altitudes);
holds(moistAir);

describe('the standard atmosphere', () => {
  // The two ISO tables at 1000 m, 89 876.3 and 89 874.6 Pa: feeding one the other's height is off by more than either's rounding.
  test('tells geometric from geopotential heights', () => {
    expect(standardAir(geopotentialM(1000)).pressurePa - standardAir(1000).pressurePa).toBeCloseTo(1.7, 1);
  });

  // Identities.
  test.each([-400, 0, 250, 1000, 2500, 4500, 9000])('comes back to %d m by pressure, by density and by radius of the earth', (heightM) => {
    const { pressurePa, densityKgm3 } = standardAir(heightM);
    expect(pressureAltitudeM(pressurePa)).toBeCloseTo(heightM, 6);
    expect(densityAltitudeM(densityKgm3)).toBeCloseTo(heightM, 6);
    expect(geopotentialM(geometricM(heightM))).toBeCloseTo(heightM, 6);
  });
});

describe('moist air', () => {
  const air = { temperatureC: 30, pressureHpa: 1000 };

  test('is lighter than dry air of the same temperature and pressure', () => {
    expect(moistDensityKgm3({ ...air, dewPointC: 25 })).toBeLessThan(moistDensityKgm3({ ...air, dewPointC: -40 }));
  });

  test('has its dew point at its temperature when it is saturated, and its cloud base at its feet', () => {
    expect(dewPointC(12, 100)).toBeCloseTo(12, 9);
    expect(condensationHeightM(12, 12)).toBe(0);
    expect(condensationHeightM(12, 12.4)).toBe(0);
  });
});

describe('a column of standard air', () => {
  // ISO 2533 table 1 at 0, 1000 and 2000 m as nodes. Pressure log-linear between them, the model's own rule, bends less
  // than the real one: by 0.33 hPa at most here, which is 3 m of height.
  const column = { altitudeM: [0, 1000, 2000], temperatureC: [15, 8.501, 2.004], dewPointC: [-90, -90, -90], pressureHpa: [1013.25, 898.763, 795.014], carriesUp: false };

  test.each([[500, 954.61], [1500, 845.6]])('has at %d m the pressure of the U.S. Standard Atmosphere 1976 within 0.35 hPa', (altitudeM, pressureHpa) => {
    expect(Math.abs(airAt(column, altitudeM).pressureHpa - pressureHpa)).toBeLessThan(0.35);
  });

  test('is unknown above its top', () => {
    expect(airAt(column, 2001).pressureHpa).toBeNaN();
  });
});
