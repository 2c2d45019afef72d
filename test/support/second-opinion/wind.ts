// flight-model.md section 3: vectors, the profile, the estimates of the launch wind, gusts. NaN is unknown.
import { readLevels } from './air.ts';
import { UNKNOWN, degToRad, known, radToDeg, read } from './numbers.ts';
import type { Conditions, Hill, Wind } from './types.ts';

export type Vector = { u: number; v: number };

// Calm is below 0.3 m/s: no direction, components zero. A wind that is not calm needs its direction.
const CALM_BELOW_MPS = 0.3;

export function isCalm(speedMps: number): boolean {
  return speedMps < CALM_BELOW_MPS;
}

// air-and-flight.md b: u = -V sin D, v = -V cos D.
function vectorOf(speedMps: number, fromDeg: number): Vector {
  if (isCalm(speedMps)) return { u: 0, v: 0 };
  return { u: -speedMps * Math.sin(degToRad(fromDeg)), v: -speedMps * Math.cos(degToRad(fromDeg)) };
}

export function speedOf(vector: Vector): number {
  return Math.sqrt(vector.u * vector.u + vector.v * vector.v);
}

function fromDegOf(vector: Vector): number {
  return (radToDeg(Math.atan2(-vector.u, -vector.v)) + 360) % 360;
}

// "head V cos(D-F), cross V sin(D-F), positive from the right of someone looking along F", written out in components.
export function headOn(vector: Vector, axisDeg: number): number {
  return -vector.u * Math.sin(degToRad(axisDeg)) - vector.v * Math.cos(degToRad(axisDeg));
}

export function crossOn(vector: Vector, axisDeg: number): number {
  return -vector.u * Math.cos(degToRad(axisDeg)) + vector.v * Math.sin(degToRad(axisDeg));
}

export type ReadWind = { speedMps: number; fromDeg: number; vector: Vector };

export function readWind(wind: Wind | null | undefined): ReadWind {
  const speedMps = read.windMps(wind?.speedMps);
  const fromDeg = read.directionDeg(wind?.fromDeg);
  if (!known(speedMps)) return { speedMps, fromDeg, vector: { u: UNKNOWN, v: UNKNOWN } };
  return { speedMps, fromDeg, vector: vectorOf(speedMps, fromDeg) };
}

export type ProfileNode = Vector & { altitudeM: number };
export type Profile = {
  nodes: ProfileNode[];
  lowestM: number;
  highestM: number;
  // Unknown outside the nodes.
  at: (altitudeM: number) => Vector;
  // "Below the lowest node that node's wind; above the highest unknown".
  atOrLowest: (altitudeM: number) => Vector;
};

// "u and v, linear in height between nodes at gridElevationM + 10, + nearGround, and pressure levels more than 50 m above the highest
// near-ground node". The 10 m node counts as a near-ground node when there is no other.
export function windProfile(hour: Conditions, declared: Set<string>): Profile {
  const groundM = hour.gridElevationM;
  const nodes: ProfileNode[] = [{ altitudeM: groundM + 10, ...readWind(hour.wind10m).vector }];
  let highestNearGroundM = groundM + 10;
  const nearGround = hour.nearGround ?? [];
  for (const row of nearGround) {
    const heightAglM = read.anyFinite(row.heightAglM);
    if (heightAglM === 10) continue; // wind10m is that node
    if (!known(heightAglM) || heightAglM <= 0) {
      // It could be anywhere near the ground.
      nodes.push({ altitudeM: groundM + 10.001, u: UNKNOWN, v: UNKNOWN });
      continue;
    }
    nodes.push({ altitudeM: groundM + heightAglM, ...readWind(row).vector });
    highestNearGroundM = Math.max(highestNearGroundM, groundM + heightAglM);
  }
  if (declared.has('nearGround') && nearGround.length === 0) {
    nodes.push({ altitudeM: groundM + 10.001, u: UNKNOWN, v: UNKNOWN });
  }
  for (const level of readLevels(hour)) {
    if (level.altitudeM > highestNearGroundM + 50) {
      nodes.push({ altitudeM: level.altitudeM, ...readWind(level).vector });
    }
  }
  nodes.sort((one, other) => one.altitudeM - other.altitudeM);
  const first = nodes[0] as ProfileNode;
  const last = nodes[nodes.length - 1] as ProfileNode;

  function at(altitudeM: number): Vector {
    for (const node of nodes) {
      if (node.altitudeM === altitudeM) return { u: node.u, v: node.v };
    }
    for (let i = 0; i + 1 < nodes.length; i++) {
      const below = nodes[i] as ProfileNode;
      const above = nodes[i + 1] as ProfileNode;
      if (below.altitudeM < altitudeM && altitudeM < above.altitudeM) {
        const part = (altitudeM - below.altitudeM) / (above.altitudeM - below.altitudeM);
        return { u: below.u + part * (above.u - below.u), v: below.v + part * (above.v - below.v) };
      }
    }
    return { u: UNKNOWN, v: UNKNOWN };
  }
  function atOrLowest(altitudeM: number): Vector {
    if (altitudeM < first.altitudeM) return { u: first.u, v: first.v };
    return at(altitudeM);
  }
  return { nodes, lowestM: first.altitudeM, highestM: last.altitudeM, at, atOrLowest };
}

// dS of section 3, for the 10 m wind.
function speedUp(hill: Hill, launchM: number, gridElevationM: number): number {
  const constants = {
    ridge: { B: 2.0, A: 3.0 },
    escarpment: { B: 0.8, A: 2.5 },
    cone: { B: 1.6, A: 4.0 },
    flat: { B: 0, A: 0 },
  }[hill.form];
  if (hill.form === 'flat') return 0;
  const h = Math.min(hill.heightM, Math.max(hill.heightM / 3, launchM - gridElevationM));
  const L = Math.max(hill.halfLengthM, 2 * h);
  return constants.B * (h / L) * Math.exp((-constants.A * 10) / L);
}

// What the gust is worth beside the 10 m mean. "A gust up to 1 m/s below the mean counts as equal ...; further below ... unknown."
export function readGust(hour: Conditions): { gustMps: number; incrementMps: number } {
  const meanMps = readWind(hour.wind10m).speedMps;
  let gustMps = read.gustMps(hour.gustMps);
  if (gustMps < meanMps) {
    gustMps = meanMps - gustMps <= 1 ? meanMps : UNKNOWN;
  }
  return { gustMps, incrementMps: Math.max(0, gustMps - meanMps) };
}

// How high the winds reach that the source declares: over all its hours, because a row that is missing in one hour is still declared.
export function declaredReachM(hours: Conditions[], declared: Set<string>): number {
  let reachM = -Infinity;
  let seen = false;
  for (const hour of hours) {
    if (declared.has('wind10m')) reachM = Math.max(reachM, hour.gridElevationM + 10);
    if (declared.has('nearGround')) {
      for (const row of hour.nearGround ?? []) {
        const heightAglM = read.anyFinite(row.heightAglM);
        if (known(heightAglM)) reachM = Math.max(reachM, hour.gridElevationM + heightAglM);
      }
    }
    if (declared.has('levels')) {
      for (const level of readLevels(hour)) {
        seen = true;
        reachM = Math.max(reachM, level.altitudeM); // a hole on top has no height: it may reach anywhere
      }
    }
  }
  if (declared.has('levels') && !seen) return Infinity;
  return reachM;
}

export type Estimate = {
  name: 'ground' | 'freeAir';
  meanMps: number;
  calm: boolean;
  gustMps: number;
  fromDeg: number; // NaN when calm
  head: number;
  cross: number;
  // Of the raw 10 m wind for `ground`, of the same wind for `freeAir`.
  rawSpeedMps: number;
  rawFromDeg: number;
  rawHead: number;
  // The gust vector as each margin counts it.
  gustHead: number;
  gustCrossForSpeed: number;
  gustCross: number;
  gustTail: number;
};

type Parts = { calm: boolean; meanMps: number; head: number; cross: number; gustMps: number; lightWindMps: number };

function gustParts(parts: Parts) {
  if (parts.calm) {
    // "its gust counts in full as headwind; for cross and tail only its part above lightWindMps"
    const part = Math.max(0, parts.gustMps - parts.lightWindMps);
    return { gustHead: parts.gustMps, gustCrossForSpeed: 0, gustCross: part, gustTail: part };
  }
  // "Same direction as the mean"
  const head = (parts.head * parts.gustMps) / parts.meanMps;
  const cross = (parts.cross * parts.gustMps) / parts.meanMps;
  return { gustHead: head, gustCrossForSpeed: cross, gustCross: Math.abs(cross), gustTail: Math.max(0, -head) };
}

export type LaunchWindInputs = {
  hour: Conditions;
  profile: Profile;
  hill: Hill;
  launchM: number;
  axisDeg: number;
  lightWindMps: number;
  reachM: number;
};

// "Estimates of the launch wind, all kept ones". An empty list: "Neither: the launch wind is unknown".
export function keptEstimates(inputs: LaunchWindInputs): Estimate[] {
  const { hour, profile, hill, launchM, axisDeg, lightWindMps, reachM } = inputs;
  const kept: Estimate[] = [];
  const raw = readWind(hour.wind10m);
  const gust = readGust(hour);

  // "Kept while the launch lies at most max(150, min(heightM, 400)) m above the model's ground."
  if (launchM - hour.gridElevationM <= Math.max(150, Math.min(hill.heightM, 400))) {
    const rawHead = headOn(raw.vector, axisDeg);
    const cross = crossOn(raw.vector, axisDeg);
    let head = rawHead;
    if (rawHead > 0) head = rawHead * (1 + speedUp(hill, launchM, hour.gridElevationM));
    // A calm keeps its own small speed as a speed; only direction and components go.
    const calm = isCalm(raw.speedMps);
    const meanMps = calm ? raw.speedMps : Math.sqrt(head * head + cross * cross);
    const gustMps = meanMps + gust.incrementMps;
    kept.push({
      name: 'ground',
      meanMps,
      calm,
      gustMps,
      fromDeg: calm ? UNKNOWN : (axisDeg + radToDeg(Math.atan2(cross, head)) + 720) % 360,
      head,
      cross,
      rawSpeedMps: raw.speedMps,
      rawFromDeg: raw.fromDeg,
      rawHead,
      ...gustParts({ calm, meanMps, head, cross, gustMps, lightWindMps }),
    });
  }

  // "the profile at launch + 10 m, when the launch lies above the model's ground and the source declares winds that reach there"
  if (launchM > hour.gridElevationM && launchM + 10 <= reachM) {
    const vector = profile.at(launchM + 10);
    const meanMps = speedOf(vector);
    const calm = isCalm(meanMps);
    const head = calm ? 0 : headOn(vector, axisDeg);
    const cross = calm ? 0 : crossOn(vector, axisDeg);
    const gustMps = Math.max(gust.gustMps, 1.3 * meanMps);
    const fromDeg = calm ? UNKNOWN : fromDegOf(vector);
    kept.push({
      name: 'freeAir',
      meanMps,
      calm,
      gustMps,
      fromDeg,
      head,
      cross,
      rawSpeedMps: meanMps,
      rawFromDeg: fromDeg,
      rawHead: head,
      ...gustParts({ calm, meanMps, head, cross, gustMps, lightWindMps }),
    });
  }
  return kept;
}
