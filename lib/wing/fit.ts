import { failure, success, type Result } from '../result.ts';
import { polarFrom, STALL_OVER_TRIM, TOP_OVER_TRIM, type Polar, type PolarFigures } from './polar.ts';

/**
 * The polar of this model through measured pairs of airspeed and sink, by least squares of the sink. Pairs are true
 * airspeed and sink in still air at the wing's reference mass in sea-level air (divide both by speedFactor first).
 *
 * The polar S(V) = a (V - Vms)^2 + Smin has its best glide at trim T where a T^2 = a Vms^2 + Smin, so that it reads
 * S = a (V^2 + T^2) - b V with b = 2 a Vms: linear in a and b where the trim is known. Without it, the parabola
 * S = a V^2 - b V + c gives the trim as the speed of its flattest glide, T = sqrt(c/a): three unknowns, three pairs.
 * Two pairs with a trim, or three without, are met exactly and leave a residual of 0; only more pairs tell how well the
 * polar fits. Speeds V and T^2/V have the same glide on every polar of this family and tell the same: two such pairs are
 * refused. Measured speeds that do not reach the trim make it an extrapolation. Valid between stall and top speed.
 */
export interface MeasuredPair {
  readonly speedMps: number;
  /** Positive down. */
  readonly sinkMps: number;
}

export interface PolarFit {
  readonly figures: PolarFigures;
  readonly polar: Polar;
  /** Measured less fitted sink of each pair, in the order given. */
  readonly residualsMps: readonly number[];
  /** Root of their mean square. */
  readonly rmsMps: number;
}

/** Below this share of its largest the determinant of the normal equations is noise. */
const SINGULAR = 1e-6;

interface Parabola {
  readonly a: number;
  readonly b: number;
  readonly c: number;
}

/** The polar through two or more pairs with the trim speed, or through three or more without; else in a sentence why there is none. */
export function fitPolar(measured: {
  readonly pairs: readonly MeasuredPair[]; readonly trimMps: number | null; readonly stallMps?: number; readonly topMps?: number;
}): Result<PolarFit, string> {
  const { pairs, trimMps } = measured;
  const given = trimMps === null ? [] : [trimMps];
  if (![...given, ...pairs.flatMap(({ speedMps, sinkMps }) => [speedMps, sinkMps])].every((value) => Number.isFinite(value) && value > 0)) {
    return failure('speeds and sinks are numbers above 0 m/s');
  }
  const needed = trimMps === null ? 3 : 2;
  const speeds = new Set(pairs.map(({ speedMps }) => speedMps));
  if (speeds.size < needed) {
    const how = trimMps === null ? 'without a trim speed' : 'with a trim speed';
    return failure(`${how} the fit needs pairs at ${needed} different speeds, ${speeds.size} given`);
  }
  const fitted = trimMps === null ? freeParabola(pairs) : parabolaOfTrim(pairs, trimMps);
  if (fitted === null) return failure('these speeds all have one glide on any polar of this trim (trim squared over the one is the other): a pair at another speed is needed');
  const { a, b, c } = fitted;
  if (a <= 0 || c <= 0) return failure('these pairs do not curve as a polar does: sink has to grow ever faster from its least on');
  const trim = trimMps ?? Math.sqrt(c / a);
  const figures: PolarFigures = {
    trimMps: trim, glideAtTrim: 1 / (2 * a * trim - b), minSinkMps: c - (b * b) / (4 * a),
    stallMps: measured.stallMps ?? STALL_OVER_TRIM * trim, topMps: measured.topMps ?? TOP_OVER_TRIM * trim,
  };
  if (figures.glideAtTrim <= 0 || figures.minSinkMps <= 0) return failure('by these pairs the wing would not sink at all at some speed');
  const polar = polarFrom(figures);
  if (!polar.ok) return polar;
  const residualsMps = pairs.map(({ speedMps, sinkMps }) => sinkMps - (a * speedMps * speedMps - b * speedMps + c));
  const rmsMps = Math.sqrt(residualsMps.reduce((sum, residual) => sum + residual * residual, 0) / pairs.length);
  return success({ figures, polar: polar.value, residualsMps, rmsMps });
}

/** Normal equations of S = a (V^2 + T^2) - b V. */
function parabolaOfTrim(pairs: readonly MeasuredPair[], trimMps: number): Parabola | null {
  let [pp, pv, vv, ps, vs] = [0, 0, 0, 0, 0];
  for (const { speedMps, sinkMps } of pairs) {
    const p = speedMps * speedMps + trimMps * trimMps;
    pp += p * p;
    pv += p * speedMps;
    vv += speedMps * speedMps;
    ps += p * sinkMps;
    vs += speedMps * sinkMps;
  }
  const determinant = pp * vv - pv * pv;
  if (determinant < SINGULAR * pp * vv) return null;
  const a = (ps * vv - vs * pv) / determinant;
  return { a, b: (ps * pv - vs * pp) / determinant, c: a * trimMps * trimMps };
}

/** Normal equations of S = a V^2 - b V + c, about the mean speed so that they are well conditioned. */
function freeParabola(pairs: readonly MeasuredPair[]): Parabola {
  const mean = pairs.reduce((sum, { speedMps }) => sum + speedMps, 0) / pairs.length;
  const powers = [0, 0, 0, 0, 0];
  const right = [0, 0, 0];
  for (const { speedMps, sinkMps } of pairs) {
    const x = speedMps - mean;
    for (let i = 0; i < 5; i += 1) powers[i]! += x ** i;
    for (let i = 0; i < 3; i += 1) right[i]! += sinkMps * x ** i;
  }
  const [n, x1, x2, x3, x4] = powers as [number, number, number, number, number];
  const [s0, s1, s2] = right as [number, number, number];
  const determinant = n * (x2 * x4 - x3 * x3) - x1 * (x1 * x4 - x2 * x3) + x2 * (x1 * x3 - x2 * x2);
  const constant = (s0 * (x2 * x4 - x3 * x3) - x1 * (s1 * x4 - s2 * x3) + x2 * (s1 * x3 - s2 * x2)) / determinant;
  const slope = (n * (s1 * x4 - s2 * x3) - s0 * (x1 * x4 - x2 * x3) + x2 * (x1 * s2 - x2 * s1)) / determinant;
  const a = (n * (x2 * s2 - x3 * s1) - x1 * (x1 * s2 - x2 * s1) + s0 * (x1 * x3 - x2 * x2)) / determinant;
  return { a, b: 2 * a * mean - slope, c: constant - slope * mean + a * mean * mean };
}
