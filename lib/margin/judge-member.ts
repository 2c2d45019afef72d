import type { ConditionField } from '../forecast/conditions.ts';
import type { CheckedHour, CheckedWind } from '../forecast/ranges.ts';
import { HOUR_MS } from '../time.ts';
import { HourView, reachOf } from './hour-view.ts';
import type { Margin, Term } from './ids.ts';
import { closeBand, margin } from './margin.ts';
import type { Need, Rule } from './rule.ts';
import { rulesFor } from './rules.ts';
import type { Setup } from './setup.ts';

/** Another source's mixed-layer depth at an instant, or null. */
export type BorrowMixedLayer = (validAtMs: number) => { readonly depthM: number; readonly source: string } | null;

/** The heading another source has chosen for an instant, or null. */
export type SetHeading = (validAtMs: number) => { readonly headingDeg: number; readonly by: string } | null;

export interface MemberContext {
  readonly declares: ReadonlySet<ConditionField>;
  readonly borrow: BorrowMixedLayer;
  readonly setHeading: SetHeading;
}

/** A source that stands alone: nothing to borrow, nobody who sets its heading. */
export function alone(declares: readonly ConditionField[]): MemberContext {
  return { declares: new Set(declares), borrow: () => null, setHeading: () => null };
}

/** One member's hours as views, in the order given; each knows the next two hours where the member has them. */
export function viewsOf(setup: Setup, hours: readonly CheckedHour[], context: MemberContext): HourView[] {
  const { declares, borrow, setHeading } = context;
  const byInstant = new Map(hours.map((hour) => [hour.validAtMs, hour]));
  const reachM = reachOf(hours, declares);
  return hours.map((hour) => {
    const next = [1, 2].flatMap((step) => byInstant.get(hour.validAtMs + step * HOUR_MS) ?? []);
    return new HourView(setup, hour, { declares, next, reachM, setHeading: setHeading(hour.validAtMs), borrowedMixedLayer: borrow(hour.validAtMs) });
  });
}

/** The rules a sheet and site are judged on, and those they are not, each with the reason. */
export function judgedRules(setup: Setup): { readonly rules: readonly Rule[]; readonly notJudged: readonly { readonly id: Margin['id']; readonly why: string }[] } {
  const rules: Rule[] = [];
  const notJudged: { id: Margin['id']; why: string }[] = [];
  for (const rule of rulesFor(setup.site.kind)) {
    const held = rule.limit(setup);
    if (typeof held === 'string') notJudged.push({ id: rule.id, why: held });
    else rules.push(rule);
  }
  return { rules, notJudged };
}

function limitOf(rule: Rule, view: HourView): number | null {
  if (rule.limitAt !== undefined) return rule.limitAt(view);
  const held = rule.limit(view.setup);
  return typeof held === 'string' ? null : held;
}

/** Measures one margin; null when it does not apply in this hour. */
export function measure(rule: Rule, view: HourView): Margin | null {
  const { id, unit, sense } = rule;
  const needs = rule.needs(view);
  if (!needs.every((need) => view.context.declares.has(need))) {
    const undeclared = new Set(needs.filter((need) => !view.declares(need)));
    return { id, spare: null, limit: finiteOrNull(limitOf(rule, view)), demand: null, unit, status: 'unknown', missing: [...undeclared], noVote: true };
  }
  const held = limitOf(rule, view);
  if (held === null) return null;
  const demand = rule.demand(view);
  const band = closeBand(id, { unit, limit: held, sheetBand: view.setup.sheet.closeBands[id] });
  const { spare, status } = margin({ demand, limit: held, sense, band });
  return {
    id, spare, limit: finiteOrNull(held), demand: demand === 'no solution' ? null : finiteOrNull(demand), unit, status,
    missing: status === 'unknown' ? missingFields(view, needs) : [], noVote: false,
  };
}

function finiteOrNull(value: number | null): number | null {
  return value !== null && Number.isFinite(value) ? value : null;
}

/** The working of one margin of one hour; empty when it has no number to work out. */
export function workingOf(rule: Rule, view: HourView): readonly Term[] {
  const result = measure(rule, view);
  if (result === null || result.spare === null) return [];
  return rule.terms(view, result.limit ?? 0).filter(({ value }) => Number.isFinite(value));
}

/** Which of the needed fields this hour lacks, or has outside their range, by name. */
function missingFields(view: HourView, needs: readonly Need[]): string[] {
  const { hour } = view;
  const found = [...new Set(needs)].flatMap((need): string[] => {
    if (need === 'wind10m') return missingWind('wind10m', hour.wind10m);
    if (need === 'nearGround') return hour.nearGround.length === 0 ? ['nearGround'] : hour.nearGround.flatMap((wind) => missingWind(`nearGround ${wind.heightAglM} m`, wind));
    if (need === 'levels') return hour.levels.length === 0 ? ['levels'] : hour.levels.flatMap((level) => missingLevel(level, hour.gridElevationM));
    if (need === 'referencePressureHpa') return (['a', 'b'] as const).filter((key) => Number.isNaN(hour.referencePressureHpa[key])).map((key) => `referencePressureHpa.${key}`);
    if (need === 'weatherCode') return [hour, ...view.context.next].some(({ weatherCode }) => Number.isNaN(weatherCode)) ? ['weatherCode'] : [];
    return Number.isNaN(hour[need]) ? [need] : [];
  });
  if (Number.isNaN(hour.gridElevationM)) found.unshift('gridElevationM');
  return found.length > 0 || needs.length === 0 ? found : ['levels (do not reach)'];
}

function missingWind(name: string, wind: CheckedWind): string[] {
  if (Number.isNaN(wind.speedMps)) return [`${name}.speedMps`];
  return Number.isNaN(wind.fromDeg) && wind.speedMps >= 0.3 ? [`${name}.fromDeg`] : [];
}

function missingLevel(level: CheckedHour['levels'][number], groundM: number): string[] {
  if (level.altitudeM <= groundM) return [];
  const names = (['speedMps', 'temperatureC', 'relativeHumidityPct'] as const).filter((key) => Number.isNaN(level[key]));
  return names.map((key) => `levels ${level.pressureHpa} hPa.${key}`);
}
