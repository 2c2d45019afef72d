// flight-model.md section 6: the margins that a launch and a strip share.
import { cloudBaseAboveM } from './air.ts';
import type { Column } from './air.ts';
import { UNKNOWN, degToRad, known, read } from './numbers.ts';
import type { Conditions, Limits, Sector, Site } from './types.ts';
import type { Finding } from './verdict.ts';
import { daylightSpareMin, legalDay } from './sun.ts';

export type Hourly = { hour: Conditions; next: (Conditions | undefined)[]; site: Site; limits: Limits };

// A limit that is left out makes no finding: the caller lists it as not judged.
export type Found = Finding | 'not judged';

export function atMost(id: string, unit: string, limit: number | undefined, demand: number): Found {
  if (limit === undefined) return 'not judged';
  return { id, unit, limit, demand, spare: limit - demand };
}

export function atLeast(id: string, unit: string, limit: number | undefined, demand: number | null): Found {
  if (limit === undefined) return 'not judged';
  return { id, unit, limit, demand, spare: demand === null ? null : demand - limit };
}

// Log law over a roughness, from a speed at one height to another: U2 = U1 ln(z2/z0)/ln(z1/z0), nothing at or below z0.
export function logLaw(speedMps: number, fromHeightM: number, toHeightM: number, roughnessM: number): number {
  if (toHeightM <= roughnessM) return 0;
  return (speedMps * Math.log(toHeightM / roughnessM)) / Math.log(fromHeightM / roughnessM);
}

// WMO code table 4677: thunder now (17, 95 to 99) or in the hour before (29, 91 to 94).
const THUNDER = [17, 29, 91, 92, 93, 94, 95, 96, 97, 98, 99];

// "maxCapeJkg - CAPE; and always, whatever the sheet: a thunderstorm code in this hour or the next two is beyond"
function storm(hourly: Hourly): Finding {
  const limit = hourly.limits.maxCapeJkg ?? null;
  const capeJkg = read.capeJkg(hourly.hour.capeJkg);
  const base = { id: 'storm', unit: 'J/kg', limit, demand: capeJkg };
  const codes = [hourly.hour, ...hourly.next].map((hour) => read.weatherCode(hour?.weatherCode));
  if (codes.some((code) => THUNDER.includes(code))) return { ...base, spare: null };
  const capeSpare = limit === null ? Infinity : limit - capeJkg;
  if (capeSpare < 0) return { ...base, spare: capeSpare };
  if (codes.some((code) => !known(code))) return { ...base, spare: UNKNOWN }; // an hour nobody gave is not an hour without thunder
  return { ...base, spare: capeSpare };
}

// "absolute difference of the site's two reference sea-level pressures (foehn); reference points above 800 m are refused"
function pressureStep(hourly: Hourly): Found {
  const points = hourly.site.properties.pressureStep;
  if (points === undefined) return 'not judged';
  let demand = Math.abs(
    read.seaLevelPressureHpa(hourly.hour.referencePressureHpa?.a) - read.seaLevelPressureHpa(hourly.hour.referencePressureHpa?.b),
  );
  for (const point of [points.a, points.b]) {
    if ((point.coordinates[2] ?? 0) > 800) demand = UNKNOWN;
  }
  return atMost('pressureStep', 'hPa', hourly.limits.maxPressureStepHpa, demand);
}

function daylight(hourly: Hourly): Finding {
  const epochMs = Date.parse(hourly.hour.validAt);
  const { timeZone, daylight: rule } = hourly.site.properties;
  const spare = daylightSpareMin(epochMs, legalDay(epochMs, hourly.site.geometry.coordinates, timeZone, rule));
  return { id: 'daylight', unit: 'min', limit: null, demand: spare, spare };
}

export function weatherFindings(hourly: Hourly): [string, Found][] {
  const { hour, limits } = hourly;
  return [
    ['storm', storm(hourly)],
    ['rain', atMost('rain', 'mm', limits.maxRainMm, read.precipitationMm(hour.precipitationMm))],
    ['rainChance', atMost('rainChance', '%', limits.maxRainChancePct, read.percent(hour.precipitationProbabilityPct))],
    ['visibility', atLeast('visibility', 'm', limits.minVisibilityM, read.visibilityM(hour.visibilityM))],
    ['daylight', daylight(hourly)],
    ['pressureStep', pressureStep(hourly)],
  ];
}

export function cloudBaseFinding(limits: Limits, column: Column, fromM: number, landingM: number, countedFromM: number): Found {
  return atLeast('cloudBase', 'm', limits.minCloudBaseM, cloudBaseAboveM(column, fromM, landingM) - countedFromM);
}

// "per site sector that the largest kept mean falls in: its maxMps - that mean". From one edge clockwise to the other, both included; a
// mean without a direction (calm) falls in none. Of several sectors the one with the least spare. No sector touched: no margin.
export function sectorFinding(sectors: Sector[] | undefined, meanMps: number, fromDeg: number, calm: boolean): Found {
  if (sectors === undefined || sectors.length === 0) return 'not judged';
  if (calm) return 'not judged';
  if (!known(meanMps) || !known(fromDeg)) return { id: 'sector', unit: 'm/s', limit: null, demand: null, spare: UNKNOWN };
  let result: Found = 'not judged';
  for (const sector of sectors) {
    const width = (sector.toDeg - sector.fromDeg + 720) % 360;
    const inside = (fromDeg - sector.fromDeg + 720) % 360 <= width;
    if (!inside) continue;
    const spare = sector.maxMps - meanMps;
    if (result === 'not judged' || spare < (result.spare as number)) {
      result = { id: 'sector', unit: 'm/s', limit: sector.maxMps, demand: meanMps, spare };
    }
  }
  return result;
}

// "trim at the landing's density - [U(10) - U(2)] - half the increment - stall - minLandingReserveMps; U by the log law with the
// landing's roughnessM"
export function landingGradientFinding(inputs: {
  limits: Limits;
  trimMps: number;
  stallMps: number;
  speed10mMps: number;
  incrementMps: number;
  roughnessM: number;
}): Found {
  const U10 = inputs.speed10mMps;
  const U2 = logLaw(U10, 10, 2, inputs.roughnessM);
  const left = inputs.trimMps - (U10 - U2) - inputs.incrementMps / 2 - inputs.stallMps;
  return atLeast('landingGradient', 'm/s', inputs.limits.minLandingReserveMps, left);
}

// `slope` = slopeDeg - max(atan(1/glideAtTrim) + slopeBufferDeg, minSlopeDeg); "judged when either slope field is there"
export function slopeFinding(limits: Limits, slopeDeg: number, glideAtTrim: number): Found {
  if (limits.slopeBufferDeg === undefined && limits.minSlopeDeg === undefined) return 'not judged';
  const glideDeg = (Math.atan(1 / glideAtTrim) * 180) / Math.PI;
  const needed = Math.max(glideDeg + (limits.slopeBufferDeg ?? 0), limits.minSlopeDeg ?? 0);
  return { id: 'slope', unit: '°', limit: needed, demand: slopeDeg, spare: slopeDeg - needed };
}

export function hillAngleRad(slopeDeg: number, heightM: number, halfLengthM: number): number {
  return Math.min(degToRad(slopeDeg), Math.atan(heightM / (2 * halfLengthM)));
}
