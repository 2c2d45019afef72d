/** Coordinates as GeoJSON writes them (RFC 7946: longitude first, then latitude, then metres), and what they may be. */
import * as z from 'zod/mini';
import type { Issue } from '../result.ts';
import { issue } from './check.ts';
import { number } from './fields.ts';
import type { Path } from './path.ts';
import { numberAt, valueAt } from './path.ts';

const lonRange = { min: -180, max: 180, unit: '° longitude' };
const latRange = { min: -90, max: 90, unit: '° latitude' };
export const elevationRange = { min: -500, max: 9000, unit: 'm above sea level' };

/** Nearer to 0, 0 than this is no place but a field that nobody filled. */
const NULL_ISLAND_DEG = 0.001;

type Coordinate = z.ZodMiniNumber<number>;
type Position = z.ZodMiniTuple<readonly [Coordinate, Coordinate, Coordinate], null>;
type PositionMaybeHigh = z.ZodMiniTuple<readonly [Coordinate, Coordinate, z.ZodMiniOptional<Coordinate>], null>;

export function position(): Position {
  const error = (): string => '[longitude, latitude, metres above sea level], decimal degrees';
  return z.tuple([number(lonRange), number(latRange), number(elevationRange)], { error });
}

export function positionMaybeHigh(): PositionMaybeHigh {
  const error = (): string => '[longitude, latitude] or [longitude, latitude, metres above sea level], decimal degrees';
  return z.tuple([number(lonRange), number(latRange), z.optional(number(elevationRange))], { error });
}

/** The issue of coordinates that lie at 0, 0, none otherwise. `at` leads to the list of coordinates. */
export function nullIslandIssues(root: unknown, at: Path, base: Path): Issue[] {
  const lonDeg = numberAt(root, [...at, 0]);
  const latDeg = numberAt(root, [...at, 1]);
  if (lonDeg === undefined || latDeg === undefined) return [];
  if (Math.abs(lonDeg) >= NULL_ISLAND_DEG || Math.abs(latDeg) >= NULL_ISLAND_DEG) return [];
  return [issue([...base, ...at], valueAt(root, at), { problem: 'these coordinates are 0, 0', allowed: 'the place itself, longitude first' })];
}
