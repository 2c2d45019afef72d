/**
 * The provider-neutral forecast. One Conditions is one instant on the hour, UTC, as one source sees it; see the table
 * in data terms in DEVELOPERS.md. Directions say where the wind comes from, degrees clockwise from true north. A field
 * that is absent or null is missing, and missing makes its margins unknown.
 */
export interface Wind {
  readonly speedMps: number | null;
  /** null is allowed when calm. */
  readonly fromDeg: number | null;
}

export interface NearGroundWind extends Wind {
  readonly heightAglM: number;
}

export interface Level {
  readonly pressureHpa: number;
  /** Geopotential height above mean sea level. */
  readonly altitudeM: number | null;
  readonly speedMps: number | null;
  readonly fromDeg: number | null;
  readonly temperatureC: number | null;
  readonly relativeHumidityPct: number | null;
}

export interface Conditions {
  /** ISO 8601 UTC, on the hour. */
  readonly validAt: string;
  /** The model's ground, metres above mean sea level. */
  readonly gridElevationM: number;
  readonly wind10m?: Wind | null;
  /** The larger of the two hours that touch the instant. */
  readonly gustMps?: number | null;
  readonly nearGround?: readonly NearGroundWind[] | null;
  readonly levels?: readonly Level[] | null;
  readonly temperature2mC?: number | null;
  readonly dewPoint2mC?: number | null;
  /** At the model's ground, uncorrected. */
  readonly surfacePressureHpa?: number | null;
  readonly seaLevelPressureHpa?: number | null;
  readonly referencePressureHpa?: { readonly a: number | null; readonly b: number | null } | null;
  /** Metres above the model's ground. */
  readonly mixedLayerM?: number | null;
  readonly shortwaveWm2?: number | null;
  /** Upward positive. */
  readonly sensibleHeatWm2?: number | null;
  readonly capeJkg?: number | null;
  readonly precipitationMm?: number | null;
  readonly precipitationProbabilityPct?: number | null;
  /** WMO code table 4677. */
  readonly weatherCode?: number | null;
  readonly visibilityM?: number | null;
  readonly lowCloudPct?: number | null;
}

export const CONDITION_FIELDS = [
  'wind10m', 'gustMps', 'nearGround', 'levels', 'temperature2mC', 'dewPoint2mC', 'surfacePressureHpa', 'seaLevelPressureHpa',
  'referencePressureHpa', 'mixedLayerM', 'shortwaveWm2', 'sensibleHeatWm2', 'capeJkg', 'precipitationMm',
  'precipitationProbabilityPct', 'weatherCode', 'visibilityM', 'lowCloudPct',
] as const;

export type ConditionField = (typeof CONDITION_FIELDS)[number];

/** One run of one source. A deterministic run has one member, an ensemble many; every member has the same instants. */
export interface Forecast {
  /** Stable id of the source, `open-meteo:icon_d2`. */
  readonly source: string;
  readonly kind: 'deterministic' | 'ensemble';
  /** When the model run was initialised, ISO 8601 UTC; null when the service gives none. */
  readonly runAt: string | null;
  readonly fetchedAt: string;
  /** The fields this source can give at all. A declared field that is missing is unknown; an undeclared one has no vote. */
  readonly declares: readonly ConditionField[];
  readonly members: readonly (readonly Conditions[])[];
  /** How far apart the model's own steps are, where that is more than an hour: hours between them are interpolated by the service. */
  readonly stepHours?: number;
  /** Distance from the site to the grid point that answered, where the service says it. */
  readonly gridDistanceM: number | null;
  /** Invented weather: set by the demo source only, and never removed. */
  readonly demo: boolean;
  /** Set when an operator trusts this source without a run time; adds a caution. */
  readonly trustedWithoutRunTime: boolean;
}
