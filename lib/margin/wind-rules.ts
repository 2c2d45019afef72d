import { angleBetweenDeg, inSector } from '../angles.ts';
import type { HourView } from './hour-view.ts';
import type { MarginId, MarginUnit, Term } from './ids.ts';
import { gustCrossMps, gustTailMps, type Estimate } from './launch-wind.ts';
import { estimateOrigin, fixed, fromSheet, gustNeeds, limitTerm, pick, term, windNeeds, type Need, type Picked, type Rule } from './rule.ts';
import type { LimitName } from './sheet.ts';

/** Margins on the wind itself, for launches (all kept estimates) and strips (the 10 m wind). */

/** Axis the wind is taken on: where the launch faces, or the heading of the tow. */
function axisDeg(view: HourView): number {
  const { site } = view.setup;
  return site.kind === 'launch' ? site.facingDeg : view.headingDeg;
}

interface WindRule {
  readonly id: MarginId;
  readonly limitName: LimitName;
  readonly unit?: MarginUnit;
  readonly needs: (view: HourView) => readonly Need[];
  readonly measure: (view: HourView) => Picked;
  readonly parts: (view: HourView, picked: Picked & { readonly estimate: Estimate }) => readonly Term[];
}

/** A margin whose demand is the largest of some part of the wind. */
function windRule({ id, limitName, unit = 'm/s', needs, measure, parts }: WindRule): Rule {
  return {
    id, unit, sense: 'atMost', limit: fromSheet(limitName), needs,
    demand: (view) => measure(view).value,
    terms(view, limit) {
      const { estimate, value } = measure(view);
      const first = limitTerm(view, limitName, limit, unit);
      return estimate === null ? [first, term('wind', -value, unit, 'no wind at or above the light wind of the sheet')] : [first, ...parts(view, { estimate, value })];
    },
  };
}

function meanRule(id: 'meanWind' | 'stripWind'): Rule {
  return windRule({
    id, limitName: 'maxMeanMps', needs: windNeeds,
    measure: (view) => pick(view.winds, 'largest', ({ meanMps }) => meanMps),
    parts: (_, { estimate, value }) => [
      term('wind', -estimate.raw.speedMps, 'm/s', estimateOrigin(estimate)),
      ...(estimate.name === 'ground' ? [term('speed-up over the hill', -(value - estimate.raw.speedMps), 'm/s', `× ${fixed(1 + estimate.speedUp, 3)} on the part up the slope`)] : []),
    ],
  });
}

function gustRule(id: 'gust' | 'stripGust'): Rule {
  return windRule({
    id, limitName: 'maxGustMps', needs: gustNeeds,
    measure: (view) => pick(view.winds, 'largest', ({ gustMps }) => gustMps),
    parts: (_, { estimate, value }) => [
      term('mean wind', -estimate.meanMps, 'm/s', estimateOrigin(estimate)),
      term('gust above the mean', -(value - estimate.meanMps), 'm/s', gustOrigin(estimate)),
    ],
  });
}

function gustOrigin(estimate: Estimate): string {
  return estimate.name === 'freeAir' ? 'the larger of the forecast gust and 1.3 × the free-air wind' : 'forecast gust less forecast 10 m wind';
}

const gustSpread = windRule({
  id: 'gustSpread', limitName: 'maxGustSpreadMps', needs: gustNeeds,
  measure: (view) => pick(view.winds, 'largest', ({ gustMps, meanMps }) => gustMps - meanMps),
  parts: (_, { estimate }) => [term('gust', -estimate.gustMps, 'm/s', gustOrigin(estimate)), term('mean wind', estimate.meanMps, 'm/s', estimateOrigin(estimate))],
});

function acrossRule(id: 'crosswind' | 'stripCross'): Rule {
  return windRule({
    id, limitName: 'maxCrossMps', needs: gustNeeds,
    measure: (view) => pick(view.winds, 'largest', (estimate) => gustCrossMps(estimate, axisDeg(view), view.setup.sheet.parameters.lightWindMps)),
    parts: (view, { estimate, value }) => [term('cross part of the gust', -value, 'm/s', partOrigin(view, estimate))],
  });
}

function behindRule(id: 'tailwind' | 'stripTail'): Rule {
  return windRule({
    id, limitName: 'maxTailMps', needs: gustNeeds,
    measure: (view) => pick(view.winds, 'largest', (estimate) => gustTailMps(estimate, axisDeg(view), view.setup.sheet.parameters.lightWindMps)),
    parts: (view, { estimate, value }) => [term('tail part of the gust', -value, 'm/s', partOrigin(view, estimate))],
  });
}

function partOrigin(view: HourView, estimate: Estimate): string {
  if (estimate.calm) return `gust ${fixed(estimate.gustMps)} m/s of any direction, its part above the light wind of ${fixed(view.setup.sheet.parameters.lightWindMps, 2)} m/s`;
  return `gust ${fixed(estimate.gustMps)} m/s from ${fixed(estimate.fromDeg, 0)}° on the axis ${fixed(axisDeg(view), 0)}°`;
}

const offAxis = windRule({
  id: 'offAxis', limitName: 'maxOffAxisDeg', unit: '°', needs: windNeeds,
  measure(view) {
    if (view.winds.length === 0) return { estimate: null, value: NaN };
    const { lightWindMps } = view.setup.sheet.parameters;
    const blowing = view.winds.filter(({ raw, calm }) => Number.isNaN(raw.speedMps) || (!calm && raw.speedMps >= lightWindMps));
    if (blowing.length === 0) return { estimate: null, value: 0 };
    return pick(blowing, 'largest', ({ raw }) => (Number.isNaN(raw.speedMps) ? NaN : angleBetweenDeg(raw.fromDeg, axisDeg(view))));
  },
  parts: (view, { estimate, value }) => [term('angle off the axis', -value, '°', `${estimateOrigin({ ...estimate, speedUp: 0 })}, axis ${fixed(axisDeg(view), 0)}°`)],
});

/** The site's own sector that the largest kept mean blows from: rotor from trees, buildings, spurs. */
const sector: Rule = {
  id: 'sector', unit: 'm/s', sense: 'atMost',
  limit: ({ site }) => (site.sectors.length === 0 ? 'the site has no sectors of its own' : NaN),
  limitAt(view) {
    const { estimate, value } = largestMean(view);
    if (Number.isNaN(value)) return NaN;
    if (estimate === null || estimate.calm) return null;
    if (Number.isNaN(estimate.fromDeg)) return NaN;
    const inside = view.setup.site.sectors.filter((each) => inSector(estimate.fromDeg, each));
    return inside.length === 0 ? null : inside.reduce((least, { maxMps }) => smaller(least, maxMps), Infinity);
  },
  needs: windNeeds,
  demand: (view) => largestMean(view).value,
  terms(view, limit) {
    const { estimate, value } = largestMean(view);
    const why = view.setup.site.sectors.find(({ maxMps }) => maxMps === limit)?.why ?? '';
    return [
      term('limit of the sector', limit, 'm/s', `site sector (${why})`),
      term('mean wind', -value, 'm/s', estimate === null ? '' : estimateOrigin(estimate)),
    ];
  },
};

function smaller(a: number, b: number): number {
  return a < b ? a : b;
}

function largestMean(view: HourView): Picked {
  return pick(view.winds, 'largest', ({ meanMps }) => meanMps);
}

export const launchWindRules: readonly Rule[] = [meanRule('meanWind'), gustRule('gust'), gustSpread, acrossRule('crosswind'), behindRule('tailwind'), offAxis];
export const stripWindRules: readonly Rule[] = [meanRule('stripWind'), gustRule('stripGust'), gustSpread, acrossRule('stripCross'), behindRule('stripTail'), offAxis];
export { sector as sectorRule };
