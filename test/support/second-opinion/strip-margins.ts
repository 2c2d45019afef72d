// flight-model.md section 6, "A strip is judged on ...", and the choice of heading.
import type { Column } from './air.ts';
import { atLeast, atMost, cloudBaseFinding, landingGradientFinding, logLaw, sectorFinding, weatherFindings } from './both-kinds.ts';
import type { Found, Hourly } from './both-kinds.ts';
import { UNKNOWN, angleBetweenDeg, known } from './numbers.ts';
import { defaultCloseBand } from './tables.ts';
import { towClimb } from './tow.ts';
import type { TowResult } from './tow.ts';
import type { Limits, StripSite } from './types.ts';
import { crossOn, headOn, isCalm, readGust, readWind, speedOf } from './wind.ts';
import type { Profile, ReadWind, Vector } from './wind.ts';
import { atDensity, sinkAt } from './wing.ts';
import type { Polar } from './wing.ts';

export type StripFindings = { found: [string, Found][]; headingDeg: number; flightS: number };

type Heading = {
  headingDeg: number;
  tow: TowResult;
  stripCross: Found;
  stripTail: Found;
  offAxis: Found;
  towHeight: Found;
  worst: number;
  head: number;
};

// "whose smallest of stripCross, stripTail and towHeight spares, each over its close-band default, is larger". What cannot be said
// recommends no heading: it counts as the smallest of all. A margin that the sheet leaves out takes no part.
function smallestOverBand(findings: Found[]): number {
  let smallest = Infinity;
  for (const finding of findings) {
    if (finding === 'not judged') continue;
    if (finding.spare === null || !known(finding.spare)) return -Infinity;
    smallest = Math.min(smallest, finding.spare / defaultCloseBand(finding.id, finding.unit));
  }
  return smallest;
}

function offAxisFinding(limits: Limits, raw: ReadWind, headingDeg: number): Found {
  let demand = UNKNOWN;
  if (known(raw.speedMps)) {
    const counts = raw.speedMps >= (limits.lightWindMps ?? 1.34) && !isCalm(raw.speedMps);
    demand = counts ? angleBetweenDeg(raw.fromDeg, headingDeg) : 0;
  }
  return atMost('offAxis', '°', limits.maxOffAxisDeg, demand);
}

export function stripFindings(
  hourly: Hourly & { site: StripSite },
  polar: Polar,
  column: Column,
  profile: Profile,
  wStarMps: number,
): StripFindings {
  const { hour, limits, site } = hourly;
  const strip = site.properties;
  const stripM = site.geometry.coordinates[2];
  // "heights above the strip are read as heights above the model's ground while they differ by at most 150 m (else AMSL)"
  const zeroM = Math.abs(stripM - hour.gridElevationM) <= 150 ? hour.gridElevationM : stripM;
  const lightWindMps = limits.lightWindMps ?? 1.34;
  const raw = readWind(hour.wind10m);
  const gust = readGust(hour);
  const stripGustMps = raw.speedMps + gust.incrementMps;
  const wingAtStrip = atDensity(polar, column.density(zeroM));

  // "Below the lowest profile node: log law with the strip's roughness", from that node's wind at its own height above the strip.
  function windAtHeight(heightM: number): Vector {
    const altitudeM = zeroM + heightM;
    if (altitudeM >= profile.lowestM) return profile.at(altitudeM);
    const node = profile.atOrLowest(altitudeM);
    const factor = logLaw(1, profile.lowestM - zeroM, heightM, strip.roughnessM);
    return { u: node.u * factor, v: node.v * factor };
  }

  function heading(headingDeg: number): Heading {
    const head = headOn(raw.vector, headingDeg);
    const cross = crossOn(raw.vector, headingDeg);
    let gustCross = Math.abs((cross * stripGustMps) / raw.speedMps);
    let gustTail = Math.max(0, (-head * stripGustMps) / raw.speedMps);
    if (isCalm(raw.speedMps)) {
      // "for cross and tail only its part above lightWindMps"
      gustCross = Math.max(0, stripGustMps - lightWindMps);
      gustTail = gustCross;
    }
    const tow = towClimb({
      trimMps: wingAtStrip.trim,
      glide: polar.glide,
      tensionRatio: strip.lineTensionRatio ?? 0.8,
      lineLengthM: strip.lineLengthM,
      releaseAngleDeg: strip.releaseAngleDeg ?? 70,
      headwindMps: (heightM) => headOn(windAtHeight(heightM), headingDeg),
    });
    const stripCross = atMost('stripCross', 'm/s', limits.maxCrossMps, gustCross);
    const stripTail = atMost('stripTail', 'm/s', limits.maxTailMps, gustTail);
    const towHeight = atLeast('towHeight', 'm', limits.minReleaseM, tow.releaseM);
    const offAxis = offAxisFinding(limits, raw, headingDeg);
    return { headingDeg, tow, stripCross, stripTail, offAxis, towHeight, worst: smallestOverBand([stripCross, stripTail, towHeight]), head };
  }

  // "tie: more head; tie: headingDeg", where a billionth is a tie.
  let chosen = heading(strip.headingDeg);
  if (strip.usableBothWays) {
    const other = heading((strip.headingDeg + 180) % 360);
    const tie = chosen.worst === other.worst || Math.abs(chosen.worst - other.worst) < 1e-9;
    if (tie ? other.head > chosen.head + 1e-9 : other.worst > chosen.worst) chosen = other;
  }
  const releaseM = chosen.tow.releaseM;

  // "largest vector difference between the 10 m wind and the profile up to release height": from 10 m up, at every node and at release.
  const shearHeights = [releaseM];
  for (const node of profile.nodes) {
    const heightM = node.altitudeM - zeroM;
    if (heightM >= 10 && heightM < releaseM) shearHeights.push(heightM);
  }
  if (releaseM > 10) shearHeights.push(10);
  let shear = known(releaseM) ? 0 : UNKNOWN;
  for (const heightM of shearHeights) {
    if (heightM < 10) continue;
    const wind = windAtHeight(heightM);
    shear = Math.max(shear, Math.hypot(wind.u - raw.vector.u, wind.v - raw.vector.v));
  }
  if (!known(raw.vector.u)) shear = UNKNOWN;

  let landingSpeedMps = raw.speedMps;
  if (Math.abs(stripM - hour.gridElevationM) > 150) {
    landingSpeedMps = Math.max(landingSpeedMps, speedOf(profile.at(stripM + 10)));
  }
  const forwardAtRelease = known(releaseM)
    ? atDensity(polar, column.density(zeroM + releaseM)).trim - speedOf(windAtHeight(releaseM))
    : UNKNOWN;

  const found: [string, Found][] = [
    ['stripWind', atMost('stripWind', 'm/s', limits.maxMeanMps, raw.speedMps)],
    ['stripGust', atMost('stripGust', 'm/s', limits.maxGustMps, stripGustMps)],
    ['gustSpread', atMost('gustSpread', 'm/s', limits.maxGustSpreadMps, gust.incrementMps)],
    ['stripCross', chosen.stripCross],
    ['stripTail', chosen.stripTail],
    ['offAxis', chosen.offAxis],
    ['climbShear', atMost('climbShear', 'm/s', limits.maxClimbShearMps, shear)],
    ['towHeight', chosen.towHeight],
    ['forwardAtRelease', atLeast('forwardAtRelease', 'm/s', limits.minForwardAloftMps, forwardAtRelease)],
    [
      'landingGradient',
      landingGradientFinding({
        limits,
        trimMps: wingAtStrip.trim,
        stallMps: wingAtStrip.stall,
        speed10mMps: landingSpeedMps,
        incrementMps: gust.incrementMps,
        roughnessM: strip.roughnessM,
      }),
    ],
    ['thermal', atMost('thermal', 'm/s', limits.maxThermalMps, wStarMps)],
    ['cloudBase', cloudBaseFinding(limits, column, zeroM, zeroM, releaseM)],
    ...weatherFindings(hourly),
    ['sector', sectorFinding(strip.sectors, raw.speedMps, raw.fromDeg, isCalm(raw.speedMps))],
  ];

  // Down from release at trim, in the sinking air of section 5 with the sheet's (or the default) parameters.
  const sinkPerThermal = limits.sinkPerThermal ?? 0.25;
  const sinkMps = limits.sinkMps ?? 0;
  const sinkingMps = sinkPerThermal === 0 ? sinkMps : Math.max(sinkMps, sinkPerThermal * wStarMps);
  const glideS = releaseM / (sinkAt(wingAtStrip, wingAtStrip.trim) + sinkingMps);
  return { found, headingDeg: chosen.headingDeg, flightS: chosen.tow.climbS + glideS };
}
