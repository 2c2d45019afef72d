import type { StripSite } from '../site.ts';
import type { HourView } from './hour-view.ts';
import { airNeeds, fixed, fromSheet, limitTerm, term, type Rule } from './rule.ts';
import { towNeeds } from './sky-rules.ts';
import { readAtM, stripHeightsBetween, windOverStrip } from './strip-profile.ts';

/** Margins of the tow: shear on the way up, release height, forward speed at release. Strips only. */

function stripOf(view: HourView): StripSite {
  const { site } = view.setup;
  if (site.kind !== 'strip') throw new Error('a strip margin was asked of a launch');
  return site;
}

/** Height above mean sea level at which the forecast is read for the release. */
export function releaseAltitudeM(view: HourView): number {
  return readAtM(view, stripOf(view), view.tow.end.releaseM);
}

/** Height of the wind that the shear is measured against, m. */
const FROM_M = 10;

/** Largest vector difference between the 10 m wind and the profile up to release height, and where. */
function largestShear(view: HourView): { readonly shearMps: number; readonly heightM: number } {
  const site = stripOf(view);
  const { releaseM } = view.tow.end;
  const [wind] = view.winds;
  if (wind === undefined || Number.isNaN(wind.uMps) || Number.isNaN(releaseM)) return { shearMps: NaN, heightM: NaN };
  let largest = { shearMps: 0, heightM: FROM_M };
  if (releaseM <= FROM_M) return largest;
  for (const heightM of stripHeightsBetween(view, site, [FROM_M, releaseM])) {
    const { uMps, vMps } = windOverStrip(view, site, heightM);
    const shearMps = Math.hypot(uMps - wind.uMps, vMps - wind.vMps);
    if (Number.isNaN(shearMps)) return { shearMps, heightM };
    if (shearMps > largest.shearMps) largest = { shearMps, heightM };
  }
  return largest;
}

const climbShear: Rule = {
  id: 'climbShear', unit: 'm/s', sense: 'atMost', limit: fromSheet('maxClimbShearMps'), needs: towNeeds,
  demand: (view) => largestShear(view).shearMps,
  terms(view, limit) {
    const { shearMps, heightM } = largestShear(view);
    return [limitTerm(view, 'maxClimbShearMps', limit, 'm/s'), term('largest change of wind on the way up', -shearMps, 'm/s', `10 m wind against the wind ${fixed(heightM, 0)} m above the strip, as vectors`)];
  },
};

const towHeight: Rule = {
  id: 'towHeight', unit: 'm', sense: 'atLeast', limit: fromSheet('minReleaseM'), needs: towNeeds,
  demand: (view) => view.tow.end.releaseM,
  terms(view, limit) {
    const site = stripOf(view);
    return [
      term('line tension over all-up weight', site.lineTensionRatio, '', 'site'),
      term('line length', site.lineLengthM, 'm of line', 'site'),
      term('release height', view.tow.end.releaseM, 'm', `tow toward ${fixed(view.tow.headingDeg, 0)}° with the headwind of the profile, ended by ${view.tow.end.why}`),
      limitTerm(view, 'minReleaseM', -limit, 'm'),
    ];
  },
};

/** Wind at release, never read lower than 10 m: a tow that the wind ends on the ground has not found less wind there. */
function speedAtRelease(view: HourView): number {
  const { releaseM } = view.tow.end;
  const { uMps, vMps } = windOverStrip(view, stripOf(view), Number.isNaN(releaseM) ? NaN : Math.max(FROM_M, releaseM));
  return Math.hypot(uMps, vMps);
}

const forwardAtRelease: Rule = {
  id: 'forwardAtRelease', unit: 'm/s', sense: 'atLeast', limit: fromSheet('minForwardAloftMps'),
  needs: (view) => [...towNeeds(view), ...airNeeds(view, Number.isNaN(view.tow.end.releaseM) ? readAtM(view, stripOf(view), 0) : releaseAltitudeM(view))],
  demand(view) {
    const altitudeM = releaseAltitudeM(view);
    return view.trimAt(altitudeM) - speedAtRelease(view);
  },
  terms(view, limit) {
    const altitudeM = releaseAltitudeM(view);
    return [
      term('trim airspeed', view.trimAt(altitudeM), 'm/s', `${fixed(view.setup.polar.trimMps, 2)} m/s × ${fixed(view.factorAt(altitudeM), 3)} at release height`),
      term('wind at release height', -speedAtRelease(view), 'm/s', `profile ${fixed(view.tow.end.releaseM, 0)} m above the strip`),
      limitTerm(view, 'minForwardAloftMps', -limit, 'm/s'),
    ];
  },
};

/** What a falling line sinks at: starting value, common practice, no source. */
const LINE_FALL_MPS = 8;

/** How far the crosswind carries the falling line to the side, m: the integral of cross/8 m/s over release height. */
export function lineDriftM(view: HourView): number {
  const site = stripOf(view);
  const { headingDeg, end } = view.tow;
  const crossAt = (heightM: number): number => {
    const { uMps, vMps } = windOverStrip(view, site, heightM);
    const angle = (headingDeg * Math.PI) / 180;
    return -uMps * Math.cos(angle) + vMps * Math.sin(angle);
  };
  const slices = 40;
  let sum = 0;
  for (let slice = 0; slice < slices; slice += 1) sum += crossAt(((slice + 0.5) / slices) * end.releaseM);
  return Math.abs((sum / slices) * end.releaseM) / LINE_FALL_MPS;
}

export const stripRules: readonly Rule[] = [climbShear, towHeight, forwardAtRelease];
