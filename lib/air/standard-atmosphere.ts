import { GAS_DRY_JKGK, GRAVITY_MPS2 } from '../units.ts';

/**
 * The standard atmosphere's troposphere, ISO 2533:1975 (identical below 11 km with U.S. Standard Atmosphere 1976).
 * Its heights are geopotential; map and site heights are geometric: convert with geopotentialM. Valid -2 to 11 km.
 */
const SEA_LEVEL_K = 288.15;
const SEA_LEVEL_PA = 101_325;
const LAPSE_KPM = 0.0065;
/** Effective earth radius of the geopotential definition, m (ISO 2533:1975, 2.3). */
const EARTH_RADIUS_M = 6_356_766;
/** g0 / (lapse R), 5.2558797. */
const PRESSURE_EXPONENT = GRAVITY_MPS2 / (LAPSE_KPM * GAS_DRY_JKGK);
const SEA_LEVEL_KGM3 = SEA_LEVEL_PA / (GAS_DRY_JKGK * SEA_LEVEL_K);

/** Geopotential height of a geometric height, H = r z / (r + z) (ISO 2533:1975, eq. 8). */
export function geopotentialM(geometricM: number): number {
  return (EARTH_RADIUS_M * geometricM) / (EARTH_RADIUS_M + geometricM);
}

export function geometricM(geopotentialHeightM: number): number {
  return (EARTH_RADIUS_M * geopotentialHeightM) / (EARTH_RADIUS_M - geopotentialHeightM);
}

/** Temperature, pressure and density at a geopotential height, K, Pa, kg/m3. */
export function standardAir(heightM: number): { readonly temperatureK: number; readonly pressurePa: number; readonly densityKgm3: number } {
  const temperatureK = SEA_LEVEL_K - LAPSE_KPM * heightM;
  const pressurePa = SEA_LEVEL_PA * (temperatureK / SEA_LEVEL_K) ** PRESSURE_EXPONENT;
  return { temperatureK, pressurePa, densityKgm3: pressurePa / (GAS_DRY_JKGK * temperatureK) };
}

/** Geopotential height at which the standard atmosphere has this pressure (pressure altitude). */
export function pressureAltitudeM(pressurePa: number): number {
  return (SEA_LEVEL_K / LAPSE_KPM) * (1 - (pressurePa / SEA_LEVEL_PA) ** (1 / PRESSURE_EXPONENT));
}

/** Geopotential height at which the standard atmosphere has this density. */
export function densityAltitudeM(densityKgm3: number): number {
  return (SEA_LEVEL_K / LAPSE_KPM) * (1 - (densityKgm3 / SEA_LEVEL_KGM3) ** (1 / (PRESSURE_EXPONENT - 1)));
}
