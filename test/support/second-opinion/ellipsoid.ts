// Distance and first bearing between two points on the WGS-84 ellipsoid: Vincenty (1975), inverse formula.
import { degToRad, radToDeg } from './numbers.ts';

const A_M = 6378137;
const F = 1 / 298.257223563;
const B_M = A_M * (1 - F);

export function trackBetween(from: number[], to: number[]): { distanceM: number; trackDeg: number } {
  const [lonFrom, latFrom] = from as [number, number];
  const [lonTo, latTo] = to as [number, number];
  const L = degToRad(lonTo - lonFrom);
  const U1 = Math.atan((1 - F) * Math.tan(degToRad(latFrom)));
  const U2 = Math.atan((1 - F) * Math.tan(degToRad(latTo)));
  let lambda = L;
  for (let round = 0; round < 200; round++) {
    const sinSigma = Math.hypot(
      Math.cos(U2) * Math.sin(lambda),
      Math.cos(U1) * Math.sin(U2) - Math.sin(U1) * Math.cos(U2) * Math.cos(lambda),
    );
    if (sinSigma === 0) return { distanceM: 0, trackDeg: 0 };
    const cosSigma = Math.sin(U1) * Math.sin(U2) + Math.cos(U1) * Math.cos(U2) * Math.cos(lambda);
    const sigma = Math.atan2(sinSigma, cosSigma);
    const sinAlpha = (Math.cos(U1) * Math.cos(U2) * Math.sin(lambda)) / sinSigma;
    const cos2Alpha = 1 - sinAlpha * sinAlpha;
    const cos2SigmaM = cos2Alpha === 0 ? 0 : cosSigma - (2 * Math.sin(U1) * Math.sin(U2)) / cos2Alpha;
    const C = (F / 16) * cos2Alpha * (4 + F * (4 - 3 * cos2Alpha));
    const next =
      L + (1 - C) * F * sinAlpha * (sigma + C * sinSigma * (cos2SigmaM + C * cosSigma * (-1 + 2 * cos2SigmaM ** 2)));
    const change = Math.abs(next - lambda);
    lambda = next;
    if (change < 1e-13) {
      const u2 = (cos2Alpha * (A_M * A_M - B_M * B_M)) / (B_M * B_M);
      const bigA = 1 + (u2 / 16384) * (4096 + u2 * (-768 + u2 * (320 - 175 * u2)));
      const bigB = (u2 / 1024) * (256 + u2 * (-128 + u2 * (74 - 47 * u2)));
      const deltaSigma =
        bigB *
        sinSigma *
        (cos2SigmaM +
          (bigB / 4) *
            (cosSigma * (-1 + 2 * cos2SigmaM ** 2) -
              (bigB / 6) * cos2SigmaM * (-3 + 4 * sinSigma ** 2) * (-3 + 4 * cos2SigmaM ** 2)));
      const bearing = Math.atan2(
        Math.cos(U2) * Math.sin(lambda),
        Math.cos(U1) * Math.sin(U2) - Math.sin(U1) * Math.cos(U2) * Math.cos(lambda),
      );
      return { distanceM: B_M * bigA * (sigma - deltaSigma), trackDeg: (radToDeg(bearing) + 360) % 360 };
    }
  }
  throw new Error('The two points lie on opposite sides of the earth.');
}
