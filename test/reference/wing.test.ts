// The wing: polar, speed to fly, glide, load and density; the tow; the thermal.
import { describe, expect, test } from 'vitest';
import classes from '../../config/wing-classes.json' with { type: 'json' };
import { convectiveVelocityMps } from '../../lib/air/convection.ts';
import { polarFrom, sinkMps, STALL_OVER_TRIM, TOP_OVER_TRIM, type Polar } from '../../lib/wing/polar.ts';
import { speedToFlyMps } from '../../lib/wing/speed-to-fly.ts';
import { flyTow } from '../../lib/wing/tow.ts';
import { MPS_PER_KMH } from '../../lib/units.ts';
import { holds } from './holds.ts';
import { polar } from './tables/polar.ts';
import { thermal } from './tables/thermal.ts';
import { tow } from './tables/tow.ts';

holds(polar);
holds(tow);
holds(thermal);

function polarOf({ trimKmh, glideAtTrim, minSinkMps }: { trimKmh: number; glideAtTrim: number; minSinkMps: number }): Polar {
  const trimMps = trimKmh * MPS_PER_KMH;
  const made = polarFrom({ trimMps, glideAtTrim, minSinkMps, stallMps: STALL_OVER_TRIM * trimMps, topMps: TOP_OVER_TRIM * trimMps });
  if (!made.ok) throw new Error(made.error);
  return made.value;
}

// Common practice, no source: what is said of paragliders in general.
describe.each(Object.entries(classes))('a wing of class %s', (_name, figures) => {
  const wing = polarOf(figures);

  test('glides 6 to 10, give or take one', () => {
    expect(figures.glideAtTrim).toBeGreaterThanOrEqual(5);
    expect(figures.glideAtTrim).toBeLessThanOrEqual(11);
  });

  test('trims at 36 to 37 km/h, give or take four', () => {
    expect(figures.trimKmh).toBeGreaterThanOrEqual(32);
    expect(figures.trimKmh).toBeLessThanOrEqual(41);
  });

  test('glides best in still air at hands-up trim', () => {
    expect(speedToFlyMps(wing, { headMps: 0, sinkMps: 0 })).toBeCloseTo(wing.trimMps, 9);
    expect(wing.trimMps / sinkMps(wing, wing.trimMps)).toBeCloseTo(figures.glideAtTrim, 9);
  });

  test('is flown faster into wind and in sinking air, slower toward least sink in lift', () => {
    const trim = speedToFlyMps(wing, { headMps: 0, sinkMps: 0 });
    expect(speedToFlyMps(wing, { headMps: 2, sinkMps: 0 })).toBeGreaterThan(trim);
    expect(speedToFlyMps(wing, { headMps: 0, sinkMps: 1 })).toBeGreaterThan(trim);
    const inLift = speedToFlyMps(wing, { headMps: 0, sinkMps: -0.8 });
    expect(inLift).toBeLessThan(trim);
    expect(inLift).toBeGreaterThanOrEqual(wing.minSinkSpeedMps);
  });
});

describe('a tow', () => {
  const strip = { trimMps: 10.5, glideAtTrim: 8, tensionRatio: 0.8, releaseAngleDeg: 70 };
  const releaseM = (lineLengthM: number, headMps: number): number => flyTow({ ...strip, lineLengthM, headwindMps: () => headMps }).releaseM;

  // French clubs: released by about 70° of line, 200 to 600 m above the strip. 800 and 1000 m of cable, 0 to 6 m/s.
  test('ends between 200 m and 600 m above the strip, as clubs tell', () => {
    for (const headMps of [0, 2, 4, 6]) {
      for (const lineM of [800, 1000]) expect(releaseM(lineM, headMps) > 200 && releaseM(lineM, headMps) < 600).toBe(true);
    }
  });

  test('in a steady wind gains height in proportion to the line', () => {
    expect(releaseM(1000, 3) / releaseM(500, 3)).toBeCloseTo(2, 3);
  });
});

describe('thermals', () => {
  test('are nil without heat from the ground, whatever the layer', () => {
    const over = (heatFluxWm2: number): number => convectiveVelocityMps({ temperatureC: 20, densityKgm3: 1.2, mixedLayerM: NaN, heatFluxWm2 });
    expect([over(0), over(-40)]).toEqual([0, 0]);
    expect(over(1)).toBeNaN();
  });
});
