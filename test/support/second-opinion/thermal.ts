// flight-model.md section 2, "Thermal strength, Deardorff", with the bulk-Richardson height of the column. NaN is unknown.
import { cp, g } from './air.ts';
import type { Column } from './air.ts';
import { UNKNOWN, known, read } from './numbers.ts';
import type { Conditions } from './types.ts';
import type { Profile } from './wind.ts';

function virtualPotentialK(column: Column, altitudeM: number): number {
  const pressurePa = column.pressurePa(altitudeM);
  const T = column.temperatureC(altitudeM) + 273.15;
  const density = column.density(altitudeM);
  const virtualK = pressurePa / (287.05287 * density);
  if (!known(T)) return UNKNOWN;
  return virtualK * (100_000 / pressurePa) ** (287.05287 / cp);
}

// Ri(z) = (g/thetaV0) (thetaV(z) - thetaV0) (z - z0) / (u² + v²), the ground with its 2 m values as the lower end and at rest, no
// friction-velocity term (no source gives one). The first height, metre by metre, at which it reaches 0.25.
function bulkRichardsonHeightM(column: Column, profile: Profile): number {
  const ground = virtualPotentialK(column, column.groundM);
  if (!known(ground)) return UNKNOWN;
  for (let heightM = 1; heightM <= 6000; heightM++) {
    const altitudeM = column.groundM + heightM;
    const wind = profile.atOrLowest(altitudeM);
    const excessK = virtualPotentialK(column, altitudeM) - ground;
    const windSquared = wind.u * wind.u + wind.v * wind.v;
    if (!known(excessK) || !known(windSquared)) return UNKNOWN;
    if ((g / ground) * excessK * heightM >= 0.25 * windSquared && excessK > 0) return heightM;
  }
  return UNKNOWN;
}

// w* = cbrt( (g/T) zi H/(rho cp) )
export function thermalMps(hour: Conditions, column: Column, profile: Profile): number {
  let H = read.heatFluxWm2(hour.sensibleHeatWm2);
  if (!known(H)) H = 0.35 * Math.max(0, read.shortwaveWm2(hour.shortwaveWm2));
  if (!known(H)) return UNKNOWN;
  if (H <= 0) return 0; // "only a known non-positive value gives 0"
  let zi = read.mixedLayerM(hour.mixedLayerM);
  if (!known(zi)) zi = bulkRichardsonHeightM(column, profile);
  if (!known(zi)) return UNKNOWN;
  if (zi <= 0) return 0;
  const T = column.temperatureC(column.groundM) + 273.15;
  const rho = column.density(column.groundM);
  return Math.cbrt(((g / T) * zi * H) / (rho * cp));
}
