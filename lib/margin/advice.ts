import { speedToFlyMps } from '../wing/speed-to-fly.ts';
import { scaledPolar } from '../wing/polar.ts';
import { componentsOfVector } from '../air/wind.ts';
import { airSinkMps, glideTimeS } from './arrival-rule.ts';
import type { HourView } from './hour-view.ts';
import { readAtM } from './strip-profile.ts';

/**
 * Speed to fly over the ground from launch to landing, m/s true airspeed at the launch's density: in the along-track
 * head of the slowest kept estimate and the sinking air of the glide. NaN when any of it is unknown, and for strips,
 * which have no track. Advice only.
 */
export function adviceMps(view: HourView): number {
  const { site, polar } = view.setup;
  if (site.kind !== 'launch') return NaN;
  const slowest = view.winds.reduce<HourView['winds'][number] | null>((least, wind) => (least === null || wind.meanMps < least.meanMps ? wind : least), null);
  if (slowest === null || view.winds.some(({ meanMps }) => Number.isNaN(meanMps))) return NaN;
  const { headMps } = componentsOfVector(slowest.uMps, slowest.vMps, site.trackDeg);
  return speedToFlyMps(scaledPolar(polar, view.factorAt(site.elevationM)), { headMps, sinkMps: airSinkMps(view) });
}

/** How long a flight begun now lasts at trim without lift, s: the glide, or the climb on the line and the glide down from release. */
export function flightTimeS(view: HourView): number {
  const { site, wing } = view.setup;
  if (site.kind === 'launch') return glideTimeS(view);
  const { end } = view.tow;
  return end.durationS + end.releaseM / (view.trimAt(readAtM(view, site, 0)) / wing.glideAtTrim);
}
