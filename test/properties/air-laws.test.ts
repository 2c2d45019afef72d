// Laws of the air: winds and their components, the profile, the column, the surface layer, the hill, the atmosphere.
import fc from 'fast-check';
import { expect } from 'vitest';
import { angleBetweenDeg, inSector, normalDeg, turnDeg } from '../../lib/angles.ts';
import { airAt, densityAt } from '../../lib/air/column.ts';
import { convectiveVelocityMps } from '../../lib/air/convection.ts';
import { consistentGustMps } from '../../lib/air/gust.ts';
import { condensationHeightM, dewPointC, moistDensityKgm3, saturationPressureHpa } from '../../lib/air/moist-air.ts';
import { heightsBetween, speedAt, windAt } from '../../lib/air/profile.ts';
import { densityAltitudeM, geometricM, geopotentialM, pressureAltitudeM, standardAir } from '../../lib/air/standard-atmosphere.ts';
import { logLawFactor } from '../../lib/air/surface-layer.ts';
import { speedUp, speedUpAt } from '../../lib/air/terrain.ts';
import { components, componentsOfVector, fromDegOf, vectorOf } from '../../lib/air/wind.ts';
import { quantile } from '../../lib/numeric/quantile.ts';
import type { Hill } from '../../lib/site.ts';
import { columns, profiles } from './support/arbitrary.ts';
import { direction, from, law, tellSeed } from './support/law.ts';

tellSeed();

const speeds = from(0.3, 60);

law('a wind and its mirror image about the axis have the same head and opposite cross parts', [speeds, direction, direction], (speedMps, fromDeg, axisDeg) => {
  const own = components({ speedMps, fromDeg }, axisDeg);
  const mirrored = components({ speedMps, fromDeg: 2 * axisDeg - fromDeg }, axisDeg);
  expect(mirrored.headMps).toBeCloseTo(own.headMps, 9);
  expect(mirrored.crossMps).toBeCloseTo(-own.crossMps, 9);
});

law('head and cross parts turn with wind and axis together, make up the whole wind, and change sides when it comes from the other end', [speeds, direction, direction, direction], (speedMps, fromDeg, axisDeg, turn) => {
  const own = components({ speedMps, fromDeg }, axisDeg);
  const turned = components({ speedMps, fromDeg: fromDeg + turn }, axisDeg + turn);
  const opposite = components({ speedMps, fromDeg: fromDeg + 180 }, axisDeg);
  expect(turned.headMps).toBeCloseTo(own.headMps, 8);
  expect(turned.crossMps).toBeCloseTo(own.crossMps, 8);
  expect(Math.hypot(own.headMps, own.crossMps)).toBeCloseTo(speedMps, 8);
  expect(opposite.headMps).toBeCloseTo(-own.headMps, 8);
});

law('a wind from the right is positive, straight on is all head', [speeds, direction, from(1, 179)], (speedMps, axisDeg, right) => {
  expect(components({ speedMps, fromDeg: axisDeg + right }, axisDeg).crossMps).toBeGreaterThan(0);
  expect(components({ speedMps, fromDeg: axisDeg }, axisDeg).headMps).toBeCloseTo(speedMps, 9);
});

law('a wind survives being written as a vector', [speeds, direction, direction], (speedMps, fromDeg, axisDeg) => {
  const { uMps, vMps } = vectorOf(speedMps, fromDeg);
  expect(angleBetweenDeg(fromDegOf(uMps, vMps)!, fromDeg)).toBeLessThan(1e-9);
  const parts = componentsOfVector(uMps, vMps, axisDeg);
  const direct = components({ speedMps, fromDeg }, axisDeg);
  expect(parts.headMps).toBeCloseTo(direct.headMps, 9);
  expect(parts.crossMps).toBeCloseTo(direct.crossMps, 9);
});

law('the short way round is never more than half a circle, and leads there', [from(-720, 720), from(-720, 720)], (aDeg, bDeg) => {
  expect(Math.abs(turnDeg(aDeg, bDeg))).toBeLessThanOrEqual(180);
  expect(angleBetweenDeg(normalDeg(aDeg + turnDeg(aDeg, bDeg)), normalDeg(bDeg))).toBeLessThan(1e-9);
  expect(angleBetweenDeg(aDeg, bDeg)).toBeCloseTo(angleBetweenDeg(bDeg, aDeg), 9);
});

law('a whole degree on the edge of a sector is inside it, however the wind was computed', [fc.integer({ min: 0, max: 359 }), fc.integer({ min: 1, max: 358 }), fc.constantFrom(1, 2.3, 3, 5.7, 12.4)], (fromDeg, width, speedMps) => {
  const toDeg = (fromDeg + width) % 360;
  for (const edge of [fromDeg, toDeg]) {
    const { uMps, vMps } = vectorOf(speedMps, edge);
    expect(inSector(fromDegOf(uMps, vMps)!, { fromDeg, toDeg })).toBe(true);
  }
  expect(inSector(normalDeg(fromDeg - 0.001), { fromDeg, toDeg })).toBe(false);
  expect(inSector(normalDeg(toDeg + 0.001), { fromDeg, toDeg })).toBe(false);
});

const nodes = profiles({ lowestM: 600, highestM: 3200, maxMps: 40 });

law('the wind is continuous across the nodes of a profile and linear between them', [nodes, fc.nat(), from(0, 1)], (profile, which, share) => {
  const { altitudeM, uMps, vMps } = profile;
  const i = which % altitudeM.length;
  const at = windAt(profile, altitudeM[i]!);
  expect(at).toEqual({ uMps: uMps[i], vMps: vMps[i] });
  for (const beside of [-1e-7, 1e-7]) {
    const near = windAt(profile, altitudeM[i]! + beside);
    const outside = altitudeM[i]! + beside < altitudeM[0]! || altitudeM[i]! + beside > altitudeM.at(-1)!;
    if (!outside) expect(Math.hypot(near.uMps - at.uMps, near.vMps - at.vMps)).toBeLessThan(1e-3);
  }
  if (i === 0) return;
  const between = windAt(profile, altitudeM[i - 1]! + share * (altitudeM[i]! - altitudeM[i - 1]!));
  expect(between.uMps).toBeCloseTo(uMps[i - 1]! + share * (uMps[i]! - uMps[i - 1]!), 6);
  expect(between.vMps).toBeCloseTo(vMps[i - 1]! + share * (vMps[i]! - vMps[i - 1]!), 6);
});

law('outside the nodes the wind is unknown: above always, below unless the lowest is asked to hold', [nodes, from(1e-6, 5000)], (profile, beyondM) => {
  const [lowestM, highestM] = [profile.altitudeM[0]!, profile.altitudeM.at(-1)!];
  for (const holdBelow of [false, true]) expect(speedAt(profile, highestM + beyondM, holdBelow)).toBeNaN();
  expect(speedAt(profile, lowestM - beyondM)).toBeNaN();
  expect(windAt(profile, lowestM - beyondM, true)).toEqual({ uMps: profile.uMps[0], vMps: profile.vMps[0] });
  expect(speedAt({ altitudeM: [], uMps: [], vMps: [] }, lowestM, true)).toBeNaN();
});

law('a missing node makes its whole neighbourhood unknown and nothing else', [nodes, fc.nat(), from(600, 3200)], (profile, which, altitudeM) => {
  const hole = which % profile.altitudeM.length;
  const holed = { ...profile, uMps: profile.uMps.map((u, i) => (i === hole ? NaN : u)) };
  const fromM = profile.altitudeM[hole - 1] ?? -Infinity;
  const toM = profile.altitudeM[hole + 1] ?? Infinity;
  const touched = altitudeM > fromM && altitudeM < toM;
  expect(windAt(holed, altitudeM).uMps).toEqual(touched ? NaN : windAt(profile, altitudeM).uMps);
});

law('between nodes the wind is nowhere stronger than at the stronger of them: looking at the nodes is enough', [nodes, from(0, 1), from(0, 1), from(0, 1)], (profile, a, b, c) => {
  const [lowestM, highestM] = [profile.altitudeM[0]!, profile.altitudeM.at(-1)!];
  const height = (share: number) => Math.min(highestM, lowestM + share * (highestM - lowestM));
  const strongest = Math.max(...heightsBetween(profile, [height(a), height(b)]).map((altitudeM) => speedAt(profile, altitudeM)));
  const inside = height(a) + c * (height(b) - height(a));
  expect(speedAt(profile, Math.min(highestM, inside))).toBeLessThanOrEqual(strongest + 1e-9);
});

law('density falls with height all the way through a column, moist or dry', [columns, from(0, 1), from(0, 1)], (column, a, b) => {
  const lowestM = column.altitudeM[0]! - 400;
  const highestM = column.carriesUp ? column.altitudeM[0]! + 150 : column.altitudeM.at(-1)!;
  const height = (share: number) => Math.min(highestM, lowestM + share * (highestM - lowestM));
  const [low, high] = [Math.min(height(a), height(b)), Math.max(height(a), height(b))];
  fc.pre(high - low > 1);
  expect(densityAt(column, high)).toBeLessThan(densityAt(column, low));
  expect(densityAt(column, highestM + 1)).toBeNaN();
});

law('temperature and pressure are continuous across the nodes of a column', [columns, fc.nat()], (column, which) => {
  const i = which % column.altitudeM.length;
  const at = column.altitudeM[i]!;
  const here = airAt(column, at);
  expect(here.pressureHpa).toBeCloseTo(column.pressureHpa[i]!, 9);
  const below = airAt(column, at - 1e-6);
  expect(below.temperatureC).toBeCloseTo(here.temperatureC, 4);
  expect(below.pressureHpa).toBeCloseTo(here.pressureHpa, 4);
});

law('a column that misses a node knows nothing beside it', [columns, fc.nat(), from(0.001, 0.999)], (column, which, share) => {
  fc.pre(column.altitudeM.length > 1);
  const i = 1 + (which % (column.altitudeM.length - 1));
  const holed = { ...column, temperatureC: column.temperatureC.map((t, k) => (k === i ? NaN : t)) };
  expect(densityAt(holed, column.altitudeM[i - 1]! + share * (column.altitudeM[i]! - column.altitudeM[i - 1]!))).toBeNaN();
});

const airs = fc.record({ temperatureC: from(-35, 45), humidityPct: from(1, 100), pressureHpa: from(500, 1060) });

law('moist air is lighter than dry, and warm air lighter than cold at the same dew point', [airs, from(0.1, 10)], ({ temperatureC, humidityPct, pressureHpa }, warmerK) => {
  const dew = dewPointC(temperatureC, humidityPct);
  const density = moistDensityKgm3({ temperatureC, dewPointC: dew, pressureHpa });
  expect(density).toBeLessThan(moistDensityKgm3({ temperatureC, dewPointC: -80, pressureHpa }));
  expect(moistDensityKgm3({ temperatureC: temperatureC + warmerK, dewPointC: dew, pressureHpa })).toBeLessThan(density);
});

law('dew point and humidity tell the same vapour, and saturation is where they meet', [airs], ({ temperatureC, humidityPct }) => {
  const dew = dewPointC(temperatureC, humidityPct);
  expect((100 * saturationPressureHpa(dew)) / saturationPressureHpa(temperatureC)).toBeCloseTo(humidityPct, 6);
  expect(dewPointC(temperatureC, 100)).toBeCloseTo(temperatureC, 9);
  expect(dew).toBeLessThanOrEqual(temperatureC + 1e-9);
});

law('a wider spread of temperature and dew point never means a lower cloud base, and none means cloud', [from(-20, 40), from(0, 30), from(0, 10)], (temperatureC, spreadK, more) => {
  expect(condensationHeightM(temperatureC, temperatureC - spreadK - more)).toBeGreaterThanOrEqual(condensationHeightM(temperatureC, temperatureC - spreadK) - 1e-9);
  expect(condensationHeightM(temperatureC, temperatureC)).toBe(0);
  expect(condensationHeightM(temperatureC, temperatureC + more)).toBe(0);
});

law('wind by the log law grows with height, is itself at its own height and nil in the roughness', [from(0.0002, 1), from(0.1, 1), from(0.1, 1)], (roughnessM, a, b) => {
  const factor = (toM: number) => logLawFactor({ fromM: 10, toM, roughnessM });
  const [low, high] = [Math.min(a, b), Math.max(a, b)].map((share) => roughnessM + share * (100 - roughnessM)) as [number, number];
  expect(factor(high)).toBeGreaterThanOrEqual(factor(low));
  expect(factor(10)).toBeCloseTo(1, 12);
  expect(factor(roughnessM)).toBe(0);
  expect(factor(roughnessM / 2)).toBe(0);
});

const hills: fc.Arbitrary<Hill> = fc.record({ form: fc.constantFrom('ridge', 'escarpment', 'cone', 'flat'), heightM: from(0, 3000), halfLengthM: from(10, 10_000) });

law('a hill never slows the wind that blows onto it, gives less the higher above the crest, and at most half its steepness', [hills, from(0, 400), from(0, 400), from(-3000, 3000)], (hill, a, b, aboveM) => {
  const [low, high] = [Math.min(a, b), Math.max(a, b)];
  expect(speedUpAt(hill, low)).toBeGreaterThanOrEqual(speedUpAt(hill, high));
  expect(speedUpAt(hill, high)).toBeGreaterThanOrEqual(0);
  expect(speedUp(hill, aboveM)).toBeGreaterThanOrEqual(0);
  expect(speedUp(hill, aboveM)).toBeLessThanOrEqual(1);
  if (hill.form === 'flat') expect(speedUp(hill, aboveM)).toBe(0);
});

law('the more of the hill the model does not carry, the more is added, and no more than the whole of it', [hills, from(-3000, 3000), from(0, 500)], (hill, aboveM, more) => {
  fc.pre(hill.halfLengthM >= 2 * hill.heightM);
  expect(speedUp(hill, aboveM + more)).toBeGreaterThanOrEqual(speedUp(hill, aboveM) - 1e-12);
  expect(speedUp(hill, aboveM)).toBeLessThanOrEqual(speedUpAt(hill, 10) + 1e-12);
});

law('a gust is never below its mean: a little below is raised, far below is not believed', [from(0, 75), from(-5, 40)], (meanMps, aboveMps) => {
  fc.pre(meanMps + aboveMps >= 0 && Math.abs(aboveMps + 1) > 1e-9);
  const gustMps = consistentGustMps(meanMps, meanMps + aboveMps);
  if (aboveMps < -1) expect(gustMps).toBeNaN();
  else expect(gustMps).toBe(Math.max(meanMps, meanMps + aboveMps));
  expect(consistentGustMps(meanMps, NaN)).toBeNaN();
  expect(consistentGustMps(NaN, meanMps)).toBeNaN();
});

law('thermals grow with heat and with the depth they mix, and there are none without heat', [from(-10, 38), from(0.7, 1.35), from(50, 4000), from(1, 700), from(1, 2)], (temperatureC, densityKgm3, mixedLayerM, heatFluxWm2, more) => {
  const strength = (heat: number, depth: number) => convectiveVelocityMps({ temperatureC, densityKgm3, mixedLayerM: depth, heatFluxWm2: heat });
  expect(strength(heatFluxWm2 * more, mixedLayerM)).toBeGreaterThanOrEqual(strength(heatFluxWm2, mixedLayerM));
  expect(strength(heatFluxWm2, mixedLayerM * more)).toBeGreaterThanOrEqual(strength(heatFluxWm2, mixedLayerM));
  expect(strength(8 * heatFluxWm2, mixedLayerM)).toBeCloseTo(2 * strength(heatFluxWm2, mixedLayerM), 9);
  expect(strength(-heatFluxWm2, NaN)).toBe(0);
  expect(strength(heatFluxWm2, NaN)).toBeNaN();
  expect(strength(NaN, mixedLayerM)).toBeNaN();
});

law('heights, pressures and densities of the standard atmosphere lead there and back', [from(-400, 9000)], (heightM) => {
  const { pressurePa, densityKgm3 } = standardAir(heightM);
  expect(pressureAltitudeM(pressurePa)).toBeCloseTo(heightM, 6);
  expect(densityAltitudeM(densityKgm3)).toBeCloseTo(heightM, 6);
  expect(geometricM(geopotentialM(heightM))).toBeCloseTo(heightM, 6);
  expect(geopotentialM(heightM)).toBeLessThanOrEqual(heightM + 1e-9);
});

law('a quantile lies among the sample, grows with its probability and moves with the whole sample', [fc.array(from(-50, 50), { minLength: 1, maxLength: 60 }), from(0, 1), from(0, 1), from(-20, 20)], (sample, a, b, shift) => {
  const [low, high] = [Math.min(a, b), Math.max(a, b)];
  expect(quantile(sample, high)).toBeGreaterThanOrEqual(quantile(sample, low) - 1e-9);
  expect(quantile(sample, low)).toBeGreaterThanOrEqual(Math.min(...sample) - 1e-9);
  expect(quantile(sample, high)).toBeLessThanOrEqual(Math.max(...sample) + 1e-9);
  expect(quantile(sample.map((value) => value + shift), low)).toBeCloseTo(quantile(sample, low) + shift, 8);
});
