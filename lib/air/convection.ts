import { GRAVITY_MPS2, HEAT_CAPACITY_JKGK, ZERO_CELSIUS_K } from '../units.ts';
import { airAt, type Column } from './column.ts';
import { saturationPressureHpa } from './moist-air.ts';
import { windAt, type Profile } from './profile.ts';

/** Part of the downwelling shortwave that warms the air: starting value, common practice, no source. */
export const SHORTWAVE_TO_HEAT = 0.35;
const CRITICAL_RICHARDSON = 0.25;

/**
 * Deardorff's convective velocity scale w* = ((g/T) zi H/(rho cp))^(1/3), m/s (Deardorff 1970, J. Atmos. Sci. 27).
 * T in K and rho at the ground, zi the mixed-layer depth in m, H the upward heat flux in W/m2. A heat flux that is
 * known and not positive gives 0 whatever the depth.
 */
export function convectiveVelocityMps(air: {
  readonly temperatureC: number; readonly densityKgm3: number; readonly mixedLayerM: number; readonly heatFluxWm2: number;
}): number {
  if (air.heatFluxWm2 <= 0) return 0;
  const temperatureK = air.temperatureC + ZERO_CELSIUS_K;
  return Math.cbrt(((GRAVITY_MPS2 / temperatureK) * air.mixedLayerM * air.heatFluxWm2) / (air.densityKgm3 * HEAT_CAPACITY_JKGK));
}

function virtualPotentialK(air: { readonly temperatureC: number; readonly dewPointC: number; readonly pressureHpa: number }): number {
  const vapourHpa = saturationPressureHpa(air.dewPointC);
  const mixingRatio = (0.622 * vapourHpa) / (air.pressureHpa - vapourHpa);
  return (air.temperatureC + ZERO_CELSIUS_K) * (1000 / air.pressureHpa) ** 0.2857 * (1 + 0.61 * mixingRatio);
}

/** Parts into which each layer is cut when looking for the critical value. */
const PARTS = 8;

/**
 * Mixed-layer depth above the ground, m: the lowest height at which the bulk Richardson number of the column against
 * its 2 m air reaches 0.25, Ri = (g/thetaV0)(thetaV - thetaV0) z / (u^2 + v^2). After Vogelezang & Holtslag (1996)
 * Boundary-Layer Meteorol. 81, with the surface at rest and without their friction-velocity term, which a forecast
 * column does not give (both make the layer deeper, never shallower). NaN when the value is not reached inside the
 * column or a needed node is missing.
 */
export function richardsonDepthM(column: Column, profile: Profile): number {
  const groundM = column.altitudeM[0]!;
  const surface = virtualPotentialK(airAt(column, groundM));
  let below = { heightM: 0, richardson: 0 };
  for (let node = 1; node < column.altitudeM.length; node += 1) {
    const layerM = column.altitudeM[node]! - column.altitudeM[node - 1]!;
    for (let part = 1; part <= PARTS; part += 1) {
      const altitudeM = column.altitudeM[node - 1]! + (layerM * part) / PARTS;
      const wind = windAt(profile, altitudeM, true);
      const heightM = altitudeM - groundM;
      const potential = virtualPotentialK(airAt(column, altitudeM));
      const richardson = ((GRAVITY_MPS2 / surface) * (potential - surface) * heightM) / Math.max(wind.uMps ** 2 + wind.vMps ** 2, 0.01);
      if (!Number.isFinite(richardson)) return NaN;
      if (richardson >= CRITICAL_RICHARDSON) {
        return below.heightM + ((heightM - below.heightM) * (CRITICAL_RICHARDSON - below.richardson)) / (richardson - below.richardson);
      }
      below = { heightM, richardson };
    }
  }
  return NaN;
}
