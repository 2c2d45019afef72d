/**
 * Temperature, humidity and pressure over an invented ground: free air with one lapse rate, a dry-adiabatic mixed layer
 * below it by day, a ground inversion by night. Pressure levels by the same lapse rate, so that heights and pressures
 * agree with one another: z = (T0/L) (1 - (p/p0)^(R L/g)).
 */
import { saturationPressureHpa } from '../../air/moist-air.ts';
import { GAS_DRY_JKGK, GRAVITY_MPS2, kelvin } from '../../units.ts';
import { HOUR_MS } from '../../time.ts';
import { ease } from './date-share.ts';
import type { InventedRegion } from './scenario.ts';
import { heatWm2 } from './sun-day.ts';
import type { Heating } from './weather.ts';

export interface AirParts {
  readonly region: InventedRegion;
  readonly heat: Heating;
  readonly latDeg: number;
  readonly groundM: number;
}

const DRY_ADIABATIC_KPM = 0.00976;
const INVERSION_M = 250;
const INVERSION_K = 3;
/** Heat that wears the night's inversion away, K m. */
const INVERSION_HEAT_KM = 250;
/** Cooling behind the front, K. */
const COLD_AIR_K = 2;

/** Free air reduced to sea level, °C: a cosine over the year, warmest on 24 July in the north, 22 January in the south. */
function seaLevelC({ region, heat, latDeg }: AirParts, atMs: number): number {
  const date = heat.day.date;
  const dayOfYear = (Date.parse(`${date}T00:00:00Z`) - Date.parse(`${date.slice(0, 4)}-01-01T00:00:00Z`)) / (24 * HOUR_MS);
  const warmest = latDeg >= 0 ? 204 : 21;
  const season = region.seasonalSwingK * Math.cos((2 * Math.PI * (dayOfYear - warmest)) / 365.25);
  return region.meanTemperatureC + season + 1.5 * heat.swing.temperature - COLD_AIR_K * heat.front.behind(atMs);
}

function freeAirC(parts: AirParts, altitudeM: number, atMs: number): number {
  return seaLevelC(parts, atMs) - (parts.region.lapseKpkm * altitudeM) / 1000;
}

/** Air temperature at a height above sea level. */
export function temperatureC(parts: AirParts, altitudeM: number, atMs: number): number {
  const { heat, groundM } = parts;
  const topM = groundM + heat.mixedLayerM(atMs);
  const layered = altitudeM < topM ? freeAirC(parts, topM, atMs) + DRY_ADIABATIC_KPM * (topM - Math.max(groundM, altitudeM)) : freeAirC(parts, altitudeM, atMs);
  const inversionK = INVERSION_K * inversionShare(heat, atMs) * (1 - heat.cloudShare(atMs)) * (1 - ease(altitudeM - groundM, 0, INVERSION_M));
  return layered - inversionK;
}

/** The ground inversion builds from sunset to sunrise, half of it by midnight; then the sun's heat wears it away. */
function inversionShare({ day, heatSinceRiseKm }: Heating, atMs: number): number {
  if (atMs < day.riseMs) return 0.5 + 0.5 * ease(atMs, day.fromMs, day.riseMs);
  return Math.max(Math.exp(-heatSinceRiseKm(atMs) / INVERSION_HEAT_KM), 0.5 * ease(atMs, day.setMs, day.toMs));
}

/** At 2 m: the ground's own excess over the mixed layer by day. */
export function temperature2mC(parts: AirParts, atMs: number): number {
  return temperatureC(parts, parts.groundM, atMs) + (0.5 * heatWm2(parts.heat.shortwaveWm2(atMs))) / 100;
}

/** Dew point at a height: even in moisture through the mixed layer, dry above it, moist behind the front; saturated in fog. */
export function dewPointC(parts: AirParts, altitudeM: number, atMs: number): number {
  const { region, heat, groundM } = parts;
  const aboveM = Math.max(0, altitudeM - groundM);
  const hereC = altitudeM <= groundM ? temperature2mC(parts, atMs) : temperatureC(parts, altitudeM, atMs);
  if (atMs < heat.fogUntilMs && aboveM < 100) return hereC;
  const dawnC = temperatureC(parts, groundM, heat.day.riseMs) - region.dryAtDawnK;
  const mixedC = dawnC - (1.8 * aboveM) / 1000 - (0.8 * heat.mixedLayerM(atMs)) / 1000;
  const fairC = aboveM > heat.mixedLayerM(atMs) ? Math.min(mixedC, hereC - 9) : Math.min(mixedC, hereC - 1.5);
  return fairC + (hereC - 1 - fairC) * heat.front.behind(atMs);
}

export function relativeHumidityPct(airC: number, dewC: number): number {
  return Math.min(100, Math.max(2, (100 * saturationPressureHpa(dewC)) / saturationPressureHpa(airC)));
}

/** Sea-level pressure: a half-daily tide of 0.6 hPa, a fall ahead of the front and a rise behind it. */
export function seaLevelPressureHpa({ region, heat }: AirParts, atMs: number): number {
  const tide = 0.6 * Math.cos((4 * Math.PI * (atMs - heat.day.fromMs - 10 * HOUR_MS)) / (24 * HOUR_MS));
  const fall = (region.front?.fallHpa ?? 0) * (heat.front.ahead(atMs) - 0.6 * heat.front.behind(atMs));
  return region.seaLevelPressureHpa + 3 * heat.swing.pressure + tide - fall;
}

export function pressureHpa(parts: AirParts, altitudeM: number, atMs: number): number {
  const zeroK = kelvin(seaLevelC(parts, atMs));
  const lapseKpm = parts.region.lapseKpkm / 1000;
  return seaLevelPressureHpa(parts, atMs) * (1 - (lapseKpm * altitudeM) / zeroK) ** (GRAVITY_MPS2 / (GAS_DRY_JKGK * lapseKpm));
}

export function altitudeOfM(parts: AirParts, levelHpa: number, atMs: number): number {
  const zeroK = kelvin(seaLevelC(parts, atMs));
  const lapseKpm = parts.region.lapseKpkm / 1000;
  return (zeroK / lapseKpm) * (1 - (levelHpa / seaLevelPressureHpa(parts, atMs)) ** ((GAS_DRY_JKGK * lapseKpm) / GRAVITY_MPS2));
}
