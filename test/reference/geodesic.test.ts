// Published lines on three ellipsoids, and an independent library (geographiclib-geodesic) over the whole globe.
import geodesic from 'geographiclib-geodesic';
import { describe, expect, test } from 'vitest';
import { destination, geodesicBetween } from '../../lib/numeric/geodesic.ts';
import { holds } from './holds.ts';
import { dms, flindersPeak, geodesic as tables, vincentyLines } from './tables/geodesic.ts';

holds(tables);

test('from Buninyong the line comes in on 127°10\'25.07" (GDA technical manual)', () => {
  const line = geodesicBetween(flindersPeak.from, flindersPeak.to, flindersPeak.ellipsoid);
  expect(Math.abs(line.arrivalTrackDeg - 180 - dms(127, 10, 25.07))).toBeLessThan(0.005 / 3600);
});

test('and the track leads back to Buninyong', () => {
  const end = destination(flindersPeak.from, flindersPeak, flindersPeak.ellipsoid);
  expect(end.latDeg).toBeCloseTo(flindersPeak.to.latDeg, 7);
  expect(end.lonDeg).toBeCloseTo(flindersPeak.to.lonDeg, 7);
});

describe('the direct problem of Vincenty 1975', () => {
  test.each(vincentyLines)('$name ends where it is printed', ({ from, to, ellipsoid, trackDeg, distanceM }) => {
    expect(geodesicBetween(from, to, ellipsoid).exact).toBe(true);
    const end = destination(from, { trackDeg, distanceM }, ellipsoid);
    expect(Math.abs(end.latDeg - to.latDeg)).toBeLessThan(0.0001 / 3600);
    expect(Math.abs(end.lonDeg - to.lonDeg)).toBeLessThan(0.0001 / 3600);
  });
});

describe('against geographiclib-geodesic, 2 000 lines', () => {
  const wgs84 = geodesic.Geodesic.WGS84;
  let seed = 1;
  function share(): number {
    seed = (seed * 48271) % 2147483647;
    return seed / 2147483647;
  }
  function anyPlace(): { latDeg: number; lonDeg: number } {
    return { latDeg: 180 * share() - 90, lonDeg: 360 * share() - 180 };
  }
  const pairs = Array.from({ length: 2000 }, (_, i) => {
    const from = anyPlace();
    const nearby = { latDeg: Math.min(90, from.latDeg + 0.2 * share()), lonDeg: from.lonDeg + 0.2 * share() };
    return { from, to: i % 2 === 0 ? anyPlace() : nearby };
  });

  test('distance within a millimetre, track within a millimetre at the far end', () => {
    const inexact = pairs.filter(({ from, to }) => {
      const line = geodesicBetween(from, to);
      const oracle = wgs84.Inverse(from.latDeg, from.lonDeg, to.latDeg, to.lonDeg);
      if (!line.exact) return true;
      expect(Math.abs(line.distanceM - (oracle.s12 ?? NaN))).toBeLessThan(0.001);
      const turnRad = (Math.PI / 180) * Math.abs(((line.trackDeg - (oracle.azi1 ?? NaN) + 540) % 360) - 180);
      expect(turnRad * (oracle.m12 ?? line.distanceM)).toBeLessThan(0.001);
      return false;
    });
    expect(inexact.length).toBeLessThan(5);
  });

  test('destination within a millimetre', () => {
    for (const { from, to } of pairs) {
      const leg = { trackDeg: (to.lonDeg + 360) % 360, distanceM: 100_000 * (to.latDeg / 90 + 1) };
      const end = destination(from, leg);
      const oracle = wgs84.Direct(from.latDeg, from.lonDeg, leg.trackDeg, leg.distanceM);
      const apart = wgs84.Inverse(end.latDeg, end.lonDeg, oracle.lat2 ?? NaN, oracle.lon2 ?? NaN).s12;
      expect(apart).toBeLessThan(0.001);
    }
  });
});

describe('at the singular points', () => {
  const place = { latDeg: 46, lonDeg: 11 };

  test('a point is no distance from itself', () => {
    expect(geodesicBetween(place, place)).toEqual({ distanceM: 0, trackDeg: 0, arrivalTrackDeg: 0, exact: true });
    expect(destination(place, { trackDeg: 90, distanceM: 0 }).lonDeg).toBeCloseTo(11, 12);
  });

  test('along the equator the track is east, the distance an arc', () => {
    const line = geodesicBetween({ latDeg: 0, lonDeg: 179.5 }, { latDeg: 0, lonDeg: -179.5 });
    expect(line.trackDeg).toBeCloseTo(90, 10);
    expect(line.distanceM).toBeCloseTo((6378137 * Math.PI) / 180, 3);
  });

  test('due north is 0, due south 180', () => {
    expect(geodesicBetween(place, { latDeg: 47, lonDeg: 11 }).trackDeg).toBe(0);
    expect(geodesicBetween(place, { latDeg: 45, lonDeg: 11 }).trackDeg).toBe(180);
  });

  test('from a pole every way leads along a meridian', () => {
    const line = geodesicBetween({ latDeg: 90, lonDeg: 0 }, place);
    expect(line.exact).toBe(true);
    // Meridian arc from 46° N to the pole, by the library.
    expect(line.distanceM).toBeCloseTo(geodesic.Geodesic.WGS84.Inverse(90, 0, 46, 11).s12 ?? NaN, 3);
  });

  test('near the antipode the great circle is given, and said to be inexact', () => {
    const line = geodesicBetween(place, { latDeg: -46.1, lonDeg: -168.8 });
    const oracle = geodesic.Geodesic.WGS84.Inverse(46, 11, -46.1, -168.8).s12 ?? NaN;
    expect(line.exact).toBe(false);
    expect(Math.abs(line.distanceM / oracle - 1)).toBeLessThan(0.006);
  });
});
