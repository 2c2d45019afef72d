// Wing, glide and tow by hand: the ends, the singular points, what a pilot can redo on paper.
import { describe, expect, test } from 'vitest';
import { flyGlide, type Glide, type GlidePoint } from '../../../lib/wing/glide.ts';
import { groundSpeedMps } from '../../../lib/wing/ground-speed.ts';
import { polarFrom } from '../../../lib/wing/polar.ts';
import { speedFactor } from '../../../lib/wing/scaling.ts';
import { speedToFlyMps } from '../../../lib/wing/speed-to-fly.ts';
import { flyTow, type TowPoint } from '../../../lib/wing/tow.ts';

const figures = { trimMps: 10, glideAtTrim: 9, minSinkMps: 1.04, stallMps: 6.2, topMps: 13.5 };

describe('the polar refuses what no wing is, with the reason', () => {
  test.each([
    ['sinks least not before trim', { minSinkMps: 10 / 9 }, 'not slower than trim'],
    ['sinks least at the stall', { minSinkMps: (10 + 6.2) / 18 }, 'at or below the stall'],
    ['tops out under trim', { topMps: 9.9 }, 'below trim'],
    ['is no number', { glideAtTrim: NaN }, 'are numbers'],
  ])('%s', (_, changes, why) => {
    const polar = polarFrom({ ...figures, ...changes });
    expect(polar.ok).toBe(false);
    expect(!polar.ok && polar.error).toContain(why);
  });

  test('and takes what just is one', () => {
    expect(polarFrom({ ...figures, minSinkMps: 10 / 9 - 0.001 }).ok).toBe(true);
    expect(polarFrom({ ...figures, minSinkMps: 16.2 / 18 + 0.001 }).ok).toBe(true);
    expect(polarFrom({ ...figures, topMps: 10 }).ok).toBe(true);
  });
});

test('at half the density every speed is 1.41 times as fast; with half the load it is back where it was', () => {
  expect(speedFactor({ densityKgm3: 1.225 / 2, allUpMassKg: null, referenceMassKg: null })).toBeCloseTo(Math.SQRT2, 12);
  expect(speedFactor({ densityKgm3: 1.225 / 2, allUpMassKg: 50, referenceMassKg: 100 })).toBeCloseTo(1, 12);
  expect(speedFactor({ densityKgm3: 1.225, allUpMassKg: 50, referenceMassKg: null })).toBe(1);
  expect(speedFactor({ densityKgm3: NaN, allUpMassKg: 50, referenceMassKg: 50 })).toBeNaN();
});

test('over the ground: a six-eight-ten triangle, and no way across a wind as fast as the wing', () => {
  expect(groundSpeedMps(10, { headMps: 0, crossMps: 6 })).toBeCloseTo(8, 12);
  expect(groundSpeedMps(10, { headMps: 3, crossMps: -6 })).toBeCloseTo(5, 12);
  expect(groundSpeedMps(10, { headMps: -3, crossMps: 0 })).toBeCloseTo(13, 12);
  expect(groundSpeedMps(10, { headMps: 0, crossMps: 10 })).toBeNull();
  expect(groundSpeedMps(10, { headMps: 0, crossMps: 9.999 })).toBeGreaterThan(0);
  expect(groundSpeedMps(10, { headMps: NaN, crossMps: 0 })).toBeNaN();
});

test('in still air the speed to fly is trim; in a strong tailwind never slower than least sink, never over the top', () => {
  const polar = polarFrom(figures);
  if (!polar.ok) throw new Error(polar.error);
  expect(speedToFlyMps(polar.value, { headMps: 0, sinkMps: 0 })).toBeCloseTo(10, 9);
  expect(speedToFlyMps(polar.value, { headMps: -30, sinkMps: 0 })).toBeGreaterThanOrEqual(polar.value.minSinkSpeedMps);
  expect(speedToFlyMps(polar.value, { headMps: 12, sinkMps: 3 })).toBe(13.5);
});

describe('the glide', () => {
  // Ten metres a second through the air, one down: a metre of height for ten of way.
  const calm: Glide = { profile: { altitudeM: [0, 3000], uMps: [0, 0], vMps: [0, 0] }, airspeedMps: 10, totalSinkMps: 1, trackDeg: 0, distanceM: 4000, launchM: 1000 };
  const northerly = (lowMps: number, highMps: number, lowestM = 0) => ({ altitudeM: [lowestM, 2000], uMps: [0, 0], vMps: [-lowMps, -highMps] });

  test('of a kilometre of height over four of way arrives six hundred metres up after four hundred seconds', () => {
    const end = flyGlide(calm);
    expect(end).toMatchObject({ kind: 'arrives' });
    expect(end.kind === 'arrives' && end.altitudeM).toBeCloseTo(600, 6);
    expect(end.kind === 'arrives' && end.durationS).toBeCloseTo(400, 6);
  });

  test('against five metres a second needs twice the height; from behind two thirds', () => {
    const against = flyGlide({ ...calm, profile: northerly(5, 5) });
    expect(against.kind === 'arrives' && against.altitudeM).toBeCloseTo(200, 6);
    const behind = flyGlide({ ...calm, profile: northerly(-5, -5) });
    expect(behind.kind === 'arrives' && behind.altitudeM).toBeCloseTo(1000 - 4000 / 15, 6);
  });

  test('may end under the landing, and under the ground', () => {
    const end = flyGlide({ ...calm, distanceM: 20_000 });
    expect(end.kind === 'arrives' && end.altitudeM).toBeCloseTo(-1000, 6);
  });

  test('below the lowest wind that wind holds against the wing but does not carry it', () => {
    const lowest = (mps: number) => flyGlide({ ...calm, launchM: 500, distanceM: 1000, profile: northerly(mps, mps, 490) });
    const at = (end: ReturnType<typeof flyGlide>) => (end.kind === 'arrives' ? end.altitudeM : NaN);
    // Ten metres down to the last node at 10 m/s of way more or less, then 10 m/s of way or 5.
    expect(at(lowest(5))).toBeCloseTo(500 - 1000 / 5, 6);
    expect(at(lowest(-5))).toBeCloseTo(490 - (1000 - 150) / 10, 6);
    // From the side it holds too: crabbing into six of ten leaves eight.
    const aside = flyGlide({ ...calm, launchM: 500, distanceM: 1000, profile: { altitudeM: [500, 2000], uMps: [6, 6], vMps: [0, 0] } });
    expect(at(aside)).toBeCloseTo(500 - 1000 / 8, 6);
  });

  test('stands where the wind is the airspeed: at launch, on the way, or below the lowest wind', () => {
    expect(flyGlide({ ...calm, profile: northerly(0, 20) })).toEqual({ kind: 'does not arrive', altitudeM: 1000 });
    const stands = flyGlide({ ...calm, profile: northerly(20, 0) });
    expect(stands.kind).toBe('does not arrive');
    expect(stands.kind === 'does not arrive' && stands.altitudeM).toBeCloseTo(1000, 0);
    const lower = flyGlide({ ...calm, distanceM: 30_000, profile: northerly(12, 4) });
    expect(lower.kind === 'does not arrive' && lower.altitudeM).toBeCloseTo(500, 0);
    expect(flyGlide({ ...calm, launchM: 400, profile: northerly(10, 10, 490) })).toEqual({ kind: 'does not arrive', altitudeM: 400 });
  });

  test('is unknown without winds, above them, through a hole, or with numbers that are none', () => {
    const unknown = { kind: 'unknown' };
    expect(flyGlide({ ...calm, profile: { altitudeM: [], uMps: [], vMps: [] } })).toEqual(unknown);
    expect(flyGlide({ ...calm, launchM: 3000.1 })).toEqual(unknown);
    expect(flyGlide({ ...calm, profile: { ...calm.profile, uMps: [NaN, 0] } })).toEqual(unknown);
    expect(flyGlide({ ...calm, totalSinkMps: NaN })).toEqual(unknown);
    expect(flyGlide({ ...calm, totalSinkMps: 0 })).toEqual(unknown);
    expect(flyGlide({ ...calm, airspeedMps: NaN })).toEqual(unknown);
    expect(flyGlide({ ...calm, launchM: NaN })).toEqual(unknown);
  });

  test('of no distance is over at once', () => {
    const end = flyGlide({ ...calm, distanceM: 0 });
    expect(end.kind === 'arrives' && end.altitudeM).toBeCloseTo(1000, 6);
  });

  test('shows the points it passes, launch first and landing last', () => {
    const points: GlidePoint[] = [];
    flyGlide(calm, (point) => points.push(point));
    expect(points[0]).toEqual({ alongM: 0, altitudeM: 1000 });
    expect(points.at(-1)!.alongM).toBe(4000);
    expect(points.length).toBeGreaterThan(2);
  });
});

describe('the tow', () => {
  const tow = { trimMps: 10.5, glideAtTrim: 8, tensionRatio: 0.8, lineLengthM: 800, releaseAngleDeg: 70 };

  test('ends by its angle, or by its line where the wind is too strong to close on the winch', () => {
    expect(flyTow({ ...tow, headwindMps: () => 4 }).why).toBe('release angle');
    const held = flyTow({ ...tow, headwindMps: () => 14 });
    expect(held.why).toBe('line length');
    expect(held.releaseM).toBeLessThan(800);
  });

  test('stays on the ground when the line does not lift the wing', () => {
    expect(flyTow({ ...tow, tensionRatio: 0.1, headwindMps: () => 0 })).toEqual({ releaseM: 0, durationS: 0, why: 'no climb' });
  });

  test('with an unknown wind or trim has no height', () => {
    expect(flyTow({ ...tow, headwindMps: () => NaN }).releaseM).toBeNaN();
    expect(flyTow({ ...tow, trimMps: NaN, headwindMps: () => 2 }).releaseM).toBeNaN();
  });

  test('is drawn from the end of the line on the ground to the release', () => {
    const points: TowPoint[] = [];
    const end = flyTow({ ...tow, headwindMps: () => 2 }, (point) => points.push(point));
    expect(points[0]).toEqual({ timeS: 0, toWinchM: 800, heightM: 0, lineAngleDeg: 0 });
    expect(points.at(-1)).toMatchObject({ timeS: end.durationS, heightM: end.releaseM });
    expect(points.at(-1)!.lineAngleDeg).toBeCloseTo(70, 4);
  });
});
