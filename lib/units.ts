/**
 * Units and the constants of nature. SI inside: m, s, m/s, kg, Pa, K. Exact factors by definition: the international
 * foot and mile (1959), the nautical mile (1929); temperatures by the Celsius scale's offset.
 */

/** Standard acceleration of gravity, m/s2 (CGPM 1901; ISO 2533:1975). */
export const GRAVITY_MPS2 = 9.80665;
/** Specific gas constant of dry air, J/(kg K) (ISO 2533:1975). */
export const GAS_DRY_JKGK = 287.05287;
/** Specific gas constant of water vapour, J/(kg K). */
export const GAS_VAPOUR_JKGK = 461.5;
/** Specific heat of dry air at constant pressure, J/(kg K). */
export const HEAT_CAPACITY_JKGK = 1005;
/** Density at which wings are stated, kg/m3: standard sea level (ISO 2533:1975). */
export const SEA_LEVEL_DENSITY_KGM3 = 1.225;
/** Zero of the Celsius scale, K. */
export const ZERO_CELSIUS_K = 273.15;

export const MPS_PER_KMH = 1 / 3.6;
export const MPS_PER_KT = 1852 / 3600;
export const MPS_PER_MPH = 0.44704;
export const M_PER_FT = 0.3048;

export function kelvin(celsius: number): number {
  return celsius + ZERO_CELSIUS_K;
}

export function celsius(kelvinValue: number): number {
  return kelvinValue - ZERO_CELSIUS_K;
}

export function pascal(hectopascal: number): number {
  return hectopascal * 100;
}

export function kmhFromMps(mps: number): number {
  return mps / MPS_PER_KMH;
}

export function ktFromMps(mps: number): number {
  return mps / MPS_PER_KT;
}

export function mphFromMps(mps: number): number {
  return mps / MPS_PER_MPH;
}

export function ftFromM(m: number): number {
  return m / M_PER_FT;
}
