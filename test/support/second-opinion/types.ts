// The JSON of data-shapes.md, as far as the second opinion reads it, and what it answers. All heights m AMSL unless the name says otherwise.

export type Wind = { speedMps?: number | null; fromDeg?: number | null };
export type NearGround = Wind & { heightAglM?: number | null };
export type LevelRow = Wind & {
  pressureHpa?: number | null;
  altitudeM?: number | null;
  temperatureC?: number | null;
  relativeHumidityPct?: number | null;
};

export type Conditions = {
  validAt: string;
  gridElevationM: number;
  wind10m?: Wind | null;
  gustMps?: number | null;
  nearGround?: NearGround[] | null;
  levels?: LevelRow[] | null;
  temperature2mC?: number | null;
  dewPoint2mC?: number | null;
  surfacePressureHpa?: number | null;
  seaLevelPressureHpa?: number | null;
  referencePressureHpa?: { a?: number | null; b?: number | null } | null;
  mixedLayerM?: number | null;
  shortwaveWm2?: number | null;
  sensibleHeatWm2?: number | null;
  capeJkg?: number | null;
  precipitationMm?: number | null;
  precipitationProbabilityPct?: number | null;
  weatherCode?: number | null;
  visibilityM?: number | null;
  lowCloudPct?: number | null;
};

export type HillForm = 'ridge' | 'escarpment' | 'cone' | 'flat';
export type Hill = { form: HillForm; heightM: number; halfLengthM: number };
export type Sector = { fromDeg: number; toDeg: number; maxMps: number; why: string };
export type Daylight = { rule: 'sunrise-sunset' | 'civil-twilight'; beforeMin: number; afterMin: number };
export type ReferencePoint = { name: string; coordinates: number[] };

type Common = {
  name: string;
  timeZone: string;
  daylight: Daylight;
  sectors?: Sector[];
  pressureStep?: { a: ReferencePoint; b: ReferencePoint };
  localRules?: string;
  notes?: string[];
};
export type LaunchProperties = Common & {
  kind: 'launch';
  facingDeg: number;
  headingReference: 'true';
  slopeDeg: number;
  hill: Hill;
  summitElevationM?: number;
  landing: { coordinates: [number, number, number]; roughnessM: number };
  trackDeg?: number;
  distanceM?: number;
};
export type StripProperties = Common & {
  kind: 'strip';
  headingDeg: number;
  headingReference: 'true';
  usableBothWays: boolean;
  lineLengthM: number;
  roughnessM: number;
  lineTensionRatio?: number;
  releaseAngleDeg?: number;
  lineClearM?: number;
};
export type Feature<P> = {
  type: 'Feature';
  id: string;
  geometry: { type: 'Point'; coordinates: [number, number, number] };
  properties: P;
};
export type LaunchSite = Feature<LaunchProperties>;
export type StripSite = Feature<StripProperties>;
export type Site = LaunchSite | StripSite;

export type WingClass = 'EN A' | 'EN B' | 'EN C' | 'EN D' | 'tandem';
export type Wing = {
  class?: WingClass;
  trimMps?: number;
  glideAtTrim?: number;
  minSinkMps?: number;
  stallMps?: number;
  topMps?: number;
  referenceMassKg?: number;
  allUpMassKg?: number;
};

export type Limits = Record<string, number>;
export type Sheet = { id: string; kind: 'launch' | 'strip'; limits: Limits; closeBands?: Record<string, number> };

export type Verdict = 'within' | 'close' | 'beyond' | 'unknown';
export type Margin = {
  id: string;
  spare: number | null;
  limit: number | null;
  demand: number | null;
  unit: string;
  status: Verdict;
};
export type HourAnswer = {
  validAt: string;
  verdict: Verdict;
  causes: string[];
  margins: Margin[];
  advice: { speedToFlyMps: number | null; headingDeg?: number };
};
export type WindowAnswer = { from: string; to: string; lastLaunch: string | null; verdict: 'within' | 'close' };
export type Answer = { hours: HourAnswer[]; windows: WindowAnswer[]; notJudged: string[] };
