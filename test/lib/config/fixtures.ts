// Sites, sheets and requests that are right in every field, to be made wrong in one.
import type { Issue, Result } from '../../../lib/result.ts';

/** 14 May 2027, 04:00 UTC. */
export const NOW_MS = Date.UTC(2027, 4, 14, 4);

export type Json = Record<string, unknown>;

export function launchFeature(): Json {
  return {
    type: 'Feature',
    id: 'larch-shoulder',
    geometry: { type: 'Point', coordinates: [11.4, 47.2, 1900] },
    properties: {
      kind: 'launch', name: 'Larch Shoulder', timeZone: 'Europe/Vienna', facingDeg: 250, slopeDeg: 24,
      hill: { form: 'ridge', heightM: 180, halfLengthM: 320 },
      landing: { coordinates: [11.36, 47.19, 620], roughnessM: 0.03 },
    },
  };
}

export function stripFeature(): Json {
  return {
    type: 'Feature',
    id: 'long-field',
    geometry: { type: 'Point', coordinates: [11.3, 47.1, 560] },
    properties: { kind: 'strip', name: 'Long Field', timeZone: 'Europe/Vienna', headingDeg: 70, usableBothWays: true, lineLengthM: 900, roughnessM: 0.03 },
  };
}

export function sheet(): Json {
  return { id: 'our-sheet', name: 'Our sheet', version: 3, kind: 'launch', for: 'our pilots', limits: { maxMeanMps: 5, maxGustMps: 7 } };
}

export function hour(validAt = '2027-05-14T04:00:00Z'): Json {
  return { validAt, gridElevationM: 700, wind10m: { speedMps: 2.5, fromDeg: 240 }, gustMps: 4 };
}

/** A copy with the value at a path replaced (or taken out, for undefined). */
export function withValue(json: Json, path: readonly (string | number)[], value: unknown): Json {
  const copy = structuredClone(json);
  let inner = copy as Record<string | number, unknown>;
  for (const step of path.slice(0, -1)) inner = inner[step] as Record<string | number, unknown>;
  const last = path.at(-1) ?? '';
  if (value === undefined) delete inner[last];
  else inner[last] = value;
  return copy;
}

export function withProperty(json: Json, name: string, value: unknown): Json {
  return withValue(json, ['properties', name], value);
}

export function valueOf<T>(result: Result<T, readonly Issue[]>): T {
  if (!result.ok) throw new Error(result.error.map(({ path, problem }) => `${path}: ${problem}`).join('\n'));
  return result.value;
}

export function issuesOf(result: Result<unknown, readonly Issue[]>): readonly Issue[] {
  return result.ok ? [] : result.error;
}

export function pathsOf(result: Result<unknown, readonly Issue[]>): string[] {
  return issuesOf(result).map(({ path }) => path);
}
