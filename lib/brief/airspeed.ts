import { componentsOfVector } from '../air/wind.ts';
import { forwardAtLaunch } from '../margin/forward-rules.ts';
import type { HourView } from '../margin/hour-view.ts';
import { gustOn, meanOn } from '../margin/launch-wind.ts';
import { releaseAltitudeM } from '../margin/strip-rules.ts';
import { windOverStrip } from '../margin/strip-profile.ts';
import type { AirspeedColumn } from './day.ts';

/**
 * How an hour's trim airspeed is spent, from the source that leaves least. A launch: at the launch, in a gust, with the
 * sheet's forward speed as reserve. A strip: at release, on the recommended heading, where the margin is forwardAtRelease.
 */
export function airspeedColumn(views: readonly HourView[]): AirspeedColumn | null {
  let least: AirspeedColumn | null = null;
  for (const view of views) {
    const column = view.setup.site.kind === 'launch' ? launchColumn(view) : stripColumn(view);
    if (column !== null && (least === null || (least.spareMps !== null && (column.spareMps === null || column.spareMps < least.spareMps)))) least = column;
  }
  return least;
}

function launchColumn(view: HourView): AirspeedColumn | null {
  const { site, sheet } = view.setup;
  if (site.kind !== 'launch') return null;
  const { estimate, trimMps, forward } = forwardAtLaunch(view);
  if (estimate === null || (forward !== 'no solution' && Number.isNaN(forward))) return null;
  const gust = gustOn(estimate, site.facingDeg);
  const headMps = estimate.calm ? 0 : meanOn(estimate, site.facingDeg).headMps;
  const reserveMps = sheet.limits.minForwardMps ?? 0;
  if (Number.isNaN(trimMps) || Number.isNaN(gust.headMps)) return null;
  const crabMps = forward === 'no solution' ? trimMps : trimMps - Math.sqrt(trimMps ** 2 - gust.crossMps ** 2);
  return { trimMps, headMps, gustMps: gust.headMps - headMps, crabMps, reserveMps, spareMps: forward === 'no solution' ? null : forward - reserveMps };
}

function stripColumn(view: HourView): AirspeedColumn | null {
  const { site, sheet } = view.setup;
  if (site.kind !== 'strip' || Number.isNaN(view.tow.end.releaseM)) return null;
  const trimMps = view.trimAt(releaseAltitudeM(view));
  const { uMps, vMps } = windOverStrip(view, site, Math.max(10, view.tow.end.releaseM));
  const speedMps = Math.hypot(uMps, vMps);
  if (Number.isNaN(trimMps) || Number.isNaN(speedMps)) return null;
  const { headMps } = componentsOfVector(uMps, vMps, view.headingDeg);
  const reserveMps = sheet.limits.minForwardAloftMps ?? 0;
  return { trimMps, headMps, gustMps: 0, crabMps: speedMps - headMps, reserveMps, spareMps: trimMps - speedMps - reserveMps };
}
