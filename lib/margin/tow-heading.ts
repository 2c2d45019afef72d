import { normalDeg } from '../angles.ts';
import type { StripSite } from '../site.ts';
import { flyTow, type TowEnd, type TowPoint } from '../wing/tow.ts';
import type { HourView } from './hour-view.ts';
import { gustCrossMps, gustTailMps, meanOn } from './launch-wind.ts';
import { defaultBand, margin } from './margin.ts';
import { headwindOver, readAtM } from './strip-profile.ts';

/** Why a heading was chosen over its opposite: data for one sentence. */
export type HeadingReason =
  | { readonly kind: 'only one' }
  | { readonly kind: 'set'; readonly by: string }
  | { readonly kind: 'larger spare'; readonly of: 'stripCross' | 'stripTail' | 'towHeight'; readonly otherHeadingDeg: number }
  | { readonly kind: 'more head'; readonly headMps: number; readonly otherHeadingDeg: number }
  | { readonly kind: 'as laid out'; readonly otherHeadingDeg: number };

export interface ChosenTow {
  /** Direction the wing is towed toward. */
  readonly headingDeg: number;
  readonly reason: HeadingReason;
  readonly end: TowEnd;
}

/** Flies the tow on a heading with this hour's wind over the strip. */
export function flyTowOn(view: HourView, site: StripSite, headingDeg: number, visit?: (point: TowPoint) => void): TowEnd {
  return flyTow({
    trimMps: view.trimAt(readAtM(view, site, 0)),
    glideAtTrim: view.setup.wing.glideAtTrim,
    tensionRatio: site.lineTensionRatio,
    lineLengthM: site.lineLengthM,
    releaseAngleDeg: site.releaseAngleDeg,
    headwindMps: headwindOver(view, site, headingDeg),
  }, visit);
}

interface Candidate {
  readonly headingDeg: number;
  readonly end: TowEnd;
  /** Smallest of the spares over their default bands, and which; -Infinity when one is unknown. */
  readonly worst: number;
  readonly worstId: 'stripCross' | 'stripTail' | 'towHeight';
  readonly headMps: number;
}

function candidate(view: HourView, site: StripSite, headingDeg: number): Candidate {
  const { limits, parameters } = view.setup.sheet;
  const wind = view.winds[0];
  if (wind === undefined) throw new Error('a strip always has its wind estimate');
  const end = flyTowOn(view, site, headingDeg);
  const spares = [
    { id: 'stripCross' as const, limit: limits.maxCrossMps, demand: gustCrossMps(wind, headingDeg, parameters.lightWindMps), sense: 'atMost' as const, unit: 'm/s' as const },
    { id: 'stripTail' as const, limit: limits.maxTailMps, demand: gustTailMps(wind, headingDeg, parameters.lightWindMps), sense: 'atMost' as const, unit: 'm/s' as const },
    { id: 'towHeight' as const, limit: limits.minReleaseM, demand: end.releaseM, sense: 'atLeast' as const, unit: 'm' as const },
  ];
  let worst = Infinity;
  let worstId: Candidate['worstId'] = 'towHeight';
  for (const { id, limit, demand, sense, unit } of spares) {
    if (limit === undefined) continue;
    const { spare } = margin({ demand, limit, sense, band: 0 });
    const share = spare === null ? -Infinity : spare / defaultBand(id, unit);
    if (share < worst) {
      worst = share;
      worstId = id;
    }
  }
  return { headingDeg, end, worst, worstId, headMps: meanOn(wind, headingDeg).headMps };
}

/** Spares nearer than this are a tie: rounding, not a reason to change ends. */
const TIE = 1e-6;

/** The tow on a heading that another source has set for everyone: what is recommended is one thing, and all judge that. */
export function towOnSetHeading(view: HourView, set: { readonly headingDeg: number; readonly by: string }): ChosenTow {
  const { site } = view.setup;
  if (site.kind !== 'strip') throw new Error('only a strip has a tow');
  return { headingDeg: set.headingDeg, reason: { kind: 'set', by: set.by }, end: flyTowOn(view, site, set.headingDeg) };
}

/** Of the usable headings the one whose smallest spare is larger; tie: more head; tie: the heading as laid out. */
export function towOf(view: HourView): ChosenTow {
  const { site } = view.setup;
  if (site.kind !== 'strip') throw new Error('only a strip has a tow');
  const first = candidate(view, site, normalDeg(site.headingDeg));
  if (!site.usableBothWays) return { headingDeg: first.headingDeg, reason: { kind: 'only one' }, end: first.end };
  const second = candidate(view, site, normalDeg(site.headingDeg + 180));
  const better = second.worst > first.worst + TIE || (Math.abs(second.worst - first.worst) <= TIE || second.worst === first.worst) && second.headMps > first.headMps + TIE;
  const [chosen, other] = better ? [second, first] : [first, second];
  return { headingDeg: chosen.headingDeg, end: chosen.end, reason: reasonFor(chosen, other) };
}

function reasonFor(chosen: Candidate, other: Candidate): HeadingReason {
  const otherHeadingDeg = other.headingDeg;
  if (chosen.worst > other.worst + TIE) return { kind: 'larger spare', of: other.worstId, otherHeadingDeg };
  if (chosen.headMps > other.headMps + TIE) return { kind: 'more head', headMps: chosen.headMps, otherHeadingDeg };
  return { kind: 'as laid out', otherHeadingDeg };
}
