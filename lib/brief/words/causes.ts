/**
 * What a margin says, in a pilot's words: "a gust leaves 1.2 m/s forward; the sheet asks 2.5". The number found comes
 * first and the limit after it, so that a sentence cut short never shows a limit without what was held against it.
 */
import type { CombinedMargin, JudgedDay } from '../day.ts';
import type { MarginId } from '../../margin/ids.ts';
import { pairTexts, quantityText, type Quantity } from '../units-out.ts';
import { hourName } from './clock.ts';
import { missingPhrase } from './fields.ts';
import { keepsUnit, limitOwner, limitSense, marginName } from './margins.ts';
import { sentence } from './plain.ts';
import type { Reader } from './reader.ts';

type Said = Pick<CombinedMargin, 'id' | 'spare' | 'limit' | 'demand' | 'unit' | 'status' | 'missing' | 'source'>;

/** What was found, with its unit already written: "gusts reach 7.9 m/s". */
function foundPhrase(id: MarginId, found: string): string {
  switch (id) {
    case 'meanWind': return `the mean wind at launch reaches ${found}`;
    case 'gust': return `a gust at launch reaches ${found}`;
    case 'gustSpread': return `gusts stand ${found} above the mean wind`;
    case 'crosswind': return `a gust blows ${found} across the launch`;
    case 'tailwind': return `a gust blows ${found} from behind the launch`;
    case 'offAxis': return `the wind stands ${found} off the launch axis`;
    case 'forwardLaunch': return `a gust leaves ${found} forward`;
    case 'forwardAloft': return `the wind above launch leaves ${found} of airspeed`;
    case 'upperWind': return `the wind above launch reaches ${found}`;
    case 'overTheBack': return `above launch the wind comes over the back with ${found}`;
    case 'arrival': return `the glide arrives ${found} above the landing`;
    case 'landingGradient': return `the gradient at the landing leaves ${found} above stall`;
    case 'run': return `the take-off run needs ${found}`;
    case 'slope': return `the slope is ${found} steep`;
    case 'thermal': return `thermals reach ${found}`;
    case 'cloudBase': return `the cloud base lies ${found} above launch`;
    case 'storm': return `CAPE reaches ${found}`;
    case 'rain': return `rain reaches ${found}`;
    case 'rainChance': return `the chance of rain is ${found}`;
    case 'visibility': return `the visibility is ${found}`;
    case 'daylight': return `it is ${found} to the nearer end of the legal day`;
    case 'pressureStep': return `the pressure step across the mountains is ${found}`;
    case 'sector': return `the wind comes from a sheltered sector with ${found}`;
    case 'ridgeLift': return `the ridge lifts ${found} more than the wing sinks`;
    case 'agreement': return `in ${found} of the forecast members no limit is passed`;
    case 'stripWind': return `the mean wind on the strip reaches ${found}`;
    case 'stripGust': return `a gust on the strip reaches ${found}`;
    case 'stripCross': return `a gust blows ${found} across the strip`;
    case 'stripTail': return `a gust blows ${found} from behind on the strip`;
    case 'climbShear': return `the wind changes by ${found} in the climb`;
    case 'towHeight': return `the tow releases at ${found}`;
    case 'forwardAtRelease': return `the wind at release leaves ${found} of airspeed`;
  }
}

/** A found value below zero reads better as what it does than with a minus sign; margins not named cannot be below it. */
const BELOW_ZERO: Readonly<Partial<Record<MarginId, (size: string) => string>>> = {
  forwardLaunch: (size) => `a gust pushes the wing back at ${size}`,
  forwardAloft: (size) => `the wind above launch is ${size} faster than the wing`,
  forwardAtRelease: (size) => `the wind at release is ${size} faster than the wing`,
  arrival: (size) => `the glide ends ${size} below the landing`,
  landingGradient: (size) => `the gradient at the landing takes the wing ${size} below stall`,
  ridgeLift: (size) => `the ridge lifts ${size} less than the wing sinks`,
  daylight: (size) => `the legal day is over or not begun by ${size}`,
};

/** Beyond a limit without a number: there is no solution, or a sign that needs none. */
const NO_SOLUTION: Readonly<Partial<Record<MarginId, string>>> = {
  forwardLaunch: 'a gust across the launch is faster than the wing: nothing is left forward',
  arrival: 'the glide does not arrive at the landing',
  storm: 'a thunderstorm is signalled in this hour or the next two',
  cloudBase: 'the launch is in cloud',
};

function noSolution(id: MarginId): string {
  return NO_SOLUTION[id] ?? `${lower(marginName(id))} has no solution`;
}

/** Nothing found reads better than 0.0 of it. */
const NOTHING: Readonly<Partial<Record<MarginId, string>>> = {
  crosswind: 'no gust blows across the launch', tailwind: 'no gust blows from behind the launch', stripCross: 'no gust blows across the strip',
  stripTail: 'no gust blows from behind on the strip', overTheBack: 'above launch no wind comes over the back', rain: 'no rain', thermal: 'no thermals', storm: 'no CAPE',
  offAxis: 'no wind strong enough to stand off the launch axis',
};

function lower(name: string): string {
  return name.slice(0, 1).toLowerCase() + name.slice(1);
}

function limitPhrase(id: MarginId, limit: string): string {
  const verb = limitSense(id) === 'most' ? 'allows' : 'asks';
  switch (limitOwner(id)) {
    case 'sheet': return `the sheet ${verb} ${limit}`;
    case 'site': return `the site ${verb} ${limit}`;
    case 'law': return `the law ${verb} ${limit}`;
  }
}

function quantity(margin: Said, value: number): Quantity {
  return { value, unit: margin.unit, asIs: keepsUnit(margin.id) };
}

/** A sheet without a limit on CAPE is still held to the thunderstorm signal, which has no number. */
export function isSignalOnly(margin: Pick<CombinedMargin, 'id' | 'limit' | 'demand'>): boolean {
  return margin.id === 'storm' && margin.limit === 0 && margin.demand === 0;
}

/** The margin as a clause without its hour. */
export function causeClause(margin: Said, reader: Reader): string {
  const { id, status, demand, limit } = margin;
  if (status === 'unknown') {
    const why = margin.source === null && margin.missing.length === 0 ? 'no source has a vote on it' : missingPhrase(margin.missing);
    return `nothing is known of the ${lower(marginName(id))}: ${why}`;
  }
  if (margin.spare === null || demand === null) return noSolution(id);
  if (isSignalOnly(margin)) return 'no thunderstorm is signalled in this hour or the next two';
  const nothing = demand === 0 && limit !== null ? NOTHING[id] : undefined;
  if (nothing !== undefined && limit !== null) return `${nothing}; ${limitPhrase(id, pairTexts({ first: quantity(margin, 0), second: quantity(margin, limit) }, reader.units).second)}`;
  if (id === 'cloudBase' && demand === 0) return noSolution(id);
  if (limit === null) return foundPhrase(id, quantityText(quantity(margin, demand), reader.units));
  const size = quantity(margin, Math.abs(demand));
  const pair = pairTexts({ first: size, second: quantity(margin, limit) }, reader.units);
  const found = (demand < 0 ? BELOW_ZERO[id]?.(pair.first) : undefined)
    ?? foundPhrase(id, pairTexts({ first: quantity(margin, demand), second: quantity(margin, limit) }, reader.units).first);
  // A limit of nothing on the legal day is no news.
  if (id === 'daylight') return found;
  return `${found}; ${limitPhrase(id, pair.second)}`;
}

/**
 * The margin as a sentence of its hour: "At 13 h a gust leaves 1.2 m/s forward; the sheet asks 2.5." On a day that
 * nothing closes it is no cause but the tightest margin: "Tightest at 13 h: a gust leaves ...".
 */
export function causeSentence(
  day: Pick<JudgedDay, 'timeZone' | 'hours'>, cause: { readonly id: MarginId; readonly validAt: string }, reader: Reader, as: 'cause' | 'tightest' = 'cause',
): string {
  const hour = day.hours.find((candidate) => candidate.validAt === cause.validAt);
  const margin = hour?.margins.find((candidate) => candidate.id === cause.id);
  const hourText = hourName(cause.validAt, day.timeZone);
  const at = as === 'cause' ? `At ${hourText}` : `Tightest at ${hourText}:`;
  if (margin === undefined) return sentence(`${at} nothing is known of the ${lower(marginName(cause.id))}`);
  return sentence(`${at} ${causeClause(margin, reader)}`);
}
