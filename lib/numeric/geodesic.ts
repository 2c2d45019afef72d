/**
 * Shortest lines on the ellipsoid of WGS-84: track and distance between two points, and the point at the end of a track.
 * Vincenty, T. (1975), "Direct and inverse solutions of geodesics on the ellipsoid with application of nested equations",
 * Survey Review 23(176), 88-93; the numbers beside the lines are his. Better than a millimetre except between points
 * almost opposite on the globe, where his inverse does not settle: there the great circle of the mean sphere is
 * given (within 0.6 %) and `exact` is false.
 */
import { degrees, normalDeg, radians } from '../angles.ts';

export interface LonLat {
  readonly lonDeg: number;
  readonly latDeg: number;
}

export interface Ellipsoid {
  readonly semiMajorM: number;
  readonly flattening: number;
}

/** NIMA TR8350.2 (third edition, 2000). */
const WGS84: Ellipsoid = { semiMajorM: 6378137, flattening: 1 / 298.257223563 };

export interface Geodesic {
  readonly distanceM: number;
  /** True track at the start, [0, 360); 0 between equal points. */
  readonly trackDeg: number;
  /** True track on arrival. */
  readonly arrivalTrackDeg: number;
  readonly exact: boolean;
}

const SETTLED_RAD = 1e-12;
const MOST_ROUNDS = 200;

function reducedLatitude(latDeg: number, flattening: number): { readonly sin: number; readonly cos: number } {
  const u = Math.atan2((1 - flattening) * Math.sin(radians(latDeg)), Math.cos(radians(latDeg)));
  return { sin: Math.sin(u), cos: Math.cos(u) };
}

/** Vincenty's A and B (3, 4) of a geodesic whose azimuth at the equator has this squared cosine. */
function series(cosSqAlpha: number, { flattening }: Ellipsoid): { readonly a: number; readonly b: number } {
  const uSq = cosSqAlpha * (1 / (1 - flattening) ** 2 - 1);
  return {
    a: 1 + (uSq / 16384) * (4096 + uSq * (-768 + uSq * (320 - 175 * uSq))),
    b: (uSq / 1024) * (256 + uSq * (-128 + uSq * (74 - 47 * uSq))),
  };
}

/** (6): the difference between arc on the sphere and length on the ellipsoid, radians. */
function deltaSigma(b: number, sinSigma: number, cosSigma: number, cos2Sm: number): number {
  const inner = cosSigma * (-1 + 2 * cos2Sm ** 2) - (b / 6) * cos2Sm * (-3 + 4 * sinSigma ** 2) * (-3 + 4 * cos2Sm ** 2);
  return b * sinSigma * (cos2Sm + (b / 4) * inner);
}

/** (10) and (11): what the longitude on the sphere has over that on the ellipsoid, radians. */
function longitudeExcess(flattening: number, sinAlpha: number, sigma: number, cos2Sm: number): number {
  const cosSqAlpha = 1 - sinAlpha ** 2;
  const c = (flattening / 16) * cosSqAlpha * (4 + flattening * (4 - 3 * cosSqAlpha));
  const arc = sigma + c * Math.sin(sigma) * (cos2Sm + c * Math.cos(sigma) * (-1 + 2 * cos2Sm ** 2));
  return (1 - c) * flattening * sinAlpha * arc;
}

/** Track and distance from one point to another. */
export function geodesicBetween(from: LonLat, to: LonLat, ellipsoid: Ellipsoid = WGS84): Geodesic {
  const { semiMajorM, flattening } = ellipsoid;
  const u1 = reducedLatitude(from.latDeg, flattening);
  const u2 = reducedLatitude(to.latDeg, flattening);
  const lonDifference = radians(normalDeg(to.lonDeg - from.lonDeg + 180) - 180);
  let lambda = lonDifference;
  for (let round = 0; round < MOST_ROUNDS; round += 1) {
    const east = u2.cos * Math.sin(lambda);
    const north = u1.cos * u2.sin - u1.sin * u2.cos * Math.cos(lambda);
    const sinSigma = Math.hypot(east, north);
    if (sinSigma < 1e-15 && Math.abs(lambda) < 1) return { distanceM: 0, trackDeg: 0, arrivalTrackDeg: 0, exact: true };
    const cosSigma = u1.sin * u2.sin + u1.cos * u2.cos * Math.cos(lambda);
    const sigma = Math.atan2(sinSigma, cosSigma);
    const sinAlpha = sinSigma === 0 ? 0 : (u1.cos * u2.cos * Math.sin(lambda)) / sinSigma;
    const cosSqAlpha = 1 - sinAlpha ** 2;
    // Along the equator cosSqAlpha is zero and so is the term that this cosine belongs to.
    const cos2Sm = cosSqAlpha < 1e-15 ? 0 : cosSigma - (2 * u1.sin * u2.sin) / cosSqAlpha;
    const next = lonDifference + longitudeExcess(flattening, sinAlpha, sigma, cos2Sm);
    if (Math.abs(next) > Math.PI) break;
    if (Math.abs(next - lambda) < SETTLED_RAD) {
      const { a, b } = series(cosSqAlpha, ellipsoid);
      const backEast = u1.cos * Math.sin(lambda);
      const backNorth = -u1.sin * u2.cos + u1.cos * u2.sin * Math.cos(lambda);
      return {
        distanceM: semiMajorM * (1 - flattening) * a * (sigma - deltaSigma(b, sinSigma, cosSigma, cos2Sm)),
        trackDeg: normalDeg(degrees(Math.atan2(east, north))),
        arrivalTrackDeg: normalDeg(degrees(Math.atan2(backEast, backNorth))),
        exact: true,
      };
    }
    lambda = next;
  }
  return greatCircle(from, to, ellipsoid);
}

/** On the sphere of mean radius (2a + b)/3. */
function greatCircle(from: LonLat, to: LonLat, { semiMajorM, flattening }: Ellipsoid): Geodesic {
  const lat1 = radians(from.latDeg);
  const lat2 = radians(to.latDeg);
  const lambda = radians(to.lonDeg - from.lonDeg);
  const east = Math.cos(lat2) * Math.sin(lambda);
  const north = Math.cos(lat1) * Math.sin(lat2) - Math.sin(lat1) * Math.cos(lat2) * Math.cos(lambda);
  const up = Math.sin(lat1) * Math.sin(lat2) + Math.cos(lat1) * Math.cos(lat2) * Math.cos(lambda);
  const backNorth = -Math.sin(lat1) * Math.cos(lat2) + Math.cos(lat1) * Math.sin(lat2) * Math.cos(lambda);
  return {
    distanceM: semiMajorM * (1 - flattening / 3) * Math.atan2(Math.hypot(east, north), up),
    trackDeg: normalDeg(degrees(Math.atan2(east, north))),
    arrivalTrackDeg: normalDeg(degrees(Math.atan2(Math.cos(lat1) * Math.sin(lambda), backNorth))),
    exact: false,
  };
}

/** Where a track of `distanceM` from a point ends. */
export function destination(
  from: LonLat,
  leg: { readonly trackDeg: number; readonly distanceM: number },
  ellipsoid: Ellipsoid = WGS84,
): LonLat {
  const { semiMajorM, flattening } = ellipsoid;
  const u1 = reducedLatitude(from.latDeg, flattening);
  const sinTrack = Math.sin(radians(leg.trackDeg));
  const cosTrack = Math.cos(radians(leg.trackDeg));
  const sigma1 = Math.atan2(u1.sin / u1.cos, cosTrack);
  const sinAlpha = u1.cos * sinTrack;
  const { a, b } = series(1 - sinAlpha ** 2, ellipsoid);
  const straight = leg.distanceM / (semiMajorM * (1 - flattening) * a);
  let sigma = straight;
  for (let round = 0; round < MOST_ROUNDS; round += 1) {
    const next = straight + deltaSigma(b, Math.sin(sigma), Math.cos(sigma), Math.cos(2 * sigma1 + sigma));
    const hasSettled = Math.abs(next - sigma) < SETTLED_RAD;
    sigma = next;
    if (hasSettled) break;
  }
  const sinSigma = Math.sin(sigma);
  const cosSigma = Math.cos(sigma);
  const across = u1.sin * sinSigma - u1.cos * cosSigma * cosTrack;
  const latitude = Math.atan2(u1.sin * cosSigma + u1.cos * sinSigma * cosTrack, (1 - flattening) * Math.hypot(sinAlpha, across));
  const lambda = Math.atan2(sinSigma * sinTrack, u1.cos * cosSigma - u1.sin * sinSigma * cosTrack);
  const longitude = lambda - longitudeExcess(flattening, sinAlpha, sigma, Math.cos(2 * sigma1 + sigma));
  return { lonDeg: normalDeg(from.lonDeg + degrees(longitude) + 180) - 180, latDeg: degrees(latitude) };
}
