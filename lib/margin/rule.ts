import type { ConditionField } from '../forecast/conditions.ts';
import type { HourView } from './hour-view.ts';
import type { MarginId, MarginUnit, Term } from './ids.ts';
import type { Estimate } from './launch-wind.ts';
import type { Demand } from './margin.ts';
import type { Setup } from './setup.ts';
import type { LimitName } from './sheet.ts';

/** A field a margin needs; where several will do, the source's own choice among them is listed. */
export type Need = ConditionField;

/**
 * One margin as a rule. `limit` gives the number it is held to, or in a sentence why it is not judged here. `demand`
 * measures; NaN is unknown. `terms` writes the same sum out: terms in the margin's unit add up to the spare.
 */
export interface Rule {
  readonly id: MarginId;
  readonly unit: MarginUnit;
  readonly sense: 'atMost' | 'atLeast';
  limit(setup: Setup): number | string;
  /** Where the limit itself depends on the hour (a sector); null when none applies in this hour. */
  limitAt?(view: HourView): number | null;
  needs(view: HourView): readonly Need[];
  demand(view: HourView): Demand;
  terms(view: HourView, limit: number): readonly Term[];
}

/** A limit of the sheet, or that the sheet has none. */
export function fromSheet(name: LimitName): (setup: Setup) => number | string {
  return ({ sheet }) => sheet.limits[name] ?? `the sheet has no ${name}`;
}

export function term(name: string, value: number, unit: string, origin: string): Term {
  return { term: name, value, unit, origin };
}

/** The limit as the first or last line of a working. */
export function limitTerm(view: HourView, name: LimitName, value: number, unit: string): Term {
  const { sheet } = view.setup;
  const basis = sheet.basis[name];
  return term('limit of the sheet', value, unit, `${name} of ${sheet.id}${basis === undefined ? '' : ` (${basis})`}`);
}

export interface Picked {
  readonly estimate: Estimate | null;
  /** NaN when there is no estimate or one of them is unknown. */
  readonly value: number;
}

/** The kept estimate with the largest (or least) value of a measure: the one least favourable to the margin. */
export function pick(winds: readonly Estimate[], which: 'largest' | 'least', measure: (estimate: Estimate) => number): Picked {
  let best: Picked = { estimate: null, value: NaN };
  for (const estimate of winds) {
    const value = measure(estimate);
    if (Number.isNaN(value)) return { estimate, value };
    if (best.estimate === null || (which === 'largest' ? value > best.value : value < best.value)) best = { estimate, value };
  }
  return best;
}

/** Fields behind the wind estimates. A launch that no estimate reaches needs levels the source does not give. */
export function windNeeds(view: HourView): readonly Need[] {
  return view.windNeeds;
}

export function gustNeeds(view: HourView): readonly Need[] {
  return view.gustNeeds;
}

/** The wind fields a source declares for its profile. */
function declaredWinds(view: HourView): Need[] {
  return (['wind10m', 'nearGround', 'levels'] as const).filter((field) => view.declares(field));
}

/** Fields behind the profile up to a height; levels, when what is declared does not reach it. */
export function profileNeeds(view: HourView, topM: number): Need[] {
  const declared = declaredWinds(view);
  if (!view.declares('levels') && !view.reaches(topM)) return [...declared, 'levels'];
  return declared;
}

/** Fields behind the air at a height; a column without levels ends 150 m above the model's ground. */
export function airNeeds(view: HourView, altitudeM: number): readonly Need[] {
  const [groundM, lowestLevelM] = view.column.altitudeM;
  if (lowestLevelM !== undefined && altitudeM >= lowestLevelM) return ['levels'];
  const riseM = altitudeM - (groundM ?? NaN);
  // Declared levels that did not come could have begun anywhere above the ground: missing, whatever else is not declared.
  if (riseM > 0 && lowestLevelM === undefined && view.declares('levels') && view.column.carriesUp === false) return ['levels'];
  const surface = ['temperature2mC', 'dewPoint2mC', 'surfacePressureHpa'] as const;
  return riseM > 0 && (!view.column.carriesUp || riseM > 150) ? [...surface, 'levels'] : surface;
}

export function fixed(value: number, digits = 1): string {
  return value.toFixed(digits);
}

/** How an estimate came about, for the origin of a term. */
export function estimateOrigin(estimate: Estimate): string {
  const raw = estimate.calm ? 'calm' : `${fixed(estimate.raw.speedMps)} m/s from ${fixed(estimate.raw.fromDeg, 0)}°`;
  switch (estimate.name) {
    case 'ground': return estimate.speedUp > 0 ? `10 m wind ${raw}, its part up the slope × ${fixed(1 + estimate.speedUp, 3)} over the hill` : `10 m wind ${raw}`;
    case 'freeAir': return `free air at launch height ${raw}`;
    case 'strip': return `10 m wind ${raw}`;
  }
}
