import { condensationHeightM } from '../air/moist-air.ts';
import type { CheckedLevel } from '../forecast/ranges.ts';
import { localDate, MINUTE_MS } from '../time.ts';
import { thermalNeeds } from './arrival-rule.ts';
import type { HourView } from './hour-view.ts';
import type { MarginId, MarginUnit } from './ids.ts';
import { margin, type Demand } from './margin.ts';
import { airNeeds, fixed, fromSheet, limitTerm, term, type Need, type Rule } from './rule.ts';
import type { LimitName } from './sheet.ts';
import { readAtM } from './strip-profile.ts';

/** Margins of the sky: thermals, cloud, storm, rain, visibility, the foehn step, daylight. */

const thermal: Rule = {
  id: 'thermal', unit: 'm/s', sense: 'atMost', limit: fromSheet('maxThermalMps'),
  needs: thermalNeeds,
  demand: (view) => view.thermalMps,
  terms(view, limit) {
    const inputs = view.heatFluxWm2 <= 0 ? [] : [
      term('mixed-layer depth', view.mixedLayer.depthM, 'm above the model ground', view.mixedLayer.origin),
      term('temperature at 2 m', view.hour.temperature2mC, '°C', 'forecast'),
    ];
    return [
      term('heat flux', view.heatFluxWm2, 'W/m²', view.declares('sensibleHeatWm2') ? 'heat flux of the forecast' : '0.35 × shortwave radiation'),
      ...inputs,
      limitTerm(view, 'maxThermalMps', limit, 'm/s'),
      term('thermal strength w*', -view.thermalMps, 'm/s', 'cube root of (g/T) × depth × heat flux / (density × 1005)'),
    ];
  },
};

/** Relative humidity from which a level counts as cloud, percent: starting value, common practice, no source. */
const CLOUD_HUMIDITY_PCT = 95;

/** Height of the place that the cloud base is counted from, and the lowest height a flight passes. */
function cloudFrame(view: HourView): { readonly placeM: number; readonly lowestM: number; readonly aboveM: number } {
  const { site } = view.setup;
  if (site.kind === 'launch') return { placeM: site.elevationM, lowestM: site.landing.elevationM, aboveM: 0 };
  const stripM = readAtM(view, site, 0);
  return { placeM: stripM, lowestM: stripM, aboveM: view.tow.end.releaseM };
}

/** Cloud base above the place: the parcel's condensation level or the first humid level, whichever is lower. */
function cloudBaseM(view: HourView): { readonly heightM: number; readonly origin: string } {
  const { placeM, lowestM } = cloudFrame(view);
  const { temperatureC, dewPointC } = view.airAt(placeM);
  const parcelM = condensationHeightM(temperatureC, dewPointC);
  const parcel = { heightM: parcelM, origin: `condensation level of ${fixed(temperatureC)} °C with dew point ${fixed(dewPointC)} °C` };
  if (!view.declares('levels')) return parcel;
  if (view.hour.levels.length === 0) return { heightM: NaN, origin: '' };
  const flown = view.hour.levels.filter(({ altitudeM }) => altitudeM > view.hour.gridElevationM + 10 && altitudeM >= lowestM);
  const humid = (level: CheckedLevel): boolean => level.relativeHumidityPct >= CLOUD_HUMIDITY_PCT;
  const origin = (level: CheckedLevel): string => `humidity ${fixed(level.relativeHumidityPct, 0)} % at ${level.pressureHpa} hPa`;
  const inCloud = flown.find((level) => level.altitudeM <= placeM && humid(level));
  if (inCloud !== undefined) return { heightM: 0, origin: origin(inCloud) };
  let belowM = lowestM;
  for (const level of flown) {
    // A level whose height is not known may lie as low as the one below it.
    const heightM = (Number.isNaN(level.speedMps) && Number.isNaN(level.temperatureC) ? belowM : level.altitudeM) - placeM;
    if (heightM >= parcelM || (heightM > 0 && Number.isNaN(parcelM))) return parcel;
    if (Number.isNaN(level.relativeHumidityPct)) return { heightM: NaN, origin: '' };
    if (humid(level)) return { heightM, origin: origin(level) };
    belowM = level.altitudeM;
  }
  return parcel;
}

const cloudBase: Rule = {
  id: 'cloudBase', unit: 'm', sense: 'atLeast', limit: fromSheet('minCloudBaseM'),
  needs(view) {
    const { site } = view.setup;
    const levels: Need[] = view.declares('levels') ? ['levels'] : [];
    return site.kind === 'launch' ? [...airNeeds(view, site.elevationM), ...levels] : [...levels, ...towNeeds(view)];
  },
  demand: (view) => cloudBaseM(view).heightM - cloudFrame(view).aboveM,
  terms(view, limit) {
    const { heightM, origin } = cloudBaseM(view);
    const { aboveM } = cloudFrame(view);
    const place = view.setup.site.kind === 'launch' ? 'launch' : 'strip';
    return [
      term(`cloud base above the ${place}`, heightM, 'm', origin),
      ...(aboveM === 0 ? [] : [term('release height', -aboveM, 'm', 'tow climb of this hour')]),
      limitTerm(view, 'minCloudBaseM', -limit, 'm'),
    ];
  },
};

/** Fields behind the tow climb: the profile up to a release height, and the density at the strip. */
export function towNeeds(view: HourView): Need[] {
  const { site } = view.setup;
  const winds = (['wind10m', 'nearGround', 'levels'] as const).filter((field) => view.declares(field));
  return [...winds, ...(climbsOutOfSight(view) ? ['levels' as const] : []), ...airNeeds(view, site.kind === 'strip' ? readAtM(view, site, 0) : site.elevationM)];
}

/** Whether a climb ends where the declared winds end: they do not reach. One that meets a hole in them, or lacks its density, is unknown. */
function climbsOutOfSight(view: HourView): boolean {
  const { site } = view.setup;
  if (site.kind !== 'strip' || Number.isFinite(view.tow.end.releaseM)) return false;
  const isWhole = view.profile.uMps.every((uMps) => Number.isFinite(uMps));
  return isWhole && Number.isFinite(view.trimAt(readAtM(view, site, 0)));
}

/** WMO code table 4677: thunderstorm without precipitation, in the past hour, now, and thunder with any precipitation. */
const THUNDER_CODES: ReadonlySet<number> = new Set([17, 29, 91, 92, 93, 94, 95, 96, 97, 98, 99]);

/** Whether a thunderstorm is signalled in this hour or the next two; 'unknown' when one of those given lacks its code. */
function thunder(view: HourView): 'signalled' | 'none' | 'unknown' {
  const codes = [view.hour, ...view.context.next.slice(0, 2)].map(({ weatherCode }) => weatherCode);
  if (codes.some((code) => THUNDER_CODES.has(code))) return 'signalled';
  return codes.some((code) => Number.isNaN(code)) ? 'unknown' : 'none';
}

/** Always judged: a signalled thunderstorm is beyond any sheet. CAPE is compared where the sheet limits it. */
const storm: Rule = {
  id: 'storm', unit: 'J/kg', sense: 'atMost',
  limit: ({ sheet }) => sheet.limits.maxCapeJkg ?? 0,
  // A signalled thunderstorm needs no CAPE: a source that gives none has its vote in this.
  needs: (view) => (view.setup.sheet.limits.maxCapeJkg === undefined || thunder(view) === 'signalled' ? ['weatherCode'] : ['weatherCode', 'capeJkg']),
  demand(view): Demand {
    const signal = thunder(view);
    if (signal === 'signalled') return 'no solution';
    const { maxCapeJkg } = view.setup.sheet.limits;
    if (maxCapeJkg === undefined) return signal === 'unknown' ? NaN : 0;
    const { capeJkg } = view.hour;
    // CAPE over the limit is proof enough; CAPE under it is none while a weather code is missing.
    const proven = margin({ demand: capeJkg, limit: maxCapeJkg, sense: 'atMost', band: 0 }).status === 'beyond';
    return signal === 'none' || proven ? capeJkg : NaN;
  },
  terms(view, limit) {
    if (view.setup.sheet.limits.maxCapeJkg === undefined) return [term('thunderstorm signals in this hour and the next two', 0, 'J/kg', 'the sheet limits no CAPE')];
    return [limitTerm(view, 'maxCapeJkg', limit, 'J/kg'), term('CAPE', -view.hour.capeJkg, 'J/kg', 'forecast; no thunderstorm code in this hour or the next two')];
  },
};

interface Direct {
  readonly id: MarginId;
  readonly unit: MarginUnit;
  readonly sense: 'atMost' | 'atLeast';
  readonly limitName: LimitName;
  readonly field: Need;
  readonly words: string;
  readonly value: (view: HourView) => number;
}

/** A forecast value held straight against a limit. */
function direct({ id, unit, sense, limitName, field, words, value }: Direct): Rule {
  const sign = sense === 'atMost' ? 1 : -1;
  return {
    id, unit, sense, limit: fromSheet(limitName), needs: () => [field], demand: value,
    terms: (view, limit) => [limitTerm(view, limitName, sign * limit, unit), term(words, -sign * value(view), unit, 'forecast')],
  };
}

const rain = direct({ id: 'rain', unit: 'mm', sense: 'atMost', limitName: 'maxRainMm', field: 'precipitationMm', words: 'precipitation', value: ({ hour }) => hour.precipitationMm });
const rainChance = direct({ id: 'rainChance', unit: '%', sense: 'atMost', limitName: 'maxRainChancePct', field: 'precipitationProbabilityPct', words: 'probability of precipitation', value: ({ hour }) => hour.precipitationProbabilityPct });
const visibility = direct({ id: 'visibility', unit: 'm', sense: 'atLeast', limitName: 'minVisibilityM', field: 'visibilityM', words: 'visibility', value: ({ hour }) => hour.visibilityM });

const pressureStep: Rule = {
  id: 'pressureStep', unit: 'hPa', sense: 'atMost',
  limit: ({ sheet, site }) => (site.pressureStep === null ? 'the site has no pair of reference points' : sheet.limits.maxPressureStepHpa ?? 'the sheet has no maxPressureStepHpa'),
  needs: () => ['referencePressureHpa'],
  demand: ({ hour }) => Math.abs(hour.referencePressureHpa.a - hour.referencePressureHpa.b),
  terms(view, limit) {
    const { a, b } = view.hour.referencePressureHpa;
    const points = view.setup.site.pressureStep;
    return [
      limitTerm(view, 'maxPressureStepHpa', limit, 'hPa'),
      term('pressure step', -Math.abs(a - b), 'hPa', `${points?.a.name ?? 'a'} ${fixed(a)} hPa, ${points?.b.name ?? 'b'} ${fixed(b)} hPa at sea level`),
    ];
  },
};

/** Minutes from an instant to the nearer end of the legal day of its local date; negative outside it. */
const daylight: Rule = {
  id: 'daylight', unit: 'min', sense: 'atLeast', limit: () => 0, needs: () => [],
  demand(view) {
    const day = view.setup.legalDayAt(view.hour.validAtMs);
    if ('none' in day) return NaN;
    return Math.min(view.hour.validAtMs - day.fromMs, day.toMs - view.hour.validAtMs) / MINUTE_MS;
  },
  terms(view) {
    const { site } = view.setup;
    const minutes = this.demand(view);
    return [term('to the nearer end of the legal day', minutes === 'no solution' ? NaN : minutes, 'min', `${site.daylight.rule} of ${localDate(view.hour.validAtMs, site.timeZone)}, ${site.daylight.beforeMin} min before, ${site.daylight.afterMin} min after`)];
  },
};

export const skyRules: readonly Rule[] = [thermal, cloudBase, storm, rain, rainChance, visibility, daylight, pressureStep];
