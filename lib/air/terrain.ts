import type { Hill, HillForm } from '../site.ts';

/**
 * Speed-up over a hill, Taylor & Lee (1984) Climatological Bulletin 18(2), original guidelines:
 * dS = B (h/L) exp(-A z/L) at z above the crest, h the height, L the upwind distance to half height. Constants from
 * memory of their table 1; the abstract gives the validity: near-neutral wind above about 6 m/s, L to about 1 km,
 * slopes to about 0.3. The cap L >= 2h is that of ASCE 7 (H/Lh at most 0.5).
 */
const SPEED_UP: Readonly<Record<HillForm, { readonly b: number; readonly a: number }>> = {
  ridge: { b: 2.0, a: 3.0 },
  escarpment: { b: 0.8, a: 2.5 },
  cone: { b: 1.6, a: 4.0 },
  flat: { b: 0, a: 0 },
};

/** Height above the crest at which the launch wind is taken, m: that of the forecast's 10 m wind. */
const LAUNCH_WIND_HEIGHT_M = 10;

/**
 * Fractional speed-up dS at 10 m over the launch. The model already carries part of the hill: the height that counts
 * is what the launch stands above the model's ground, but at least a third of the hill and at most all of it.
 */
export function speedUp(hill: Hill, launchAboveModelGroundM: number): number {
  const { a, b } = SPEED_UP[hill.form];
  const height = Math.min(hill.heightM, Math.max(hill.heightM / 3, launchAboveModelGroundM));
  if (b === 0 || height <= 0) return 0;
  const length = Math.max(hill.halfLengthM, 2 * height);
  return b * (height / length) * Math.exp((-a * LAUNCH_WIND_HEIGHT_M) / length);
}

/** The crest formula at any height above it, for comparison with measured hills. */
export function speedUpAt(hill: Hill, heightAboveCrestM: number): number {
  const { a, b } = SPEED_UP[hill.form];
  const length = Math.max(hill.halfLengthM, 2 * hill.heightM);
  return b * (hill.heightM / length) * Math.exp((-a * heightAboveCrestM) / length);
}

/** How far the launch may lie above the model's ground for its 10 m wind to say anything about the launch, m. */
export function groundReachM(hill: Hill): number {
  return Math.max(150, Math.min(hill.heightM, 400));
}
