import { GAS_DRY_JKGK, GRAVITY_MPS2, HEAT_CAPACITY_JKGK, ZERO_CELSIUS_K } from '../units.ts';
import { airAt, type Column } from './column.ts';
import { saturationPressureHpa } from './moist-air.ts';
import { windAt, type Profile } from './profile.ts';

/** Part of the downwelling shortwave that warms the air: starting value, common practice, no source. */
export const SHORTWAVE_TO_HEAT = 0.35;
const CRITICAL_RICHARDSON = 0.25;
/** Rd / cp of the potential temperature. */
const KAPPA = GAS_DRY_JKGK / HEAT_CAPACITY_JKGK;

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
  return (air.temperatureC + ZERO_CELSIUS_K) * (1000 / air.pressureHpa) ** KAPPA * (1 + 0.61 * mixingRatio);
}

/** Layers are cut into parts of this thickness when looking for the critical value, m. */
const PART_M = 50;

/**
 * Mixed-layer depth above the ground, m: the lowest height at which the bulk Richardson number of the column against
 * its 2 m air reaches 0.25, Ri = (g/thetaV0)(thetaV - thetaV0) z / (u^2 + v^2). After Vogelezang & Holtslag (1996)
 * Boundary-Layer Meteorol. 81, with the surface at rest and without their friction-velocity term, which a forecast
 * column does not give (both make the layer deeper, never shallower). NaN when the value is not reached inside the
 * column or a needed node is missing.
 */
export function richardsonDepthM(column: Column, profile: Profile): number {
  const groundM = column.altitudeM[0]!;
  const surfaceK = virtualPotentialK(airAt(column, groundM));
  /** Positive where the number exceeds the critical value, NaN where it is unknown. */
  const excess = (altitudeM: number): number => {
    const wind = windAt(profile, altitudeM, true);
    const warmerK = virtualPotentialK(airAt(column, altitudeM)) - surfaceK;
    const buoyancy = (GRAVITY_MPS2 / surfaceK) * warmerK * (altitudeM - groundM);
    return warmerK > 0 ? buoyancy - CRITICAL_RICHARDSON * (wind.uMps ** 2 + wind.vMps ** 2) : Math.min(buoyancy, 0) - (Number.isNaN(wind.uMps) ? NaN : 1e-9);
  };
  let belowM = groundM + 1;
  if (excess(belowM) >= 0) return belowM - groundM;
  for (let node = 1; node < column.altitudeM.length; node += 1) {
    const fromM = column.altitudeM[node - 1]!;
    const parts = Math.max(1, Math.ceil((column.altitudeM[node]! - fromM) / PART_M));
    for (let part = 1; part <= parts; part += 1) {
      const aboveM = fromM + ((column.altitudeM[node]! - fromM) * part) / parts;
      const value = excess(aboveM);
      if (Number.isNaN(value)) return NaN;
      if (value >= 0) return crossing(excess, belowM, aboveM) - groundM;
      belowM = aboveM;
    }
  }
  return NaN;
}

/** Where a function that is negative at the first height and not at the second changes sign, within a metre. */
function crossing(excess: (altitudeM: number) => number, belowM: number, aboveM: number): number {
  let low = belowM;
  let high = aboveM;
  while (high - low > 1) {
    const middle = (low + high) / 2;
    if (excess(middle) >= 0) high = middle;
    else low = middle;
  }
  return high;
}
