/** When a caution is said. Starting values live in config/thresholds.json: common practice, no source. */
export interface CautionThresholds {
  /** CAPE from which a day is said to be able to make storms. */
  readonly stormCapeJkg: number;
  /** Thermal strength said as strong for this sheet, where three quarters of the sheet's own limit is not less. */
  readonly thermalMps: number;
  /** Tail or cross part of the wind up to 300 m over the launch. */
  readonly windAloftMps: number;
  /** Wind lost between 10 m and 2 m at the landing. */
  readonly landingGradientMps: number;
  /** Rise of the mean wind within two hours after a window. */
  readonly windRisingMps: number;
  /** Turn of the wind within two hours after a window. */
  readonly windTurningDeg: number;
  /** Fall of sea-level pressure within three hours. */
  readonly frontFallHpa: number;
  /** Turn of the wind within two hours. */
  readonly frontVeerDeg: number;
  readonly foehnStepHpa: number;
  /** Cloud base above the launch, and visibility, from which cloud or fog is said to be low. */
  readonly lowCloudM: number;
  readonly fogVisibilityM: number;
  /** Precipitation in the two hours around a window. */
  readonly rainNearMm: number;
  /** Spread of temperature and dew point at dawn below which slope and wing are wet with dew. */
  readonly dewSpreadK: number;
  /** Density altitude over the height of the launch. */
  readonly thinAirM: number;
  readonly lightWindMps: number;
  /** Spread of the mean wind between sources. */
  readonly disagreeMps: number;
  readonly oldForecastH: number;
  readonly windChillC: number;
  /** Height of the sun over the horizon, and its angle off the launch axis, within which it dazzles. */
  readonly lowSunDeg: number;
  readonly lowSunOffAxisDeg: number;
  /** Minutes before the end of the legal day from which a window runs into the last light. */
  readonly lastLightMin: number;
}
