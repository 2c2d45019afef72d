// Published lines on three ellipsoids, and an independent library (geographiclib-geodesic) over the whole globe.
import geodesic from 'geographiclib-geodesic';
import { describe, expect, test } from 'vitest';
import { destination, geodesicBetween, type Ellipsoid } from '../../lib/numeric/geodesic.ts';

function dms(degreesPart: number, minutes = 0, seconds = 0): number {
  return degreesPart + minutes / 60 + seconds / 3600;
}

const GRS80: Ellipsoid = { semiMajorM: 6378137, flattening: 1 / 298.257222101 };
const bessel: Ellipsoid = { semiMajorM: 6377397.155, flattening: 1 / 299.1528128 };
const international: Ellipsoid = { semiMajorM: 6378388, flattening: 1 / 297 };

// Geoscience Australia, worked example of Vincenty's formulae on GDA94 (GRS80): Flinders Peak to Buninyong.
// The GDA technical manual prints millimetres and hundredths of a second. From memory, confirmed by the library below.
const flindersPeak = { latDeg: -dms(37, 57, 3.7203), lonDeg: dms(144, 25, 29.5244) };
const buninyong = { latDeg: -dms(37, 39, 10.1561), lonDeg: dms(143, 55, 35.3839) };

test('Flinders Peak to Buninyong is 54 972.271 m on 306°52\'05.37"', () => {
  const line = geodesicBetween(flindersPeak, buninyong, GRS80);
  expect(Math.abs(line.distanceM - 54972.271)).toBeLessThan(0.0005);
  expect(Math.abs(line.trackDeg - dms(306, 52, 5.37))).toBeLessThan(0.005 / 3600);
  expect(Math.abs(line.arrivalTrackDeg - 180 - dms(127, 10, 25.07))).toBeLessThan(0.005 / 3600);
});

test('and the track leads back to Buninyong', () => {
  const end = destination(flindersPeak, { trackDeg: dms(306, 52, 5.37), distanceM: 54972.271 }, GRS80);
  expect(end.latDeg).toBeCloseTo(buninyong.latDeg, 7);
  expect(end.lonDeg).toBeCloseTo(buninyong.lonDeg, 7);
});

// Vincenty (1975), Survey Review 23(176), table II: latitude 1, azimuth 1-2, latitude 2, longitude difference, metres.
// Printed to 0.00001" and 1 mm. From memory, confirmed by the library below.
const vincenty = [
  ['a', bessel, dms(55, 45), dms(96, 36, 8.7996), -dms(33, 26), dms(108, 13), 14110526.17],
  ['b', international, dms(37, 19, 54.95367), dms(95, 27, 59.63089), dms(26, 7, 42.83946), dms(41, 28, 35.50729), 4085966.703],
  ['c', international, dms(35, 16, 11.24862), dms(15, 44, 23.7485), dms(67, 22, 14.77638), dms(137, 47, 28.31435), 8084823.839],
  ['d', international, dms(1), dms(89), -dms(0, 59, 53.83076), dms(179, 17, 48.02997), 19960000],
  ['e', international, dms(1), dms(4, 59, 59.99995), dms(1, 1, 15.18952), dms(179, 46, 17.84244), 19780006.558],
] as const;

describe('the five lines of Vincenty 1975', () => {
  test.each(vincenty)('line %s', (_name, ellipsoid, latDeg, trackDeg, lat2Deg, lonDeg, distanceM) => {
    const line = geodesicBetween({ latDeg, lonDeg: 0 }, { latDeg: lat2Deg, lonDeg }, ellipsoid);
    expect(line.exact).toBe(true);
    expect(Math.abs(line.distanceM - distanceM)).toBeLessThan(0.001);
    // His azimuth hangs on printed latitudes: 0.00001" of latitude turns lines d and e by up to 0.001".
    expect(Math.abs(line.trackDeg - trackDeg)).toBeLessThan(0.002 / 3600);
    const end = destination({ latDeg, lonDeg: 0 }, { trackDeg, distanceM }, ellipsoid);
    expect(Math.abs(end.latDeg - lat2Deg)).toBeLessThan(0.0001 / 3600);
    expect(Math.abs(end.lonDeg - lonDeg)).toBeLessThan(0.0001 / 3600);
  });

  test('are five', () => {
    expect(vincenty).toHaveLength(5);
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
