/**
 * Magnetic declination by the World Magnetic Model (NOAA/NCEI and BGS): degrees to add to a compass heading to get a
 * true one, east positive. The only file that knows npm `geomagnetism`, and of the coefficients that it carries only those
 * of 2025: the older ones would cost a worker 2 kB for headings that nobody reads any more. Outside their years there is no
 * number, rather than one that has drifted. Uncertainty of a WMM2025 declination:
 * sqrt(0.26² + (5417/H)²) degrees, H the horizontal intensity in nT; a compass on a hill is worse.
 */
// oxlint-disable-next-line typescript/triple-slash-reference -- types of a file that the package does not type, for every project that reads this one
/// <reference path="./geomagnetism-model.d.ts" />
import wmm2025 from 'geomagnetism/data/wmm-2025.json' with { type: 'json' };
import Model from 'geomagnetism/lib/model.js';
import { failure, success, type Result } from '../result.ts';

export interface DeclinationQuery {
  readonly lonDeg: number;
  readonly latDeg: number;
  /** Above the ellipsoid; heights above sea level serve (the difference moves declination by less than 0.001°). */
  readonly elevationM: number;
  /** The instant of the reading, epoch ms UTC: the field drifts by up to half a degree a year. */
  readonly atMs: number;
}

/** Why there is none: the years that the model covers, as words. */
export interface NoDeclination {
  readonly reason: string;
}

/** Degrees east of true north; between -180 and 180. */
export function declinationDeg(query: DeclinationQuery): Result<number, NoDeclination> {
  if (!Number.isFinite(query.atMs)) return failure({ reason: 'no date was given for the magnetic model' });
  try {
    const model = new Model(wmm2025).getTimedModel(new Date(query.atMs));
    return success(model.point([query.latDeg, query.lonDeg, query.elevationM / 1000]).decl);
  } catch {
    const year = new Date(query.atMs).toISOString().slice(0, 10);
    return failure({ reason: `the magnetic model covers 2024-11-13 to 2029-11-13, not ${year}` });
  }
}
