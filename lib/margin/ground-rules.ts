import { degrees, radians } from '../angles.ts';
import { speedAt } from '../air/profile.ts';
import { logLawFactor } from '../air/surface-layer.ts';
import { components } from '../air/wind.ts';
import { isCalm } from '../air/gust.ts';
import { launchOf, trimTerm } from './forward-rules.ts';
import type { HourView } from './hour-view.ts';
import { airNeeds, estimateOrigin, fixed, fromSheet, limitTerm, pick, profileNeeds, term, windNeeds, type Need, type Picked, type Rule } from './rule.ts';
import { readAtM, SAME_GROUND_M } from './strip-profile.ts';

/** Margins of feet and ground: the landing's gradient, the run, the slope, ridge lift. */

interface Field {
  readonly elevationM: number;
  readonly roughnessM: number;
}

/** The landing, or the strip at the height it is read at. */
function landingField(view: HourView): Field {
  const { site } = view.setup;
  return site.kind === 'launch' ? site.landing : { elevationM: readAtM(view, site, 0), roughnessM: site.roughnessM };
}

function nearModelGround(view: HourView, field: Field): boolean {
  return Math.abs(field.elevationM - view.hour.gridElevationM) <= SAME_GROUND_M;
}

/** Wind 10 m above the landing: the forecast's, or the profile there if larger and the model's ground is another. */
function landingWindMps(view: HourView, field: Field): number {
  const modelMps = view.hour.wind10m.speedMps;
  return nearModelGround(view, field) ? modelMps : Math.max(modelMps, speedAt(view.profile, field.elevationM + 10));
}

/** Speed the wind loses between 10 m and 2 m by the log law. */
function gradientMps(view: HourView, field: Field): number {
  return landingWindMps(view, field) * (1 - logLawFactor({ fromM: 10, toM: 2, roughnessM: field.roughnessM }));
}

export const landingGradientRule: Rule = {
  id: 'landingGradient', unit: 'm/s', sense: 'atLeast', limit: fromSheet('minLandingReserveMps'),
  needs(view) {
    const field = landingField(view);
    const needs: Need[] = ['wind10m', 'gustMps', ...airNeeds(view, field.elevationM)];
    return nearModelGround(view, field) ? needs : [...needs, ...profileNeeds(view, field.elevationM + 10)];
  },
  demand(view) {
    const field = landingField(view);
    return view.trimAt(field.elevationM) - gradientMps(view, field) - view.gustIncrementMps / 2 - view.stallAt(field.elevationM);
  },
  terms(view, limit) {
    const field = landingField(view);
    return [
      trimTerm(view, field.elevationM, 'landing'),
      term('wind lost from 10 m to 2 m', -gradientMps(view, field), 'm/s', `${fixed(landingWindMps(view, field))} m/s at 10 m, log law over roughness ${field.roughnessM} m`),
      term('half the gust above the mean', -view.gustIncrementMps / 2, 'm/s', 'forecast gust less forecast 10 m wind, halved'),
      term('stall', -view.stallAt(field.elevationM), 'm/s', `${fixed(view.setup.polar.stallMps, 2)} m/s × ${fixed(view.factorAt(field.elevationM), 3)}`),
      limitTerm(view, 'minLandingReserveMps', -limit, 'm/s'),
    ];
  },
};

/** Stall speed is exceeded by this much at lift-off. */
const LIFT_OFF_OVER_STALL = 1.1;

function headOf(raw: { readonly speedMps: number; readonly fromDeg: number }, facingDeg: number): number {
  return isCalm(raw.speedMps) ? 0 : components(raw, facingDeg).headMps;
}

function leastHead(view: HourView): Picked {
  const { facingDeg } = launchOf(view);
  return pick(view.winds, 'least', ({ raw }) => headOf(raw, facingDeg));
}

const run: Rule = {
  id: 'run', unit: 'm/s', sense: 'atMost', limit: fromSheet('maxRunMps'),
  needs: (view) => [...windNeeds(view), ...airNeeds(view, launchOf(view).elevationM)],
  demand: (view) => Math.max(0, LIFT_OFF_OVER_STALL * view.stallAt(launchOf(view).elevationM) - leastHead(view).value),
  terms(view, limit) {
    const { elevationM } = launchOf(view);
    const { estimate, value } = leastHead(view);
    const liftOffMps = LIFT_OFF_OVER_STALL * view.stallAt(elevationM);
    const headMps = Math.min(value, liftOffMps);
    return [
      limitTerm(view, 'maxRunMps', limit, 'm/s'),
      term('airspeed at lift-off', -liftOffMps, 'm/s', `1.1 × stall ${fixed(view.stallAt(elevationM), 2)} m/s at the launch`),
      term('headwind at launch', headMps, 'm/s', `${estimate === null ? '' : estimateOrigin({ ...estimate, speedUp: 0 })}${value > liftOffMps ? ', as far as it is needed' : ''}`),
    ];
  },
};

/** Slope the sheet asks for: the wing's glide angle and a buffer, and never less than the sheet's least slope. */
const slope: Rule = {
  id: 'slope', unit: '°', sense: 'atLeast',
  limit({ sheet, wing }) {
    const { slopeBufferDeg, minSlopeDeg } = sheet.limits;
    if (slopeBufferDeg === undefined && minSlopeDeg === undefined) return 'the sheet has neither slopeBufferDeg nor minSlopeDeg';
    return Math.max(degrees(Math.atan(1 / wing.glideAtTrim)) + (slopeBufferDeg ?? 0), minSlopeDeg ?? 0);
  },
  needs: () => [],
  demand: (view) => launchOf(view).slopeDeg,
  terms(view, limit) {
    const { slopeBufferDeg } = view.setup.sheet.limits;
    const glideDeg = degrees(Math.atan(1 / view.setup.wing.glideAtTrim));
    const first = term('slope of the launch', launchOf(view).slopeDeg, '°', 'site');
    const bufferDeg = slopeBufferDeg ?? 0;
    if (limit === view.setup.sheet.limits.minSlopeDeg) return [first, limitTerm(view, 'minSlopeDeg', -limit, '°')];
    return [first, term('glide angle of the wing', -glideDeg, '°', `atan(1 / ${fixed(view.setup.wing.glideAtTrim)})`), limitTerm(view, 'slopeBufferDeg', -bufferDeg, '°')];
  },
};

/** Steepness that lifts the wind: of the slope at launch, at most of the hill as a whole. */
function liftAngleRad(view: HourView): number {
  const { slopeDeg, hill } = launchOf(view);
  return Math.min(radians(slopeDeg), Math.atan(hill.heightM / (2 * hill.halfLengthM)));
}

const ridgeLift: Rule = {
  id: 'ridgeLift', unit: 'm/s', sense: 'atLeast', limit: fromSheet('minLiftMps'),
  needs: (view) => [...windNeeds(view), ...airNeeds(view, launchOf(view).elevationM)],
  demand: (view) => leastHead(view).value * Math.sin(liftAngleRad(view)) - view.setup.polar.minSinkMps * view.factorAt(launchOf(view).elevationM),
  terms(view, limit) {
    const { estimate, value } = leastHead(view);
    const { elevationM } = launchOf(view);
    return [
      term('wind turned up by the slope', value * Math.sin(liftAngleRad(view)), 'm/s', `head part ${fixed(value)} m/s (${estimate === null ? '' : estimateOrigin({ ...estimate, speedUp: 0 })}) × sin ${fixed(degrees(liftAngleRad(view)))}°`),
      term('minimum sink', -view.setup.polar.minSinkMps * view.factorAt(elevationM), 'm/s', `${fixed(view.setup.polar.minSinkMps, 2)} m/s × ${fixed(view.factorAt(elevationM), 3)}`),
      limitTerm(view, 'minLiftMps', -limit, 'm/s'),
    ];
  },
};

export const groundRules: readonly Rule[] = [landingGradientRule, run, slope, ridgeLift];
