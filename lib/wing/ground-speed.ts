/**
 * Ground speed along a track at airspeed V with headwind h and crosswind c: sqrt(V^2 - c^2) - h, the wing crabbing into
 * the cross part. null when the cross part is as large as the airspeed: the track cannot be held. NaN stays NaN.
 */
export function groundSpeedMps(airspeedMps: number, wind: { readonly headMps: number; readonly crossMps: number }): number | null {
  const square = airspeedMps * airspeedMps - wind.crossMps * wind.crossMps;
  if (square <= 0) return null;
  return Math.sqrt(square) - wind.headMps;
}
