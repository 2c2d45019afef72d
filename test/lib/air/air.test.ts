// The air by hand: singular points (calm, north, nothing), both sides of every breakpoint, and numbers anyone can redo.
import { describe, expect, test } from 'vitest';
import { airAt, densityAt, type Column } from '../../../lib/air/column.ts';
import { convectiveVelocityMps, richardsonDepthM } from '../../../lib/air/convection.ts';
import { consistentGustMps, isCalm } from '../../../lib/air/gust.ts';
import { condensationHeightM, dewPointC, moistDensityKgm3 } from '../../../lib/air/moist-air.ts';
import { heightsBetween, topM, windAt } from '../../../lib/air/profile.ts';
import { logLawFactor } from '../../../lib/air/surface-layer.ts';
import { groundReachM, speedUp } from '../../../lib/air/terrain.ts';
import { windChillC } from '../../../lib/air/wind-chill.ts';
import { components, fromDegOf, vectorOf } from '../../../lib/air/wind.ts';

describe('wind', () => {
  test.each([[0, 0, -5], [90, -5, 0], [180, 0, 5], [270, 5, 0], [360, 0, -5]])('five metres a second from %d° blow %d east and %d north', (fromDeg, uMps, vMps) => {
    const vector = vectorOf(5, fromDeg);
    expect(vector.uMps).toBeCloseTo(uMps, 12);
    expect(vector.vMps).toBeCloseTo(vMps, 12);
  });

  test('no wind at all comes from nowhere, a wind from the north from 0', () => {
    expect(fromDegOf(0, 0)).toBeNull();
    expect(fromDegOf(0, -5)).toBe(0);
    expect(fromDegOf(1e-20, -5)).toBeLessThan(360);
  });

  test('on an axis: ahead, from the right, from behind, from the left', () => {
    const on = (fromDeg: number) => components({ speedMps: 4, fromDeg }, 350);
    expect(on(350).headMps).toBeCloseTo(4, 12);
    expect(on(80).crossMps).toBeCloseTo(4, 12);
    expect(on(170).headMps).toBeCloseTo(-4, 12);
    expect(on(260).crossMps).toBeCloseTo(-4, 12);
  });

  test('calm is below 0.3 m/s, what is unknown is not calm', () => {
    expect([0, 0.29, 0.3, 5, NaN].map(isCalm)).toEqual([true, true, false, false, false]);
  });

  test.each([[5, 8, 8], [5, 5, 5], [5, 4.2, 5], [5, 4, 5], [5, 3.9, NaN], [NaN, 4, NaN], [5, NaN, NaN], [0, 0, 0]])('a mean of %d with a gust of %d has the gust %d', (mean, gust, expected) => {
    expect(consistentGustMps(mean, gust)).toEqual(expected);
  });
});

describe('the profile', () => {
  const profile = { altitudeM: [610, 700, 1000], uMps: [0, 3, 6], vMps: [-2, -2, 4] };

  test('half-way between nodes is half-way between their winds', () => {
    expect(windAt(profile, 655)).toEqual({ uMps: 1.5, vMps: -2 });
    expect(windAt(profile, 850)).toEqual({ uMps: 4.5, vMps: 1 });
    expect([610, 700, 1000].map((z) => windAt(profile, z).uMps)).toEqual([0, 3, 6]);
  });

  test('above, below, nowhere', () => {
    expect(windAt(profile, 1000.001).uMps).toBeNaN();
    expect(windAt(profile, 609.999).uMps).toBeNaN();
    expect(windAt(profile, 0, true)).toEqual({ uMps: 0, vMps: -2 });
    expect(windAt(profile, NaN, true).uMps).toBeNaN();
    expect(topM(profile)).toBe(1000);
    expect(topM({ altitudeM: [], uMps: [], vMps: [] })).toBe(-Infinity);
  });

  test('heights to look at: the given ones and every node between', () => {
    expect(heightsBetween(profile, [900, 650])).toEqual([650, 700, 900]);
    expect(heightsBetween(profile, [610, 1000])).toEqual([610, 700, 1000]);
    expect(heightsBetween(profile, [750, 800, 770])).toEqual([750, 770, 800]);
  });
});

describe('the column', () => {
  const column: Column = { altitudeM: [600, 1500, 3000], temperatureC: [20, 14, 2], dewPointC: [10, 5, -10], pressureHpa: [945, 850, 706], carriesUp: false };
  const bare: Column = { altitudeM: [600], temperatureC: [20], dewPointC: [10], pressureHpa: [945], carriesUp: true };

  test('is linear in temperature and dew point, log-linear in pressure', () => {
    expect(airAt(column, 1050)).toMatchObject({ temperatureC: 17, dewPointC: 7.5 });
    expect(airAt(column, 1050).pressureHpa).toBeCloseTo(Math.sqrt(945 * 850), 9);
    expect(airAt(column, 1500)).toEqual({ temperatureC: 14, dewPointC: 5, pressureHpa: 850 });
    expect(airAt(column, 3000)).toEqual({ temperatureC: 2, dewPointC: -10, pressureHpa: 706 });
    expect(airAt(column, 3001).temperatureC).toBeNaN();
  });

  test('below the ground it is 6.5 K/km warmer, as humid, and heavier by its own weight', () => {
    const below = airAt(column, 400);
    expect(below.temperatureC).toBeCloseTo(21.3, 9);
    expect(below.dewPointC).toBe(10);
    // 200 m of air at some 295 K: 945 exp(9.80665 × 200 / (287.05 × 295)), a little less for its vapour.
    expect(below.pressureHpa).toBeCloseTo(945 * Math.exp((9.80665 * 200) / (287.05 * 295)), 0);
  });

  test('without levels it is carried 150 m up and no further', () => {
    const above = airAt(bare, 750);
    expect(above.temperatureC).toBeCloseTo(20 - 0.975, 9);
    expect(above.dewPointC).toBeCloseTo(10 - 0.27, 9);
    expect(above.pressureHpa).toBeLessThan(945);
    expect(airAt(bare, 750.01).temperatureC).toBeNaN();
    expect(airAt({ ...bare, carriesUp: false }, 601).temperatureC).toBeNaN();
    expect(densityAt(bare, NaN)).toBeNaN();
  });
});

describe('moist air', () => {
  test('dry at sea level and 15 °C is the 1.225 of the standard, humid a little less', () => {
    expect(moistDensityKgm3({ temperatureC: 15, dewPointC: -90, pressureHpa: 1013.25 })).toBeCloseTo(1.225, 4);
    expect(moistDensityKgm3({ temperatureC: 15, dewPointC: 15, pressureHpa: 1013.25 })).toBeCloseTo(1.2172, 3);
  });

  test('bone-dry air still has a number', () => {
    expect(dewPointC(20, 0)).toBe(dewPointC(20, 0.01));
    expect(Number.isFinite(dewPointC(20, 0))).toBe(true);
  });

  test('the cloud base is some 125 m a kelvin of spread', () => {
    expect(condensationHeightM(20, 10) / 10).toBeGreaterThan(120);
    expect(condensationHeightM(20, 10) / 10).toBeLessThan(126);
    expect(condensationHeightM(10, 10)).toBe(0);
    expect(condensationHeightM(NaN, 10)).toBeNaN();
  });
});

describe('near the ground', () => {
  test('over cut grass the wind at two metres is 72 percent of that at ten', () => {
    expect(logLawFactor({ fromM: 10, toM: 2, roughnessM: 0.03 })).toBeCloseTo(Math.log(2 / 0.03) / Math.log(10 / 0.03), 12);
    expect(logLawFactor({ fromM: 10, toM: 2, roughnessM: 0.03 })).toBeCloseTo(0.723, 3);
    expect(logLawFactor({ fromM: 10, toM: 0.03, roughnessM: 0.03 })).toBe(0);
  });
});

describe('over a hill', () => {
  const ridge = { form: 'ridge', heightM: 180, halfLengthM: 320 } as const;

  test('a launch level with the model keeps a third of the hill, one above it all the model lacks, none more than the whole', () => {
    // h 60, L 320: 2 × 60/320 × exp(-3 × 10/320).
    expect(speedUp(ridge, 0)).toBeCloseTo(2 * (60 / 320) * Math.exp(-30 / 320), 12);
    expect(speedUp(ridge, -200)).toBe(speedUp(ridge, 0));
    expect(speedUp(ridge, 160)).toBeCloseTo(2 * (160 / 320) * Math.exp(-30 / 320), 12);
    // h 180: L is at least twice that.
    expect(speedUp(ridge, 500)).toBeCloseTo(2 * (180 / 360) * Math.exp(-30 / 360), 12);
  });

  test('flat ground and a hill of nothing add nothing', () => {
    expect(speedUp({ form: 'flat', heightM: 200, halfLengthM: 300 }, 100)).toBe(0);
    expect(speedUp({ ...ridge, heightM: 0 }, 100)).toBe(0);
  });

  test.each([[0, 150], [149, 150], [150, 150], [151, 151], [400, 400], [401, 400], [3000, 400]])('a hill of %d m lets the 10 m wind speak for launches up to %d m over the model', (heightM, reachM) => {
    expect(groundReachM({ ...ridge, heightM })).toBe(reachM);
  });
});

describe('convection', () => {
  test('a kilometre and a half of mixed layer over 200 W/m² makes two metres a second', () => {
    // (9.80665/293.15 × 1500 × 200 / (1.15 × 1005))^(1/3)
    expect(convectiveVelocityMps({ temperatureC: 20, densityKgm3: 1.15, mixedLayerM: 1500, heatFluxWm2: 200 })).toBeCloseTo(Math.cbrt(((9.80665 / 293.15) * 1500 * 200) / (1.15 * 1005)), 12);
    expect(convectiveVelocityMps({ temperatureC: 20, densityKgm3: 1.15, mixedLayerM: 1500, heatFluxWm2: 200 })).toBeCloseTo(2.06, 2);
    expect(convectiveVelocityMps({ temperatureC: NaN, densityKgm3: NaN, mixedLayerM: NaN, heatFluxWm2: 0 })).toBe(0);
  });

  const layered = (lid: number): Column => ({
    altitudeM: [600, 600 + lid, 650 + lid, 4000], temperatureC: [20, 20 - 0.0098 * lid, 23 - 0.0098 * lid, -5], dewPointC: [5, 3, -5, -30],
    pressureHpa: [945, 945 * Math.exp(-lid / 8500), 945 * Math.exp(-(lid + 50) / 8500), 620], carriesUp: false,
  });
  const light = { altitudeM: [610, 4000], uMps: [2, 4], vMps: [0, 0] };

  test.each([800, 1200, 2000])('a layer mixed to a lid at %d m is about that deep', (lid) => {
    const depthM = richardsonDepthM(layered(lid), light);
    expect(Math.abs(depthM - lid)).toBeLessThan(120);
  });

  test('an inversion on the ground is a layer of almost nothing', () => {
    const stable: Column = { altitudeM: [600, 900, 3000], temperatureC: [5, 12, 0], dewPointC: [4, 2, -10], pressureHpa: [945, 911, 706], carriesUp: false };
    expect(richardsonDepthM(stable, light)).toBeLessThan(60);
  });

  test('a missing wind or node on the way, or a column that is never stable, leaves the depth unknown', () => {
    expect(richardsonDepthM(layered(1200), { ...light, uMps: [NaN, 4] })).toBeNaN();
    expect(richardsonDepthM({ ...layered(1200), temperatureC: [20, NaN, 10, -5] }, light)).toBeNaN();
    expect(richardsonDepthM({ altitudeM: [600, 1000], temperatureC: [20, 15], dewPointC: [5, 4], pressureHpa: [945, 902], carriesUp: false }, light)).toBeNaN();
  });
});

test('wind chill holds below ten degrees and from a walking pace: outside it is the temperature', () => {
  // -10 °C at 30 km/h feel like -20.
  expect(windChillC(-10, 30 / 3.6)).toBeCloseTo(-19.5, 0);
  expect(windChillC(10, 10)).toBeLessThan(10);
  expect(windChillC(10.1, 10)).toBe(10.1);
  expect(windChillC(-10, 4.79 / 3.6)).toBe(-10);
  expect(windChillC(-10, 4.81 / 3.6)).not.toBe(-10);
});
