/** Angles in degrees, clockwise from true north. */
const RAD_PER_DEG = Math.PI / 180;

export function radians(deg: number): number {
  return deg * RAD_PER_DEG;
}

export function degrees(rad: number): number {
  return rad / RAD_PER_DEG;
}

/** The same direction in [0, 360). */
export function normalDeg(deg: number): number {
  const turned = deg % 360;
  // A hair below zero rounds up to 360 itself, and -0 is north too.
  const positive = turned < 0 ? turned + 360 : turned;
  return positive === 360 || positive === 0 ? 0 : positive;
}

/** From `fromDeg` to `toDeg` the short way round, in [-180, 180); positive clockwise. */
export function turnDeg(fromDeg: number, toDeg: number): number {
  return normalDeg(toDeg - fromDeg + 180) - 180;
}

/** The angle between two directions, 0 to 180. */
export function angleBetweenDeg(aDeg: number, bDeg: number): number {
  return Math.abs(turnDeg(aDeg, bDeg));
}

/** A direction that was carried through a vector comes back this near, so that one on an edge may lie a hair outside it. */
const EDGE_DEG = 1e-9;

/** Whether a direction lies in the sector that runs clockwise from `fromDeg` to `toDeg`, both edges included. */
export function inSector(deg: number, sector: { readonly fromDeg: number; readonly toDeg: number }): boolean {
  return normalDeg(deg - sector.fromDeg + EDGE_DEG) <= normalDeg(sector.toDeg - sector.fromDeg) + 2 * EDGE_DEG;
}
