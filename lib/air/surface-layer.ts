/**
 * The neutral log law of the surface layer, U2 = U1 ln(z2/z0) / ln(z1/z0) with no displacement height. Valid about
 * 20 z0 to 100 m over even ground in neutral air; on a crest it does not hold. At or below z0 the wind is nil.
 */
export function logLawFactor(heights: { readonly fromM: number; readonly toM: number; readonly roughnessM: number }): number {
  const { fromM, toM, roughnessM } = heights;
  if (toM <= roughnessM) return 0;
  return Math.log(toM / roughnessM) / Math.log(fromM / roughnessM);
}
