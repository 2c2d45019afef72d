// The test server's own weather: a fair day with a mild westerly, the same for a place and an hour every time. It is a
// handful of sines on the standard atmosphere, enough to be plausible everywhere and quiet enough for a morning flight.

export interface Spot {
  readonly latDeg: number;
  readonly lonDeg: number;
  /** The model's ground. */
  readonly groundM: number;
}

export interface LevelAir {
  readonly windMps: number;
  readonly fromDeg: number;
  readonly temperatureC: number;
  readonly humidityPct: number;
}

export interface Weather extends LevelAir {
  readonly gustMps: number;
  readonly dewPointC: number;
  readonly surfacePressureHpa: number;
  readonly seaLevelPressureHpa: number;
  readonly capeJkg: number;
  readonly precipitationMm: number;
  readonly precipitationProbabilityPct: number;
  readonly weatherCode: number;
  readonly visibilityM: number;
  readonly lowCloudPct: number;
  readonly shortwaveWm2: number;
  readonly mixedLayerM: number;
}

const HOUR_MS = 3_600_000;
const sine = (turns: number) => Math.sin(turns * 2 * Math.PI);

/** 0 at midnight by the sun, 1 at noon. */
function dayShare(spot: Spot, atMs: number): number {
  return (1 - Math.cos(((atMs / HOUR_MS + spot.lonDeg / 15) / 24) * 2 * Math.PI)) / 2;
}

/** A slow swing of its own for every place, so that no hour repeats another to the digit. */
function swing(spot: Spot, atMs: number, periodHours: number): number {
  return sine(atMs / HOUR_MS / periodHours + spot.latDeg * 0.37 + spot.lonDeg * 0.11);
}

function seaLevelHpa(spot: Spot, atMs: number): number {
  return 1017 + 1.5 * swing(spot, atMs, 61);
}

/** ISO 2533, troposphere. */
function pressureHpa(altitudeM: number): number {
  return 1013.25 * (1 - (0.0065 * altitudeM) / 288.15) ** 5.25588;
}

export function altitudeOfM(levelHpa: number, spot: Spot, atMs: number): number {
  return (288.15 / 0.0065) * (1 - (levelHpa / 1013.25) ** 0.190263) + 8.3 * (seaLevelHpa(spot, atMs) - 1013.25);
}

/** Free air at a height above mean sea level. */
export function airAt(altitudeM: number, spot: Spot, atMs: number): LevelAir {
  const aboveM = Math.max(0, altitudeM - spot.groundM);
  return {
    windMps: 2.4 + 0.9 * swing(spot, atMs, 17) + 0.0007 * Math.min(aboveM, 4000),
    fromDeg: (610 + 8 * swing(spot, atMs, 23) + 0.004 * aboveM) % 360,
    temperatureC: 17 - 0.0065 * altitudeM + (aboveM < 1500 ? 2 : 0.5) * swing(spot, atMs, 29),
    humidityPct: 50 + 8 * swing(spot, atMs, 31) - Math.min(25, 0.004 * aboveM),
  };
}

export function weatherAt(spot: Spot, atMs: number): Weather {
  const day = dayShare(spot, atMs);
  const air = airAt(spot.groundM + 10, spot, atMs);
  const windMps = 0.7 * air.windMps + 0.8 * day;
  const temperatureC = 13 - 0.0065 * spot.groundM + 9 * day + 0.5 * swing(spot, atMs, 29);
  return {
    ...air,
    windMps,
    temperatureC,
    gustMps: windMps + 0.6 + 1.1 * day + 0.2 * swing(spot, atMs, 13),
    dewPointC: temperatureC - 5 - 6 * day,
    surfacePressureHpa: pressureHpa(spot.groundM) + seaLevelHpa(spot, atMs) - 1013.25,
    seaLevelPressureHpa: seaLevelHpa(spot, atMs),
    capeJkg: 20 + 90 * day,
    precipitationMm: 0,
    precipitationProbabilityPct: Math.round(4 + 3 * swing(spot, atMs, 37)),
    weatherCode: 1,
    visibilityM: 24_000 + 5000 * swing(spot, atMs, 41),
    lowCloudPct: Math.round(10 + 8 * swing(spot, atMs, 19)),
    shortwaveWm2: Math.max(0, 900 * (day - 0.25)),
    mixedLayerM: 120 + 1200 * day,
  };
}

/** Hills without a map: the model's ground between 300 and 900 m, smooth, the same every time. */
export function groundAtM(latDeg: number, lonDeg: number): number {
  return Math.round(600 + 200 * sine(latDeg / 1.7) + 100 * sine(lonDeg / 2.3));
}
