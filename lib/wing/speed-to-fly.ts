import type { Polar } from './polar.ts';

/**
 * Airspeed of the flattest glide over the ground in headwind W (tail negative) through air sinking at s:
 * V* = W + sqrt((W - Vms)^2 + (Smin + s)/a), the tangent to the polar from the point (W, -s); kept between minimum-sink
 * speed and top speed. Advice: no margin counts on the accelerator.
 */
export function speedToFlyMps(polar: Polar, air: { readonly headMps: number; readonly sinkMps: number }): number {
  const { headMps, sinkMps } = air;
  const best = headMps + Math.sqrt((headMps - polar.minSinkSpeedMps) ** 2 + (polar.minSinkMps + sinkMps) / polar.curvature);
  return Math.min(Math.max(best, polar.minSinkSpeedMps), polar.topMps);
}
