// Wings, winds and columns of air to try laws on: anything that flies and blows.
import fc from 'fast-check';
import type { Column } from '../../../lib/air/column.ts';
import { dewPointC } from '../../../lib/air/moist-air.ts';
import type { Profile } from '../../../lib/air/profile.ts';
import { geopotentialM, standardAir } from '../../../lib/air/standard-atmosphere.ts';
import { vectorOf } from '../../../lib/air/wind.ts';
import { polarFrom, type Polar, type PolarFigures } from '../../../lib/wing/polar.ts';
import { direction, from } from './law.ts';

/** Three figures that a polar fits: the speed of least sink anywhere between stall and trim. */
export const figures: fc.Arbitrary<PolarFigures> = fc
  .record({ trimMps: from(8, 14), glideAtTrim: from(5, 14), leastSinkShare: from(0.66, 0.97), stallShare: from(0.5, 0.65), topShare: from(1, 1.6) })
  .map(({ trimMps, glideAtTrim, leastSinkShare, stallShare, topShare }) => ({
    trimMps, glideAtTrim, minSinkMps: (trimMps * (1 + leastSinkShare)) / (2 * glideAtTrim), stallMps: stallShare * trimMps, topMps: topShare * trimMps,
  }));

export function polarOf(given: PolarFigures): Polar {
  const polar = polarFrom(given);
  if (!polar.ok) throw new Error(polar.error);
  return polar.value;
}

export const polars: fc.Arbitrary<Polar> = figures.map(polarOf);

/** A wind profile of two to eight nodes from the given height up, at least 20 m apart. */
export function profiles(given: { readonly lowestM: number; readonly highestM: number; readonly maxMps: number }): fc.Arbitrary<Profile> {
  const node = fc.record({ gap: from(0.05, 1), speedMps: from(0, given.maxMps), fromDeg: direction });
  return fc.array(node, { minLength: 2, maxLength: 8 }).map((nodes) => {
    const total = nodes.slice(1).reduce((sum, { gap }) => sum + gap, 0);
    let share = 0;
    const altitudeM = nodes.map(({ gap }, i) => {
      share += i === 0 ? 0 : gap / total;
      return given.lowestM + share * (given.highestM - given.lowestM);
    });
    const vectors = nodes.map(({ speedMps, fromDeg }) => vectorOf(speedMps, fromDeg));
    return { altitudeM, uMps: vectors.map(({ uMps }) => uMps), vMps: vectors.map(({ vMps }) => vMps) };
  });
}

/** The same wind at every height of a profile, one more along a track: for laws about one wind that grows. */
export function withHead(profile: Profile, trackDeg: number, headMps: number): Profile {
  const added = vectorOf(headMps, trackDeg);
  return { ...profile, uMps: profile.uMps.map((u) => u + added.uMps), vMps: profile.vMps.map((v) => v + added.vMps) };
}

/** A column over ground at `groundM`: standard pressures, a lapse between a strong inversion and twice the dry adiabat. */
export const columns: fc.Arbitrary<Column> = fc
  .record({
    groundM: from(-400, 2500), temperatureC: from(-30, 38), carriesUp: fc.boolean(),
    layers: fc.array(fc.record({ thickM: from(60, 900), lapseKpm: from(-0.02, 0.02), humidityPct: from(1, 100) }), { minLength: 1, maxLength: 8 }),
    humidityPct: from(5, 100), excessHpa: from(-30, 30),
  })
  .map(({ groundM, temperatureC, layers, humidityPct, excessHpa, carriesUp }) => {
    const heights = [groundM];
    const temperatures = [temperatureC];
    const dewPoints = [dewPointC(temperatureC, humidityPct)];
    for (const layer of carriesUp ? [] : layers) {
      heights.push(heights.at(-1)! + layer.thickM);
      temperatures.push(temperatures.at(-1)! - layer.lapseKpm * layer.thickM);
      dewPoints.push(dewPointC(temperatures.at(-1)!, layer.humidityPct));
    }
    const pressures = heights.map((altitudeM) => standardAir(geopotentialM(altitudeM)).pressurePa / 100 + excessHpa);
    return { altitudeM: heights, temperatureC: temperatures, dewPointC: dewPoints, pressureHpa: pressures, carriesUp };
  });
