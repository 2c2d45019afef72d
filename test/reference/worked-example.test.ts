// The worked example of the flight model's page, section 9, to its digits. It is a check against the contract, worked
// out once by hand: it proves that code and page agree, nothing about nature.
import { describe, expect, test } from 'vitest';
import classes from '../../config/wing-classes.json' with { type: 'json' };
import { polarFrom, sinkMps, STALL_OVER_TRIM, TOP_OVER_TRIM, type Polar } from '../../lib/wing/polar.ts';
import { groundSpeedMps } from '../../lib/wing/ground-speed.ts';
import { speedFactor } from '../../lib/wing/scaling.ts';
import { speedToFlyMps } from '../../lib/wing/speed-to-fly.ts';
import { flyTow } from '../../lib/wing/tow.ts';
import { MPS_PER_KMH } from '../../lib/units.ts';

const { trimKmh, glideAtTrim, minSinkMps } = classes['EN B'];
const trimMps = trimKmh * MPS_PER_KMH;

function polar(): Polar {
  const made = polarFrom({ trimMps, glideAtTrim, minSinkMps, stallMps: STALL_OVER_TRIM * trimMps, topMps: TOP_OVER_TRIM * trimMps });
  if (!made.ok) throw new Error(made.error);
  return made.value;
}

/** The number at as many decimals as the page prints. */
function printed(value: number, decimals: number): number {
  return Number(value.toFixed(decimals));
}

describe('a wing of class EN B at its reference mass in air of 1.225 kg/m3', () => {
  const wing = polar();

  test('flies as it is stated', () => {
    expect(speedFactor({ densityKgm3: 1.225, allUpMassKg: 95, referenceMassKg: 95 })).toBe(1);
  });

  test.each([
    ['trims at', wing.trimMps, 4, 10.5556],
    ['sinks least at', wing.minSinkSpeedMps, 4, 9.2444],
    ['has a curvature of', wing.curvature, 6, 0.042373],
    ['sinks at trim by', sinkMps(wing, wing.trimMps), 5, 1.17284],
    ['glides over the ground at trim, into 5 m/s,', (groundSpeedMps(wing.trimMps, { headMps: 5, crossMps: 0 }) ?? NaN) / sinkMps(wing, wing.trimMps), 4, 4.7368],
    ['flies best into 5 m/s at', speedToFlyMps(wing, { headMps: 5, sinkMps: 0 }), 4, 11.6314],
  ])('%s %d', (_what, ours, decimals, page) => {
    expect(printed(ours, decimals)).toBe(page);
  });
});

describe('a tow on 800 m of line, tension 0.8, glide 8, trim 10.5 m/s, release at 70°', () => {
  test.each([[0, 269.1], [2, 305.8], [4, 354.7], [6, 423.7]])('into %d m/s of headwind ends at %d m', (headMps, page) => {
    const tow = flyTow({ trimMps: 10.5, glideAtTrim: 8, tensionRatio: 0.8, lineLengthM: 800, releaseAngleDeg: 70, headwindMps: () => headMps });
    expect(printed(tow.releaseM, 1)).toBe(page);
    expect(tow.why).toBe('release angle');
  });
});
