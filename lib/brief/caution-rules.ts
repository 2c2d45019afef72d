import { angleBetweenDeg } from '../angles.ts';
import { densityAltitudeM, geopotentialM } from '../air/standard-atmosphere.ts';
import { densityAt } from '../air/column.ts';
import { condensationHeightM } from '../air/moist-air.ts';
import { windAt } from '../air/profile.ts';
import { logLawFactor } from '../air/surface-layer.ts';
import { windChillC } from '../air/wind-chill.ts';
import { componentsOfVector } from '../air/wind.ts';
import type { HourView } from '../margin/hour-view.ts';
import type { Setup } from '../margin/setup.ts';
import type { Window } from '../margin/window.ts';
import { sunAt, type LegalDay } from '../sky/sun.ts';
import { HOUR_MS, isoUtc, localDateTime, MINUTE_MS } from '../time.ts';
import { CAUTION_IDS, type Caution, type CautionId } from './cautions.ts';
import type { JudgedHour } from './day.ts';
import type { DayInput } from './day-input.ts';
import { speaks, type Poll, type Voter } from './voters.ts';

/** Which cautions hold, each with its number and its hours, taken from the least favourable source that has a vote. */
export interface CautionInput {
  readonly input: DayInput;
  readonly setup: Setup;
  readonly poll: Poll;
  readonly hours: readonly JudgedHour[];
  readonly windows: readonly Window[];
  readonly legalDay: LegalDay;
}

export function cautionsOf(given: CautionInput): Caution[] {
  const found = [...skyCautions(given), ...windCautions(given), ...windowCautions(given), ...siteCautions(given), ...sourceCautions(given)];
  return found.sort((a, b) => CAUTION_IDS.indexOf(a.id) - CAUTION_IDS.indexOf(b.id));
}

interface Reading {
  readonly value: number;
  readonly atMs: number;
}

/** The value of a measure at each judged hour, the worst over the sources; hours where no source says are left out. */
function readings({ poll, hours }: CautionInput, measure: (view: HourView) => number, worst: 'largest' | 'least' = 'largest'): Reading[] {
  return hours.flatMap(({ validAt }) => {
    const atMs = Date.parse(validAt);
    const values = speakers(poll).flatMap((voter) => {
      const view = voter.members[0]?.get(atMs);
      return view === undefined ? [] : [measure(view)];
    }).filter(Number.isFinite);
    if (values.length === 0) return [];
    return [{ atMs, value: worst === 'largest' ? Math.max(...values) : Math.min(...values) }];
  });
}

function speakers(poll: Poll): Voter[] {
  return poll.deterministic.filter(speaks);
}

/** A caution for each run of hours whose readings pass, with the worst of their values: never said of an hour between. */
function over(id: CautionId, unit: string, found: readonly Reading[], worst: 'largest' | 'least' = 'largest'): Caution[] {
  const runs: Reading[][] = [];
  for (const reading of found) {
    const run = runs.at(-1);
    if (run !== undefined && reading.atMs - (run.at(-1)?.atMs ?? 0) <= HOUR_MS) run.push(reading);
    else runs.push([reading]);
  }
  return runs.map((run) => {
    const values = run.map(({ value }) => value);
    return { id, value: worst === 'largest' ? Math.max(...values) : Math.min(...values), unit, from: isoUtc(run[0]?.atMs ?? NaN), to: isoUtc(run.at(-1)?.atMs ?? NaN), subject: null };
  });
}

const THUNDER_FROM = 91;

function skyCautions(given: CautionInput): Caution[] {
  const { input: { thresholds }, setup } = given;
  const cape = over('storm', 'J/kg', readings(given, ({ hour }) => hour.capeJkg).filter(({ value }) => value >= thresholds.stormCapeJkg));
  const signalled = readings(given, ({ hour }) => hour.weatherCode).filter(({ value }) => value >= THUNDER_FROM || value === 17 || value === 29);
  const thunder = over('storm', '', signalled).map((caution) => ({ ...caution, value: null, unit: null }));
  const strongMps = strongThermalMps(setup.sheet.limits.maxThermalMps, thresholds.thermalMps);
  const baseOf = (view: HourView): number => {
    const air = view.airAt(setup.site.elevationM);
    return condensationHeightM(air.temperatureC, air.dewPointC);
  };
  return [
    ...cape, ...thunder,
    ...over('strongThermals', 'm/s', readings(given, (view) => view.thermalMps).filter(({ value }) => value >= strongMps)),
    ...over('lowCloud', 'm', readings(given, baseOf, 'least').filter(({ value }) => value <= thresholds.lowCloudM), 'least'),
    ...over('lowCloud', 'm', readings(given, ({ hour }) => hour.visibilityM, 'least').filter(({ value }) => value <= thresholds.fogVisibilityM), 'least').map((caution) => ({ ...caution, subject: 'visibility' })),
    ...foehn(given),
    ...over('cold', '°C', readings(given, (view) => windChillC(view.airAt(setup.site.elevationM).temperatureC, view.trimAt(setup.site.elevationM)), 'least').filter(({ value }) => value <= thresholds.windChillC), 'least'),
    ...front(given),
    ...dew(given),
  ];
}

/** Three quarters of what the sheet allows, or the threshold where the sheet allows more or says nothing. */
function strongThermalMps(allowedMps: number | undefined, thresholdMps: number): number {
  return Math.min(0.75 * (allowedMps ?? Infinity), thresholdMps);
}

function foehn(given: CautionInput): Caution[] {
  const { site } = given.setup;
  if (site.pressureStep === null) return [];
  const step = readings(given, ({ hour }) => Math.abs(hour.referencePressureHpa.a - hour.referencePressureHpa.b));
  return over('foehn', 'hPa', step.filter(({ value }) => value >= given.input.thresholds.foehnStepHpa)).map((caution) => ({ ...caution, subject: site.pressureStep === null ? null : `${site.pressureStep.a.name} to ${site.pressureStep.b.name}` }));
}

/** Change of a measure from an hour of the same source to another some hours later. */
function changes(given: CautionInput, hoursLater: number, change: (before: HourView, after: HourView) => number): Reading[] {
  return given.hours.flatMap(({ validAt }) => {
    const atMs = Date.parse(validAt);
    const values = speakers(given.poll).flatMap((voter) => {
      const before = voter.members[0]?.get(atMs - hoursLater * HOUR_MS);
      const after = voter.members[0]?.get(atMs);
      return before === undefined || after === undefined ? [] : [change(before, after)];
    }).filter(Number.isFinite);
    return values.length === 0 ? [] : [{ atMs, value: Math.max(...values) }];
  });
}

/** Direction says something only while there is wind. */
const TURN_COUNTS_FROM_MPS = 3;

function turnOf(before: HourView, after: HourView): number {
  const a = before.hour.wind10m;
  const b = after.hour.wind10m;
  return Math.min(a.speedMps, b.speedMps) >= TURN_COUNTS_FROM_MPS ? angleBetweenDeg(a.fromDeg, b.fromDeg) : NaN;
}

function front(given: CautionInput): Caution[] {
  const { frontFallHpa, frontVeerDeg } = given.input.thresholds;
  const fall = changes(given, 3, (before, after) => before.hour.seaLevelPressureHpa - after.hour.seaLevelPressureHpa).filter(({ value }) => value >= frontFallHpa);
  const turn = changes(given, 2, turnOf).filter(({ value }) => value >= frontVeerDeg);
  return fall.length > 0 ? over('front', 'hPa', fall) : over('front', '°', turn);
}

/** Rain in the two hours before, or air nearly saturated in the first two hours of the legal day. */
function dew(given: CautionInput): Caution[] {
  const { rainNearMm, dewSpreadK } = given.input.thresholds;
  const rained = changes(given, 2, (before) => before.hour.precipitationMm).filter(({ value }) => value >= rainNearMm);
  const dawnMs = given.hours[0] === undefined ? NaN : Date.parse(given.hours[0].validAt);
  const damp = readings(given, ({ hour }) => hour.temperature2mC - hour.dewPoint2mC, 'least').filter(({ value, atMs }) => value <= dewSpreadK && atMs <= dawnMs + HOUR_MS);
  return rained.length > 0 ? over('wet', 'mm', rained) : over('wet', 'K', damp, 'least');
}

function windCautions(given: CautionInput): Caution[] {
  const { input: { thresholds }, setup: { site } } = given;
  const light = readings(given, (view) => (view.winds.length === 0 ? NaN : Math.max(...view.winds.map(({ meanMps }) => meanMps)))).filter(({ value }) => value < thresholds.lightWindMps);
  const raised = readings(given, ({ hour, gustIncrementMps }) => (hour.gustRaised ? gustIncrementMps : NaN));
  const gradient = readings(given, (view) => gradientAtLanding(view));
  const cautions = [
    ...over('lightWind', 'm/s', light).map((caution) => ({ ...caution, value: thresholds.lightWindMps })),
    ...over('lowQualityGust', 'm/s', raised).map((caution) => ({ ...caution, value: null, unit: null })),
    ...over('landingGradient', 'm/s', gradient.filter(({ value }) => value >= thresholds.landingGradientMps)),
  ];
  if (site.kind === 'strip') return [...cautions, ...lineDrift(given)];
  const heightsM = [10, 100, 200, 300].map((above) => site.elevationM + above);
  const aloft = readings(given, (view) => Math.max(...heightsM.map((altitudeM) => {
    const { uMps, vMps } = windAt(view.profile, altitudeM, true);
    const { headMps, crossMps } = componentsOfVector(uMps, vMps, site.facingDeg);
    return Math.max(-headMps, Math.abs(crossMps));
  })));
  return [...cautions, ...over('windAloft', 'm/s', aloft.filter(({ value }) => value >= thresholds.windAloftMps))];
}

function gradientAtLanding(view: HourView): number {
  const { site } = view.setup;
  const roughnessM = site.kind === 'launch' ? site.landing.roughnessM : site.roughnessM;
  return view.hour.wind10m.speedMps * (1 - logLawFactor({ fromM: 10, toM: 2, roughnessM }));
}

function lineDrift({ setup: { site }, hours }: CautionInput): Caution[] {
  if (site.kind !== 'strip' || site.lineClearM === null) return [];
  const clearM = site.lineClearM;
  const outside = hours.flatMap(({ heading, validAt }): Reading[] => (heading === null || heading.lineDriftM === null || heading.lineDriftM <= clearM ? [] : [{ value: heading.lineDriftM, atMs: Date.parse(validAt) }]));
  return over('lineDrift', 'm', outside);
}

/** Cautions about what lies just outside a window. */
function windowCautions(given: CautionInput): Caution[] {
  const { input: { thresholds }, legalDay } = given;
  const speed = (view: HourView): number => view.hour.wind10m.speedMps;
  return given.windows.flatMap((window) => {
    const after = speakers(given.poll).flatMap((voter) => {
      const end = voter.members[0]?.get(window.toMs);
      return [1, 2].flatMap((step) => {
        const later = voter.members[0]?.get(window.toMs + step * HOUR_MS);
        return end === undefined || later === undefined ? [] : [{ rise: speed(later) - speed(end), turn: turnOf(end, later) }];
      });
    });
    const rise = largest(after.map((each) => each.rise));
    const turn = largest(after.map((each) => each.turn));
    const wet = largest(speakers(given.poll).flatMap((voter) => [-2, -1, 1, 2].map((step) => voter.members[0]?.get((step < 0 ? window.fromMs : window.toMs) + step * HOUR_MS)?.hour.precipitationMm ?? NaN)));
    const at = isoUtc(window.toMs);
    const span = { from: isoUtc(window.fromMs), to: at, subject: null };
    const toDark = 'none' in legalDay ? NaN : (legalDay.toMs - window.toMs) / MINUTE_MS;
    return [
      ...(rise >= thresholds.windRisingMps ? [{ id: 'windRising' as const, value: rise, unit: 'm/s', from: at, to: null, subject: null }] : []),
      ...(turn >= thresholds.windTurningDeg ? [{ id: 'windTurning' as const, value: turn, unit: '°', from: at, to: null, subject: null }] : []),
      ...(wet >= thresholds.rainNearMm ? [{ id: 'rainNear' as const, value: wet, unit: 'mm', ...span }] : []),
      ...(toDark <= thresholds.lastLightMin && !('none' in legalDay) ? [{ id: 'lastLight' as const, value: toDark, unit: 'min', from: at, to: isoUtc(legalDay.toMs), subject: null }] : []),
    ];
  });
}

function largest(values: readonly number[]): number {
  return Math.max(-Infinity, ...values.filter(Number.isFinite));
}

function siteCautions(given: CautionInput): Caution[] {
  const { input: { thresholds }, setup: { site } } = given;
  const thin = readings(given, (view) => densityAltitudeM(densityAt(view.column, site.elevationM)) - geopotentialM(site.elevationM));
  const lastThin = thin.filter(({ value }) => value >= thresholds.thinAirM);
  const axisOf = (hour: JudgedHour): number | null => (site.kind === 'launch' ? site.facingDeg : hour.heading?.headingDeg ?? null);
  const dazzling = given.hours.flatMap((hour): Reading[] => {
    const axis = axisOf(hour);
    const atMs = Date.parse(hour.validAt);
    const sun = sunAt(atMs, site);
    return axis !== null && sun.altitudeDeg > 0 && sun.altitudeDeg <= thresholds.lowSunDeg && angleBetweenDeg(sun.azimuthDeg, axis) <= thresholds.lowSunOffAxisDeg ? [{ value: sun.altitudeDeg, atMs }] : [];
  });
  return [
    ...over('thinAir', 'm', lastThin).map((caution) => ({ ...caution, value: (caution.value ?? 0) + site.elevationM })),
    ...over('lowSun', '°', dazzling, 'least'),
    ...site.localWind.flatMap((known) => localWind(given, known)),
  ];
}

/** Said when the site's usual wind is not in the forecast: no source has half of it from near that direction in its hours. */
function localWind(given: CautionInput, known: Setup['site']['localWind'][number]): Caution[] {
  const { site } = given.setup;
  const inHours = given.hours.filter(({ validAt }) => {
    const { hour } = localDateTime(Date.parse(validAt), site.timeZone);
    return known.fromHour <= known.toHour ? hour >= known.fromHour && hour <= known.toHour : hour >= known.fromHour || hour <= known.toHour;
  });
  const first = inHours[0];
  const last = inHours.at(-1);
  if (first === undefined || last === undefined) return [];
  const forecast = inHours.some(({ validAt }) => speakers(given.poll).some((voter) => {
    const wind = voter.members[0]?.get(Date.parse(validAt))?.hour.wind10m;
    return wind !== undefined && wind.speedMps >= known.speedMps / 2 && angleBetweenDeg(wind.fromDeg, known.fromDeg) <= 60;
  }));
  return forecast ? [] : [{ id: 'localWind', value: known.speedMps, unit: 'm/s', from: first.validAt, to: last.validAt, subject: null }];
}

function sourceCautions({ input, poll, hours }: CautionInput): Caution[] {
  const whole = { from: null, to: null };
  const spread = hours.flatMap((hour): Reading[] => (hour.wind === null ? [] : [{ value: hour.wind.mostMps - hour.wind.leastMps, atMs: Date.parse(hour.validAt) }]));
  const voices = speakers(poll);
  return [
    ...poll.failures.map(({ source }) => ({ id: 'noVote' as const, value: null, unit: null, ...whole, subject: source })),
    ...over('disagree', 'm/s', spread.filter(({ value }) => value >= input.thresholds.disagreeMps)),
    ...poll.votes.flatMap(({ source, state, runAgeHours }) => (state === 'voted' && runAgeHours !== null && runAgeHours > input.thresholds.oldForecastH ? [{ id: 'oldForecast' as const, value: runAgeHours, unit: 'h', ...whole, subject: source }] : [])),
    ...(voices.length === 1 ? [{ id: 'singleSource' as const, value: null, unit: null, ...whole, subject: voices[0]?.source ?? null }] : []),
    ...poll.deterministic.flatMap(({ source, forecast }) => (forecast.runAt === null && forecast.trustedWithoutRunTime ? [{ id: 'noRunTime' as const, value: null, unit: null, ...whole, subject: source }] : [])),
    ...(poll.demo ? [{ id: 'demo' as const, value: null, unit: null, ...whole, subject: null }] : []),
  ];
}
