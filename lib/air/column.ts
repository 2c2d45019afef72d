import { GAS_DRY_JKGK, GAS_VAPOUR_JKGK, GRAVITY_MPS2, ZERO_CELSIUS_K } from '../units.ts';
import { moistDensityKgm3, saturationPressureHpa } from './moist-air.ts';

/**
 * Temperature, dew point and pressure over a place. Temperature and dew point are linear in height between nodes,
 * pressure log-linear. Below the model's ground: 6.5 K/km warmer, same dew point, pressure hydrostatic. Without levels
 * the column reaches 150 m above the ground at -6.5 K/km and -1.8 K/km for the dew point. Above its top, and next to a
 * node that is missing, everything is NaN.
 */
export interface Column {
  readonly altitudeM: readonly number[];
  readonly temperatureC: readonly number[];
  readonly dewPointC: readonly number[];
  readonly pressureHpa: readonly number[];
  /** True when the source gives no levels and the column may be carried 150 m above the ground. */
  readonly carriesUp: boolean;
}

export interface AirAt {
  readonly temperatureC: number;
  readonly dewPointC: number;
  readonly pressureHpa: number;
}

const LAPSE_KPM = 0.0065;
const DEW_LAPSE_KPM = 0.0018;
const CARRY_UP_M = 150;

/** Hydrostatic pressure `riseM` above (below when negative) air of known pressure, by the mean virtual temperature of the layer. */
function hydrostaticHpa(from: AirAt, to: { readonly temperatureC: number; readonly dewPointC: number }, riseM: number): number {
  const meanC = (from.temperatureC + to.temperatureC) / 2;
  const vapourHpa = (saturationPressureHpa(from.dewPointC) + saturationPressureHpa(to.dewPointC)) / 2;
  // Tv = T / (1 - (e/p)(1 - Rd/Rv)); pressure at the known end is near enough for e/p of a few percent.
  const virtualK = (meanC + ZERO_CELSIUS_K) / (1 - (vapourHpa / from.pressureHpa) * (1 - GAS_DRY_JKGK / GAS_VAPOUR_JKGK));
  return from.pressureHpa * Math.exp((-GRAVITY_MPS2 * riseM) / (GAS_DRY_JKGK * virtualK));
}

/** The air at a height above mean sea level; NaN fields where it is unknown. */
export function airAt(column: Column, altitudeM: number): AirAt {
  const { altitudeM: z, temperatureC: t, dewPointC: dew, pressureHpa: p } = column;
  const last = z.length - 1;
  const ground = { temperatureC: t[0]!, dewPointC: dew[0]!, pressureHpa: p[0]! };
  if (altitudeM <= z[0]!) {
    const below = { temperatureC: t[0]! + LAPSE_KPM * (z[0]! - altitudeM), dewPointC: dew[0]! };
    return { ...below, pressureHpa: hydrostaticHpa(ground, below, altitudeM - z[0]!) };
  }
  if (column.carriesUp && altitudeM <= z[0]! + CARRY_UP_M) {
    const riseM = altitudeM - z[0]!;
    const above = { temperatureC: t[0]! - LAPSE_KPM * riseM, dewPointC: dew[0]! - DEW_LAPSE_KPM * riseM };
    return { ...above, pressureHpa: hydrostaticHpa(ground, above, riseM) };
  }
  if (last < 1 || Number.isNaN(altitudeM) || altitudeM > z[last]!) return { temperatureC: NaN, dewPointC: NaN, pressureHpa: NaN };
  let above = 1;
  while (z[above]! < altitudeM) above += 1;
  if (z[above] === altitudeM) return { temperatureC: t[above]!, dewPointC: dew[above]!, pressureHpa: p[above]! };
  const share = (altitudeM - z[above - 1]!) / (z[above]! - z[above - 1]!);
  return {
    temperatureC: t[above - 1]! + share * (t[above]! - t[above - 1]!),
    dewPointC: dew[above - 1]! + share * (dew[above]! - dew[above - 1]!),
    pressureHpa: p[above - 1]! * (p[above]! / p[above - 1]!) ** share,
  };
}

/** Moist density at a height, kg/m3; NaN where unknown. */
export function densityAt(column: Column, altitudeM: number): number {
  return moistDensityKgm3(airAt(column, altitudeM));
}
