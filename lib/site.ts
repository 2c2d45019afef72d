/**
 * The places: a launch with its landing, or a tow strip. Angles are degrees clockwise from true north, heights metres
 * above mean sea level. Built only by lib/config, which checks ranges; everything here may be relied on to be finite.
 */
export interface PlaceM {
  readonly lonDeg: number;
  readonly latDeg: number;
  readonly elevationM: number;
}

export type HillForm = 'ridge' | 'escarpment' | 'cone' | 'flat';

export interface Hill {
  readonly form: HillForm;
  readonly heightM: number;
  /** Upwind distance from the crest to half the height. */
  readonly halfLengthM: number;
}

export interface Landing extends PlaceM {
  /** Aerodynamic roughness length of the landing's surface. */
  readonly roughnessM: number;
}

export interface DaylightRule {
  readonly rule: 'sunrise-sunset' | 'civil-twilight';
  /** Minutes before the morning event from which launching is legal. */
  readonly beforeMin: number;
  /** Minutes after the evening event until which it is. */
  readonly afterMin: number;
}

/** Directions (wind from, clockwise from fromDeg to toDeg, may wrap through north) with their own largest mean wind. */
export interface Sector {
  readonly fromDeg: number;
  readonly toDeg: number;
  readonly maxMps: number;
  readonly why: string;
}

/** A wind the site is known for, in local hours; shown as a caution. */
export interface LocalWind {
  readonly fromHour: number;
  readonly toHour: number;
  readonly speedMps: number;
  readonly fromDeg: number;
}

export interface ReferencePoint {
  readonly name: string;
  readonly lonDeg: number;
  readonly latDeg: number;
}

interface SiteCommon extends PlaceM {
  readonly id: string;
  readonly name: string;
  readonly timeZone: string;
  readonly daylight: DaylightRule;
  readonly sectors: readonly Sector[];
  readonly localWind: readonly LocalWind[];
  readonly pressureStep: { readonly a: ReferencePoint; readonly b: ReferencePoint } | null;
  readonly localRules: string | null;
  readonly notes: readonly string[];
  /** Degrees added to the compass headings at import (0 when they were given as true). */
  readonly declinationDeg: number;
}

export interface LaunchSite extends SiteCommon {
  readonly kind: 'launch';
  readonly facingDeg: number;
  readonly slopeDeg: number;
  readonly hill: Hill;
  /** The high ground behind the launch. */
  readonly summitElevationM: number | null;
  readonly landing: Landing;
  /** Launch to landing: true track and distance over the ground. */
  readonly trackDeg: number;
  readonly distanceM: number;
}

export interface StripSite extends SiteCommon {
  readonly kind: 'strip';
  readonly headingDeg: number;
  readonly usableBothWays: boolean;
  readonly lineLengthM: number;
  readonly roughnessM: number;
  /** Line tension over all-up weight. */
  readonly lineTensionRatio: number;
  /** Line angle below the horizon at the wing at which the pilot releases. */
  readonly releaseAngleDeg: number;
  /** Free width beside the line, where known. */
  readonly lineClearM: number | null;
}

export type Site = LaunchSite | StripSite;
