import { GAS_DRY_JKGK, GAS_VAPOUR_JKGK, GRAVITY_MPS2, HEAT_CAPACITY_JKGK, ZERO_CELSIUS_K } from '../units.ts';

/** Saturation vapour pressure over water, hPa. Bolton (1980) Mon. Wea. Rev. 108, eq. 10; -35 to 35 °C within 0.3 %. */
export function saturationPressureHpa(temperatureC: number): number {
  return 6.112 * Math.exp((17.67 * temperatureC) / (temperatureC + 243.5));
}

/** Dew point from temperature and relative humidity (percent over water), Bolton (1980) eq. 10 solved for the temperature (eq. 11). */
export function dewPointC(temperatureC: number, relativeHumidityPct: number): number {
  // Bone-dry air has no dew point; 0.01 % keeps the logarithm finite and changes density by less than 1e-6.
  const vapour = (Math.max(relativeHumidityPct, 0.01) / 100) * saturationPressureHpa(temperatureC);
  const logarithm = Math.log(vapour / 6.112);
  return (243.5 * logarithm) / (17.67 - logarithm);
}

/** Density of moist air, kg/m3: dry part by its partial pressure plus vapour (ideal gases). */
export function moistDensityKgm3(air: { readonly temperatureC: number; readonly dewPointC: number; readonly pressureHpa: number }): number {
  const temperatureK = air.temperatureC + ZERO_CELSIUS_K;
  const vapourPa = 100 * saturationPressureHpa(air.dewPointC);
  return (100 * air.pressureHpa - vapourPa) / (GAS_DRY_JKGK * temperatureK) + vapourPa / (GAS_VAPOUR_JKGK * temperatureK);
}

/** Temperature at the lifting condensation level, K. Bolton (1980) eq. 15, from temperature and dew point. */
export function condensationTemperatureK(temperatureC: number, dewC: number): number {
  const temperatureK = temperatureC + ZERO_CELSIUS_K;
  const dewK = dewC + ZERO_CELSIUS_K;
  return 1 / (1 / (dewK - 56) + Math.log(temperatureK / dewK) / 800) + 56;
}

/** Height of the lifting condensation level above the parcel, m, along the dry adiabat g/cp. Never below the parcel. */
export function condensationHeightM(temperatureC: number, dewC: number): number {
  if (dewC >= temperatureC) return 0;
  const dropK = temperatureC + ZERO_CELSIUS_K - condensationTemperatureK(temperatureC, dewC);
  return Math.max(0, (dropK * HEAT_CAPACITY_JKGK) / GRAVITY_MPS2);
}
