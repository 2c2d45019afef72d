// Laws of the wing: its polar, its speeds in thin air and under load, its way over the ground, the glide and the tow.
import fc from 'fast-check';
import { expect, test } from 'vitest';
import { windAt } from '../../lib/air/profile.ts';
import { componentsOfVector } from '../../lib/air/wind.ts';
import { flyGlide, type Glide } from '../../lib/wing/glide.ts';
import { groundSpeedMps } from '../../lib/wing/ground-speed.ts';
import { fitPolar } from '../../lib/wing/fit.ts';
import { scaledPolar, sinkMps } from '../../lib/wing/polar.ts';
import { speedFactor } from '../../lib/wing/scaling.ts';
import { speedToFlyMps } from '../../lib/wing/speed-to-fly.ts';
import { flyTow, towBalance, type TowPoint } from '../../lib/wing/tow.ts';
import { figures, polarOf, polars, profiles, withHead } from './support/arbitrary.ts';
import { bruteGlide, bruteTow } from './support/brute-force.ts';
import { direction, from, law, tellSeed } from './support/law.ts';

tellSeed();

const masses = from(45, 220);
const densities = from(0.6, 1.45);

law('the glide angle at trim is the same at any mass and in any air, and so is every other glide of the polar', [figures, masses, masses, densities, from(0.7, 1.6)], (given, allUpMassKg, referenceMassKg, densityKgm3, share) => {
  const polar = polarOf(given);
  const k = speedFactor({ densityKgm3, allUpMassKg, referenceMassKg });
  const loaded = scaledPolar(polar, k);
  expect(loaded.trimMps / sinkMps(loaded, loaded.trimMps)).toBeCloseTo(given.glideAtTrim, 7);
  const speedMps = share * polar.trimMps;
  expect((k * speedMps) / sinkMps(loaded, k * speedMps)).toBeCloseTo(speedMps / sinkMps(polar, speedMps), 7);
});

law('a heavier wing is faster, a wing in thicker air slower, and four times the mass doubles the speed', [masses, masses, densities, densities], (mass, other, density, otherDensity) => {
  const at = (allUpMassKg: number, densityKgm3: number) => speedFactor({ densityKgm3, allUpMassKg, referenceMassKg: 90 });
  expect((at(mass, density) - at(other, density)) * (mass - other)).toBeGreaterThanOrEqual(0);
  expect((at(mass, density) - at(mass, otherDensity)) * (otherDensity - density)).toBeGreaterThanOrEqual(0);
  expect(at(4 * mass, density)).toBeCloseTo(2 * at(mass, density), 9);
  expect(speedFactor({ densityKgm3: density, allUpMassKg: mass, referenceMassKg: null })).toBe(at(90, density));
});

law('a polar passes through its three figures: sink at trim, least sink, and the flattest still-air glide exactly at trim', [figures, from(0.5, 1.6)], (given, share) => {
  const polar = polarOf(given);
  expect(sinkMps(polar, given.trimMps)).toBeCloseTo(given.trimMps / given.glideAtTrim, 9);
  expect(sinkMps(polar, polar.minSinkSpeedMps)).toBeCloseTo(given.minSinkMps, 9);
  const speedMps = share * given.trimMps;
  expect(sinkMps(polar, speedMps)).toBeGreaterThanOrEqual(given.minSinkMps - 1e-12);
  expect(speedMps / sinkMps(polar, speedMps)).toBeLessThanOrEqual(given.glideAtTrim + 1e-9);
});

law('a fit gives back the wing that the pairs were read from', [figures, from(0.75, 0.95), from(1.1, 1.5)], (given, slower, faster) => {
  const polar = polarOf(given);
  const pairs = [slower, 1, faster].map((share) => ({ speedMps: share * given.trimMps, sinkMps: sinkMps(polar, share * given.trimMps) }));
  const { stallMps, topMps } = given;
  for (const trimMps of [given.trimMps, null]) {
    const fit = fitPolar({ pairs, trimMps, stallMps, topMps: Math.max(topMps, 1.01 * given.trimMps) });
    if (!fit.ok) throw new Error(fit.error);
    expect(fit.value.figures.glideAtTrim).toBeCloseTo(given.glideAtTrim, 5);
    expect(fit.value.figures.minSinkMps).toBeCloseTo(given.minSinkMps, 5);
    expect(fit.value.rmsMps).toBeLessThan(1e-7);
  }
});

law('no airspeed of the polar glides flatter over the ground than the speed to fly', [polars, from(-8, 12), from(0, 3)], (polar, headMps, airSinkMps) => {
  const slope = (speedMps: number) => (sinkMps(polar, speedMps) + airSinkMps) / (speedMps - headMps);
  const best = speedToFlyMps(polar, { headMps, sinkMps: airSinkMps });
  expect(best).toBeGreaterThanOrEqual(polar.minSinkSpeedMps);
  expect(best).toBeLessThanOrEqual(Math.max(polar.topMps, polar.minSinkSpeedMps));
  if (best - headMps < 0.2) return;
  const others = Array.from({ length: 201 }, (_, i) => polar.minSinkSpeedMps + (i / 200) * (polar.topMps - polar.minSinkSpeedMps)).filter((speedMps) => speedMps - headMps > 0.2);
  expect(Math.min(...others.map(slope))).toBeGreaterThanOrEqual(slope(best) - 1e-9);
});

law('more headwind or more sinking air never asks for less speed', [polars, from(-8, 12), from(0, 3), from(0, 4), from(0, 3)], (polar, headMps, airSinkMps, moreHead, moreSink) => {
  const speed = speedToFlyMps(polar, { headMps, sinkMps: airSinkMps });
  expect(speedToFlyMps(polar, { headMps: headMps + moreHead, sinkMps: airSinkMps })).toBeGreaterThanOrEqual(speed - 1e-9);
  expect(speedToFlyMps(polar, { headMps, sinkMps: airSinkMps + moreSink })).toBeGreaterThanOrEqual(speed - 1e-9);
});

law('ground speed is airspeed less wind in a straight headwind, falls with any crosswind, and ends where the cross part is the airspeed', [from(7, 15), from(-10, 20), from(-20, 20)], (airspeedMps, headMps, crossMps) => {
  expect(groundSpeedMps(airspeedMps, { headMps, crossMps: 0 })).toBeCloseTo(airspeedMps - headMps, 12);
  const crabbing = groundSpeedMps(airspeedMps, { headMps, crossMps });
  expect(crabbing).toBe(groundSpeedMps(airspeedMps, { headMps, crossMps: -crossMps }));
  if (Math.abs(crossMps) >= airspeedMps) expect(crabbing).toBeNull();
  else expect(crabbing).toBeLessThanOrEqual(airspeedMps - headMps);
});

const glides: fc.Arbitrary<Glide> = fc
  .record({
    figures, profile: profiles({ lowestM: 610, highestM: 2600, maxMps: 9 }), airSinkMps: from(0, 1.5), trackDeg: direction,
    distanceM: from(200, 9000), launchM: from(640, 2590),
  })
  .map(({ figures: { trimMps, glideAtTrim }, airSinkMps, ...rest }) => ({ ...rest, airspeedMps: trimMps, totalSinkMps: trimMps / glideAtTrim + airSinkMps }));

/** Height over nothing: where the glide ends, -Infinity where it does not arrive. */
function endM(glide: Glide): number {
  const end = flyGlide(glide);
  return end.kind === 'arrives' ? end.altitudeM : end.kind === 'does not arrive' ? -Infinity : NaN;
}

law('the height on arrival is that of a flight in small steps of time, within a metre, and where that one stands still there is none', [glides], (glide) => {
  const brute = bruteGlide(glide);
  const end = flyGlide(glide);
  expect(end.kind).not.toBe('unknown');
  expect(end.kind).toBe(brute.stood ? 'does not arrive' : 'arrives');
  expect(Math.abs((end.kind === 'unknown' ? NaN : end.altitudeM) - brute.altitudeM)).toBeLessThan(1);
});

law('arrival never rises when the headwind rises, when the air sinks more, or when the way is longer', [glides, from(0, 6), from(0, 2), from(0, 2000)], (glide, moreHead, moreSink, furtherM) => {
  const arrivalM = endM(glide);
  expect(endM({ ...glide, profile: withHead(glide.profile, glide.trackDeg, moreHead) })).toBeLessThanOrEqual(arrivalM + 1e-6);
  expect(endM({ ...glide, totalSinkMps: glide.totalSinkMps + moreSink })).toBeLessThanOrEqual(arrivalM + 1e-6);
  expect(endM({ ...glide, distanceM: glide.distanceM + furtherM })).toBeLessThanOrEqual(arrivalM + 1e-6);
});

law('in still air the glide is the straight line of the wing, and its path rises nowhere', [figures, from(200, 9000), from(700, 3000), direction], ({ trimMps, glideAtTrim }, distanceM, launchM, trackDeg) => {
  const profile = { altitudeM: [600, 3000], uMps: [0, 0], vMps: [0, 0] };
  const heights: number[] = [];
  const end = flyGlide({ profile, airspeedMps: trimMps, totalSinkMps: trimMps / glideAtTrim, trackDeg, distanceM, launchM }, ({ altitudeM }) => heights.push(altitudeM));
  expect(end).toMatchObject({ kind: 'arrives' });
  expect(heights.at(-1)).toBeCloseTo(launchM - distanceM / glideAtTrim, 6);
  expect(heights.every((height, i) => i === 0 || height <= heights[i - 1]!)).toBe(true);
});

law('a launch above the highest known wind gives no arrival height, and neither does a wind missing on the way; one missing elsewhere changes nothing', [glides, from(1, 500), fc.nat()], (glide, aboveM, which) => {
  const { profile } = glide;
  const top = profile.altitudeM.length - 1;
  expect(flyGlide({ ...glide, launchM: profile.altitudeM[top]! + aboveM })).toEqual({ kind: 'unknown' });
  const hole = which % (top + 1);
  const fromM = hole === 0 ? -Infinity : profile.altitudeM[hole - 1]!;
  const toM = profile.altitudeM[Math.min(hole + 1, top)]!;
  const whole = flyGlide(glide);
  const holed = flyGlide({ ...glide, profile: { ...profile, uMps: profile.uMps.map((u, i) => (i === hole ? NaN : u)) } });
  const lowestFlownM = whole.kind === 'unknown' ? NaN : whole.altitudeM;
  fc.pre(Math.abs(lowestFlownM - toM) > 0.01 && Math.abs(glide.launchM - fromM) > 0.01);
  expect(holed).toEqual(glide.launchM < fromM || lowestFlownM > toM ? whole : { kind: 'unknown' });
});

const tows = fc.record({
  trimMps: from(8.5, 12.5), glideAtTrim: from(6, 11), tensionRatio: from(0.4, 1), lineLengthM: from(300, 1500), releaseAngleDeg: from(45, 75),
});

law('without tension the line gives nothing: trim speed down the glide angle of the wing, at any angle of the line', [tows, from(0, 89)], (tow, lineAngleDeg) => {
  const { gammaRad, airspeedMps } = towBalance({ ...tow, tensionRatio: 0 }, lineAngleDeg);
  expect(Math.tan(-gammaRad)).toBeCloseTo(1 / tow.glideAtTrim, 12);
  expect(airspeedMps).toBeCloseTo(tow.trimMps, 12);
  expect(flyTow({ ...tow, tensionRatio: 0, headwindMps: () => 0 })).toMatchObject({ releaseM: 0, why: 'no climb' });
});

law('a tow is higher in more headwind and on a longer line, while the angle of the line ends it', [tows, from(0, 3.5), from(0, 1), from(0, 500)], (tow, headMps, moreHead, longerM) => {
  const calm = flyTow({ ...tow, headwindMps: () => headMps });
  const headier = flyTow({ ...tow, headwindMps: () => headMps + moreHead });
  const longer = flyTow({ ...tow, lineLengthM: tow.lineLengthM + longerM, headwindMps: () => headMps });
  fc.pre([calm, headier, longer].every(({ why }) => why === 'release angle'));
  expect(headier.releaseM).toBeGreaterThanOrEqual(calm.releaseM * (1 - 1e-4));
  expect(longer.releaseM).toBeGreaterThanOrEqual(calm.releaseM * (1 - 1e-4));
  // Nothing in a steady wind knows how long the line is: twice the line is twice the height.
  expect(flyTow({ ...tow, lineLengthM: 2 * tow.lineLengthM, headwindMps: () => headMps }).releaseM).toBeCloseTo(2 * calm.releaseM, 3);
});

law('release height is within 1 % of an integration in far finer steps, through wind that changes with height', [tows, profiles({ lowestM: 10, highestM: 2500, maxMps: 6 }), direction], (tow, profile, headingDeg) => {
  const headwindMps = (heightM: number): number => {
    const share = heightM >= 10 ? 1 : Math.log(Math.max(heightM, 0.03) / 0.03) / Math.log(10 / 0.03);
    const { uMps, vMps } = windAt(profile, Math.max(10, heightM));
    return share * componentsOfVector(uMps, vMps, headingDeg).headMps;
  };
  const ours = flyTow({ ...tow, headwindMps });
  const theirs = bruteTow({ ...tow, headwindMps });
  expect(Math.abs(ours.releaseM - theirs)).toBeLessThanOrEqual(Math.max(0.01 * theirs, 0.05));
});

law('winds that end just above the highest point of a tow leave it as it is, winds that end below make it unknown', [tows, from(0, 3), from(0.01, 0.2)], (tow, headMps, share) => {
  let highestM = 0;
  const whole = flyTow({ ...tow, headwindMps: () => headMps }, ({ heightM }) => {
    highestM = Math.max(highestM, heightM);
  });
  fc.pre(whole.releaseM > 20);
  const knownTo = (topM: number) => flyTow({ ...tow, headwindMps: (heightM) => (heightM <= topM ? headMps : NaN) }).releaseM;
  expect(knownTo(highestM * (1 + share))).toBeCloseTo(whole.releaseM, 3);
  expect(knownTo(highestM * (1 - share))).toBeNaN();
});

law('on the way up the line never grows longer than it is, and the time only runs forward', [tows, from(-2, 9)], (tow, headMps) => {
  const points: TowPoint[] = [];
  flyTow({ ...tow, headwindMps: () => headMps }, (point) => points.push(point));
  expect(Math.max(...points.map(({ toWinchM, heightM }) => Math.hypot(toWinchM, heightM)))).toBeLessThanOrEqual(tow.lineLengthM + 1e-6);
  expect(Math.max(...points.map(({ lineAngleDeg }) => lineAngleDeg))).toBeLessThanOrEqual(tow.releaseAngleDeg + 1e-6);
  expect(points.every(({ timeS }, i) => i === 0 || timeS > points[i - 1]!.timeS)).toBe(true);
});

test('the worked example of the design page', () => {
  const enB = polarOf({ trimMps: 38 / 3.6, glideAtTrim: 9, minSinkMps: 1.1, stallMps: 0.62 * (38 / 3.6), topMps: 1.35 * (38 / 3.6) });
  expect(enB.trimMps).toBeCloseTo(10.5556, 4);
  expect(enB.minSinkSpeedMps).toBeCloseTo(9.2444, 4);
  expect(enB.curvature).toBeCloseTo(0.042373, 6);
  expect(sinkMps(enB, enB.trimMps)).toBeCloseTo(1.17284, 5);
  expect((enB.trimMps - 5) / sinkMps(enB, enB.trimMps)).toBeCloseTo(4.7368, 4);
  expect(speedToFlyMps(enB, { headMps: 5, sinkMps: 0 })).toBeCloseTo(11.6314, 4);
  const heights = [0, 2, 4, 6].map((headMps) => flyTow({ trimMps: 10.5, glideAtTrim: 8, tensionRatio: 0.8, lineLengthM: 800, releaseAngleDeg: 70, headwindMps: () => headMps }).releaseM);
  [269.1, 305.8, 354.7, 423.7].forEach((heightM, i) => expect(Math.abs(heights[i]! - heightM)).toBeLessThan(0.06));
});
