import { SEA_LEVEL_DENSITY_KGM3 } from '../units.ts';

/**
 * Speeds and sinks of a wing go with sqrt((m/mref)(1.225/rho)): lift balances weight at the same angle of attack.
 * The mass factor is 1 when either mass is not known.
 */
export function speedFactor(state: { readonly densityKgm3: number; readonly allUpMassKg: number | null; readonly referenceMassKg: number | null }): number {
  const loading = state.allUpMassKg === null || state.referenceMassKg === null ? 1 : state.allUpMassKg / state.referenceMassKg;
  return Math.sqrt((loading * SEA_LEVEL_DENSITY_KGM3) / state.densityKgm3);
}
