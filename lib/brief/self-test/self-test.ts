/**
 * The judge judged: places and weather whose verdicts are known, through the very function that judges the morning. What
 * it gets wrong is named; an empty list is the only good answer.
 */
import type { MarginId, Verdict } from '../../margin/ids.ts';
import type { LimitSheet } from '../../margin/sheet.ts';
import type { Site } from '../../site.ts';
import type { DayInput } from '../day-input.ts';
import type { JudgedDay } from '../day.ts';
import type { CautionThresholds } from '../thresholds.ts';
import { CANARIES, CASES, LAUNCH_SPARES, STRIP_SPARES, type GoldenCase } from './golden.ts';
import { DATE, forecast, LAUNCH, LAUNCH_SHEET, NOW, STRIP, STRIP_SHEET, WING } from './places.ts';

export type Judge = (input: DayInput) => JudgedDay;

const LETTER: Readonly<Record<Verdict, string>> = { within: 'w', close: 'c', unknown: 'u', beyond: 'b' };
const WORST: readonly Verdict[] = ['beyond', 'unknown', 'close', 'within'];

/** In each margin's own unit: the last digit that is written down. */
const ROUNDED = 0.001;

/** The two canary places, and the quiet day with its spares: before every fan-out. */
export function canaryFaults(judge: Judge, thresholds: CautionThresholds): string[] {
  return [
    ...CANARIES.flatMap((each) => faultsOf(judge, thresholds, each)),
    ...spareFaults(judge, thresholds, { site: LAUNCH, sheet: LAUNCH_SHEET, spares: LAUNCH_SPARES }),
  ];
}

/** Everything there is: for a judge that has not been tested yet. */
export function selfTestFaults(judge: Judge, thresholds: CautionThresholds): string[] {
  return [
    ...canaryFaults(judge, thresholds),
    ...spareFaults(judge, thresholds, { site: STRIP, sheet: STRIP_SHEET, spares: STRIP_SPARES }),
    ...CASES.flatMap((each) => faultsOf(judge, thresholds, each)),
  ];
}

export function inputFor(place: { readonly site: Site; readonly sheet: LimitSheet }, answers: DayInput['answers'], thresholds: CautionThresholds): DayInput {
  return {
    ...place, wing: WING, wingKey: 'self-test', wingName: 'self-test', localDate: DATE, issuedAt: NOW, validUntil: `${DATE}T24:00:00Z`, answers,
    demo: false, thresholds, storedGroundM: {},
  };
}

function faultsOf(judge: Judge, thresholds: CautionThresholds, { name, answers, says }: GoldenCase): string[] {
  try {
    const said = saidBy(judge(inputFor({ site: LAUNCH, sheet: LAUNCH_SHEET }, answers, thresholds)));
    return said === says ? [] : [`${name}: says ${said}, not ${says}`];
  } catch {
    return [`${name}: throws`];
  }
}

/** A day that does not hang together says something that no case does. */
function saidBy(day: JudgedDay): string {
  const verdicts = day.hours.map((hour) => hour.verdict);
  const letters = verdicts.map((verdict) => LETTER[verdict]).join('');
  const isWorst = day.verdict === (WORST.find((verdict) => verdicts.includes(verdict)) ?? 'unknown');
  const isHeld = day.hours.every((hour) => hour.verdict === (WORST.find((verdict) => hour.margins.some(({ status }) => status === verdict)) ?? 'unknown'));
  const voted = day.sources.filter(({ state }) => state === 'voted').length;
  return `${letters} ${day.windows.length} ${voted}${isWorst ? '' : ' with another verdict of the day'}${isHeld ? '' : ' with other margins'}`;
}

function spareFaults(judge: Judge, thresholds: CautionThresholds, golden: { readonly site: Site; readonly sheet: LimitSheet; readonly spares: readonly (readonly [MarginId, number])[] }): string[] {
  try {
    const value = forecast();
    const day = judge(inputFor(golden, [{ source: value.source, kind: value.kind, outcome: { ok: true, value } }], thresholds));
    const found = new Map(day.hours[1]?.margins.map((margin) => [margin.id, margin.spare]));
    const says = saidBy(day) === 'www 1 1' ? [] : [`${golden.site.kind}: says ${saidBy(day)} of a quiet day`];
    const wrong = golden.spares.filter(([id, spare]) => !(Math.abs((found.get(id) ?? NaN) - spare) <= ROUNDED));
    const missing = found.size === golden.spares.length ? [] : [`${golden.site.kind}: ${found.size} margins, not ${golden.spares.length}`];
    return [...says, ...missing, ...wrong.map(([id]) => `${golden.site.kind}: another spare of ${id}`)];
  } catch {
    return [`${golden.site.kind}: throws`];
  }
}
