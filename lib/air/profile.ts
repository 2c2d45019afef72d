/**
 * The wind over a place as a polyline in height: u and v linear between nodes, heights above mean sea level, strictly
 * rising. A node whose wind is missing is NaN, and so is everything that touches it: a hole is never bridged. Outside
 * the nodes the wind is unknown (NaN) unless the caller asks for the lowest node's wind below it.
 */
export interface Profile {
  readonly altitudeM: readonly number[];
  readonly uMps: readonly number[];
  readonly vMps: readonly number[];
}

export interface WindVector {
  readonly uMps: number;
  readonly vMps: number;
}

const UNKNOWN: WindVector = { uMps: NaN, vMps: NaN };

/** The wind at a height; `holdBelow` uses the lowest node's wind below it. */
export function windAt(profile: Profile, altitudeM: number, holdBelow = false): WindVector {
  const { altitudeM: z, uMps: u, vMps: v } = profile;
  const last = z.length - 1;
  if (last < 0 || Number.isNaN(altitudeM) || altitudeM > z[last]!) return UNKNOWN;
  if (altitudeM <= z[0]!) return altitudeM === z[0] || holdBelow ? { uMps: u[0]!, vMps: v[0]! } : UNKNOWN;
  let above = 1;
  while (z[above]! < altitudeM) above += 1;
  if (z[above] === altitudeM) return { uMps: u[above]!, vMps: v[above]! };
  const share = (altitudeM - z[above - 1]!) / (z[above]! - z[above - 1]!);
  return { uMps: u[above - 1]! + share * (u[above]! - u[above - 1]!), vMps: v[above - 1]! + share * (v[above]! - v[above - 1]!) };
}

export function speedAt(profile: Profile, altitudeM: number, holdBelow = false): number {
  const { uMps, vMps } = windAt(profile, altitudeM, holdBelow);
  return Math.sqrt(uMps * uMps + vMps * vMps);
}

/** The given heights and every node between the lowest and the highest of them, rising. */
export function heightsBetween(profile: Profile, givenM: readonly number[]): number[] {
  const low = Math.min(...givenM);
  const high = Math.max(...givenM);
  const heights = [...givenM];
  for (const z of profile.altitudeM) if (z > low && z < high) heights.push(z);
  return heights.sort((a, b) => a - b);
}

/** Height of the highest node, -Infinity when there is none. */
export function topM(profile: Profile): number {
  return profile.altitudeM.length === 0 ? -Infinity : profile.altitudeM[profile.altitudeM.length - 1]!;
}
