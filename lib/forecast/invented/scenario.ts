/**
 * The parameters of the invented weather (config/demo.json). Everything the demo shows comes from these numbers, the sun
 * of the site and the date; nothing is drawn by chance. All of it is invented and is said to be, everywhere.
 */
export interface InventedWind {
  readonly speedMps: number;
  readonly fromDeg: number;
}

/** The weather over one region, the same every day but for small steps by date. */
export interface InventedRegion {
  readonly id: string;
  readonly seaLevelPressureHpa: number;
  /** Free air reduced to sea level: mean of the year, and half the difference between its warmest and coldest day. */
  readonly meanTemperatureC: number;
  readonly seasonalSwingK: number;
  /** Fall of temperature with height in the free air. */
  readonly lapseKpkm: number;
  /** Temperature at sunrise above the dew point. */
  readonly dryAtDawnK: number;
  /** Deepest mixed layer, under an inversion. */
  readonly mixedLayerTopM: number;
  /** Cover before the front, 0 to 1. */
  readonly cloudShare: number;
  /** Wind of the free air, 2500 m above the ground, in the morning. */
  readonly freeWind: InventedWind;
  /** Sea-level pressure at reference point a less that at b. */
  readonly pressureStepHpa: number;
  readonly front: InventedFront | null;
}

export interface InventedFront {
  /** When it passes, as a share of the time from sunrise to sunset. */
  readonly dayShare: number;
  readonly wind: InventedWind;
  readonly rainMm: number;
  readonly fallHpa: number;
  /** Temperature at 2 m from which it comes with thunder. */
  readonly thunderFromC: number;
}

export interface InventedSite {
  readonly site: string;
  /** Its data is withheld: "cannot say" is part of what the demo shows. */
  readonly withheld: boolean;
  readonly region: string;
  readonly fineGroundM: number;
  readonly coarseGroundM: number;
  /** Valley, slope or sea breeze at its strongest, at 10 m; it scales with the sun. */
  readonly breeze: InventedWind;
  /** The same at night, when the air drains the other way. */
  readonly drainageMps: number;
  readonly roughnessM: number;
  /** Fog from the night until this long after sunrise, 0 for none. */
  readonly fogHours: number;
}

/** One invented source as a twist of the same weather. */
export interface InventedSource {
  readonly id: string;
  readonly kind: 'deterministic' | 'ensemble';
  readonly grid: 'fine' | 'coarse';
  readonly members: number;
  readonly breezeFactor: number;
  readonly windFactor: number;
  readonly frontShiftHours: number;
  readonly levelsHpa: readonly number[];
  readonly nearGroundM: readonly number[];
  /** Of an ensemble: spread of speeds as a share, and of directions, one standard deviation. */
  readonly speedSpread: number;
  readonly turnSpreadDeg: number;
  /** Members whose front comes an hour early, and as many an hour late. */
  readonly shiftedMembers: number;
}

export interface Scenario {
  readonly regions: readonly InventedRegion[];
  readonly sites: readonly InventedSite[];
  readonly sources: readonly InventedSource[];
}
