import { flyGlide, type Glide, type GlideEnd, type GlidePoint } from '../wing/glide.ts';
import { launchOf } from './forward-rules.ts';
import type { HourView } from './hour-view.ts';
import type { Demand } from './margin.ts';
import { airNeeds, fixed, fromSheet, limitTerm, profileNeeds, term, type Need, type Rule } from './rule.ts';

/** The glide to the landing at trim, through the layered wind and the sinking air of the sheet. */

/** Sink of the air on the glide: the sheet's own, or its share of the thermal strength where that is more. */
export function airSinkMps(view: HourView): number {
  const { sinkMps, sinkPerThermal } = view.setup.sheet.parameters;
  return sinkPerThermal === 0 ? sinkMps : Math.max(sinkMps, sinkPerThermal * view.thermalMps);
}

/** Airspeed and sink at trim with the density at the landing: the slowest true airspeed of the way. */
function glideOf(view: HourView, air: 'forecast' | 'still'): Glide {
  const site = launchOf(view);
  const airspeedMps = view.trimAt(site.landing.elevationM);
  const still = { altitudeM: [site.landing.elevationM, site.elevationM], uMps: [0, 0], vMps: [0, 0] };
  return {
    profile: air === 'still' ? still : view.profile, airspeedMps,
    totalSinkMps: airspeedMps / view.setup.wing.glideAtTrim + (air === 'still' ? 0 : airSinkMps(view)),
    trackDeg: site.trackDeg, distanceM: site.distanceM, launchM: site.elevationM,
  };
}

function glideEnd(view: HourView): GlideEnd {
  return flyGlide(glideOf(view, 'forecast'));
}

/** Points of the path for the side view, in still air or in the hour's wind and sink. */
export function glidePath(view: HourView, air: 'forecast' | 'still'): readonly GlidePoint[] {
  const points: GlidePoint[] = [];
  flyGlide(glideOf(view, air), (point) => points.push(point));
  return points;
}

/**
 * Time from launch until the landing's height is reached at trim in still air, s: the longest a flight without lift
 * lasts. NaN where the density is unknown.
 */
export function glideTimeS(view: HourView): number {
  const site = launchOf(view);
  return (site.elevationM - site.landing.elevationM) / (view.trimAt(site.landing.elevationM) / view.setup.wing.glideAtTrim);
}

export function thermalNeeds(view: HourView): Need[] {
  const heat: Need = view.declares('sensibleHeatWm2') ? 'sensibleHeatWm2' : 'shortwaveWm2';
  // No heat needs no depth; a heat that is missing makes the margin unknown whatever else the source can give.
  if (Number.isNaN(view.heatFluxWm2) || view.heatFluxWm2 <= 0) return [heat];
  const depth: Need[] = view.declares('mixedLayerM') || (view.context.borrowedMixedLayer === null && !view.declares('levels')) ? ['mixedLayerM'] : view.context.borrowedMixedLayer === null ? ['levels', 'wind10m'] : [];
  return [heat, ...depth, 'temperature2mC', 'dewPoint2mC', 'surfacePressureHpa'];
}

export const arrivalRule: Rule = {
  id: 'arrival', unit: 'm', sense: 'atLeast', limit: fromSheet('minArrivalM'),
  needs(view) {
    const site = launchOf(view);
    const sinking = view.setup.sheet.parameters.sinkPerThermal === 0 ? [] : thermalNeeds(view);
    return [...profileNeeds(view, site.elevationM), ...airNeeds(view, site.landing.elevationM), ...sinking];
  },
  demand(view): Demand {
    const end = glideEnd(view);
    switch (end.kind) {
      case 'arrives': return end.altitudeM - launchOf(view).landing.elevationM;
      case 'does not arrive': return 'no solution';
      case 'unknown': return NaN;
    }
  },
  terms(view, limit) {
    const site = launchOf(view);
    const end = glideEnd(view);
    if (end.kind !== 'arrives') return [];
    const stillM = site.distanceM / view.setup.wing.glideAtTrim;
    const lostM = site.elevationM - end.altitudeM;
    return [
      term('launch above landing', site.elevationM - site.landing.elevationM, 'm', `${fixed(site.elevationM, 0)} m less ${fixed(site.landing.elevationM, 0)} m`),
      term('height for the distance in still air', -stillM, 'm', `${fixed(site.distanceM, 0)} m at glide ${fixed(view.setup.wing.glideAtTrim)}`),
      term('height lost to wind and sinking air', -(lostM - stillM), 'm', `wind of the profile along ${fixed(site.trackDeg, 0)}°, air sinking at ${fixed(airSinkMps(view), 2)} m/s`),
      limitTerm(view, 'minArrivalM', -limit, 'm'),
    ];
  },
};
