// flight-model.md section 6, "Foot launch", row by row.
import type { Column } from './air.ts';
import {
  atLeast,
  atMost,
  cloudBaseFinding,
  hillAngleRad,
  landingGradientFinding,
  sectorFinding,
  slopeFinding,
  weatherFindings,
} from './both-kinds.ts';
import type { Found, Hourly } from './both-kinds.ts';
import { trackBetween } from './ellipsoid.ts';
import { arrivalHeightM } from './glide.ts';
import { UNKNOWN, angleBetweenDeg, known, largest, least } from './numbers.ts';
import type { LaunchSite } from './types.ts';
import { headOn, isCalm, keptEstimates, readGust, readWind, speedOf } from './wind.ts';
import type { Estimate, Profile, Vector } from './wind.ts';
import { atDensity, groundSpeed, sinkAt, speedToFly } from './wing.ts';
import type { Polar } from './wing.ts';

export type LaunchFindings = { found: [string, Found][]; speedToFlyMps: number; flightS: number };

// The heights from lowest to highest of the given ones, with every profile node between them.
function heightsBetween(profile: Profile, ends: number[]): number[] {
  const from = Math.min(...ends);
  const to = Math.max(...ends);
  const between = profile.nodes.map((node) => node.altitudeM).filter((altitudeM) => altitudeM > from && altitudeM < to);
  return [...ends, ...between];
}

function offAxisDeg(estimates: Estimate[], axisDeg: number, lightWindMps: number): number {
  if (estimates.length === 0) return UNKNOWN;
  let demand = 0; // "demand 0 when none is"
  for (const estimate of estimates) {
    if (!known(estimate.rawSpeedMps)) return UNKNOWN;
    if (estimate.rawSpeedMps < lightWindMps) continue; // "those at or above lightWindMps"
    if (isCalm(estimate.rawSpeedMps)) continue; // no direction
    demand = Math.max(demand, angleBetweenDeg(estimate.rawFromDeg, axisDeg));
  }
  return demand;
}

// "least ground speed into the launch axis with a gust vector, trim at the launch's density"
function leastForward(estimates: Estimate[], trimMps: number): number | null {
  const speeds = estimates.map((estimate) => groundSpeed(trimMps, estimate.gustCrossForSpeed, estimate.gustHead));
  if (speeds.length === 0) return UNKNOWN;
  if (speeds.some((speed) => speed !== null && !known(speed))) return UNKNOWN;
  if (speeds.includes(null)) return null;
  return least(speeds as number[]);
}

export function launchFindings(
  hourly: Hourly & { site: LaunchSite },
  polar: Polar,
  column: Column,
  profile: Profile,
  reachM: number,
  wStarMps: number,
): LaunchFindings {
  const { hour, limits, site } = hourly;
  const launch = site.properties;
  const axisDeg = launch.facingDeg;
  const launchM = site.geometry.coordinates[2];
  const landingM = launch.landing.coordinates[2];
  const lightWindMps = limits.lightWindMps ?? 1.34;
  const bandM = limits.bandM ?? 0;
  const sinkMps = limits.sinkMps ?? 0;
  const sinkPerThermal = limits.sinkPerThermal ?? 0.25;

  const estimates = keptEstimates({ hour, profile, hill: launch.hill, launchM, axisDeg, lightWindMps, reachM });
  const wingAtLaunch = atDensity(polar, column.density(launchM));
  const wingAtLanding = atDensity(polar, column.density(landingM));
  // "s = max(sinkMps, sinkPerThermal w*)"
  const sinkingMps = sinkPerThermal === 0 ? sinkMps : Math.max(sinkMps, sinkPerThermal * wStarMps);

  const windsAt = (heights: number[]): Vector[] => heights.map((altitudeM) => profile.atOrLowest(altitudeM));
  const backHeights = [launchM + 10, launchM + 300];
  if (launch.summitElevationM !== undefined) backHeights.push(launch.summitElevationM + 300);

  const byPoints = trackBetween(site.geometry.coordinates, launch.landing.coordinates);
  const arrival = arrivalHeightM({
    wingAtLanding,
    profile,
    launchM,
    landingM,
    trackDeg: launch.trackDeg ?? byPoints.trackDeg,
    distanceM: launch.distanceM ?? byPoints.distanceM,
    sinkingMps,
  });

  // "the model's 10 m speed while the landing lies within 150 m of the model's ground, else the larger of it and the profile at landing + 10 m"
  const raw = readWind(hour.wind10m);
  let landingSpeedMps = raw.speedMps;
  if (Math.abs(landingM - hour.gridElevationM) > 150) {
    landingSpeedMps = Math.max(landingSpeedMps, speedOf(profile.at(landingM + 10)));
  }

  const leastHead = least(estimates.map((estimate) => estimate.rawHead)); // nothing kept: unknown
  const lift = leastHead * Math.sin(hillAngleRad(launch.slopeDeg, launch.hill.heightM, launch.hill.halfLengthM));

  // The kept estimate with the largest mean; one unknown makes it unknown.
  const largestMean = largest(estimates.map((estimate) => estimate.meanMps));
  const strongest = estimates.find((estimate) => estimate.meanMps === largestMean);

  const found: [string, Found][] = [
    ['meanWind', atMost('meanWind', 'm/s', limits.maxMeanMps, largestMean)],
    ['gust', atMost('gust', 'm/s', limits.maxGustMps, largest(estimates.map((e) => e.gustMps)))],
    ['gustSpread', atMost('gustSpread', 'm/s', limits.maxGustSpreadMps, largest(estimates.map((e) => e.gustMps - e.meanMps)))],
    ['crosswind', atMost('crosswind', 'm/s', limits.maxCrossMps, largest(estimates.map((e) => e.gustCross)))],
    ['tailwind', atMost('tailwind', 'm/s', limits.maxTailMps, largest(estimates.map((e) => e.gustTail)))],
    ['offAxis', atMost('offAxis', '°', limits.maxOffAxisDeg, offAxisDeg(estimates, axisDeg, lightWindMps))],
    ['forwardLaunch', atLeast('forwardLaunch', 'm/s', limits.minForwardMps, leastForward(estimates, wingAtLaunch.trim))],
    [
      'forwardAloft',
      atLeast(
        'forwardAloft',
        'm/s',
        limits.minForwardAloftMps,
        least(
          heightsBetween(profile, [launchM, launchM + bandM]).map(
            (z) => atDensity(polar, column.density(z)).trim - speedOf(profile.atOrLowest(z)),
          ),
        ),
      ),
    ],
    [
      'upperWind',
      atMost(
        'upperWind',
        'm/s',
        limits.maxUpperMps,
        largest(windsAt(heightsBetween(profile, [launchM + 10, launchM + 1500])).map(speedOf)),
      ),
    ],
    [
      'overTheBack',
      atMost(
        'overTheBack',
        'm/s',
        limits.maxBackMps,
        largest(windsAt(heightsBetween(profile, backHeights)).map((wind) => Math.max(0, -headOn(wind, axisDeg)))),
      ),
    ],
    ['arrival', atLeast('arrival', 'm', limits.minArrivalM, arrival)],
    [
      'landingGradient',
      landingGradientFinding({
        limits,
        trimMps: wingAtLanding.trim,
        stallMps: wingAtLanding.stall,
        speed10mMps: landingSpeedMps,
        incrementMps: readGust(hour).incrementMps,
        roughnessM: launch.landing.roughnessM,
      }),
    ],
    ['run', atMost('run', 'm/s', limits.maxRunMps, Math.max(0, 1.1 * wingAtLaunch.stall - leastHead))],
    ['slope', slopeFinding(limits, launch.slopeDeg, polar.glide)],
    ['thermal', atMost('thermal', 'm/s', limits.maxThermalMps, wStarMps)],
    ['cloudBase', cloudBaseFinding(limits, column, launchM, landingM, 0)],
    ...weatherFindings(hourly),
    [
      'sector',
      sectorFinding(launch.sectors, largestMean, strongest?.fromDeg ?? UNKNOWN, strongest?.calm ?? false),
    ],
    ['ridgeLift', atLeast('ridgeLift', 'm/s', limits.minLiftMps, lift - wingAtLaunch.minSink)],
  ];

  // Advice: "W the along-track head of the slowest kept estimate".
  const slowestMean = least(estimates.map((estimate) => estimate.meanMps));
  const slowest = estimates.find((estimate) => estimate.meanMps === slowestMean);
  let alongTrack = UNKNOWN;
  if (slowest !== undefined) {
    const turn = slowest.fromDeg - (launch.trackDeg ?? byPoints.trackDeg);
    alongTrack = slowest.calm ? 0 : slowest.meanMps * Math.cos((turn * Math.PI) / 180);
  }
  return {
    found,
    speedToFlyMps: speedToFly(wingAtLaunch, alongTrack, sinkingMps),
    // From launch height to landing height at trim, section 5's sinking air included.
    flightS: (launchM - landingM) / (sinkAt(wingAtLanding, wingAtLanding.trim) + sinkingMps),
  };
}
