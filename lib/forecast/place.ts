/**
 * Whether a grid point stands for a site. The coarsest grid in use is 0.25 degrees; half the diagonal of such a cell is
 * at most 0.125 x sqrt(2) x 111.3 km = 19.7 km (at the equator), so a nearest grid point farther than 20 km is not the
 * nearest one: swapped coordinates, another site's answer, or a model that does not hold this place.
 */
import { geodesicBetween, type LonLat } from '../numeric/geodesic.ts';

export const MAX_GRID_DISTANCE_M = 20_000;

/** Model ground that moved more than this since it was last stored belongs to another grid point or another terrain. */
export const MAX_GROUND_CHANGE_M = 200;

/**
 * A model whose ground lies higher than this above the launch or strip has no air of its own down there. (Below the site
 * there is no such bound: the free air above a low model ground is real air.)
 */
export const MAX_GROUND_ABOVE_SITE_M = 1500;

/** Metres between a site and a grid point, along the ellipsoid; null unless both are places on the globe. */
export function gridDistanceM(site: LonLat, gridPoint: LonLat): number | null {
  if (isOnGlobe(site) && isOnGlobe(gridPoint)) return geodesicBetween(site, gridPoint).distanceM;
  return null;
}

function isOnGlobe({ lonDeg, latDeg }: LonLat): boolean {
  return Math.abs(latDeg) <= 90 && Math.abs(lonDeg) <= 180;
}
