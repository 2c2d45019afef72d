// The fit of measured pairs of airspeed and sink. Exact pairs are made by the polar itself; the noisy ones by hand.
import { describe, expect, test } from 'vitest';
import { fitPolar } from '../../../lib/wing/fit.ts';
import { polarFrom, sinkMps, type Polar } from '../../../lib/wing/polar.ts';

function figures(trimMps: number, glideAtTrim: number, minSinkMps: number) {
  return { trimMps, glideAtTrim, minSinkMps, stallMps: 0.62 * trimMps, topMps: 1.35 * trimMps };
}

function polarOf(trimMps: number, glideAtTrim: number, minSink: number): Polar {
  const polar = polarFrom(figures(trimMps, glideAtTrim, minSink));
  if (!polar.ok) throw new Error(polar.error);
  return polar.value;
}

const enB = polarOf(38 / 3.6, 9, 1.1);
const pairsOf = (polar: Polar, ...speeds: number[]) => speeds.map((speedMps) => ({ speedMps, sinkMps: sinkMps(polar, speedMps) }));

function fitted(given: Parameters<typeof fitPolar>[0]) {
  const result = fitPolar(given);
  if (!result.ok) throw new Error(result.error);
  return result.value;
}

test('two pairs and the trim speed give the polar back that they were read from', () => {
  const { figures: found, rmsMps } = fitted({ pairs: pairsOf(enB, 9.5, 13), trimMps: enB.trimMps });
  expect(found.glideAtTrim).toBeCloseTo(9, 9);
  expect(found.minSinkMps).toBeCloseTo(1.1, 9);
  expect(rmsMps).toBeCloseTo(0, 9);
});

test('three pairs find the trim speed too: where the tangent from the origin touches', () => {
  const { figures: found } = fitted({ pairs: pairsOf(enB, 9.5, 11, 13), trimMps: null });
  expect(found.trimMps).toBeCloseTo(38 / 3.6, 7);
  expect(found.glideAtTrim).toBeCloseTo(9, 7);
  expect(found.minSinkMps).toBeCloseTo(1.1, 7);
  expect(found.stallMps).toBeCloseTo(0.62 * found.trimMps, 9);
  expect(found.topMps).toBeCloseTo(1.35 * found.trimMps, 9);
});

test('readings that scatter leave a residual, each to its pair and their root mean square', () => {
  const pairs = pairsOf(enB, 9.5, 10.5, 11.5, 12.5, 13.5).map((pair, i) => ({ ...pair, sinkMps: pair.sinkMps + [0.05, -0.1, 0.1, -0.1, 0.05][i]! }));
  const { residualsMps, rmsMps, polar } = fitted({ pairs, trimMps: enB.trimMps });
  expect(residualsMps).toHaveLength(5);
  pairs.forEach((pair, i) => expect(residualsMps[i]).toBeCloseTo(pair.sinkMps - sinkMps(polar, pair.speedMps), 9));
  expect(rmsMps).toBeCloseTo(Math.sqrt(residualsMps.reduce((sum, each) => sum + each ** 2, 0) / 5), 12);
  expect(rmsMps).toBeGreaterThan(0.05);
  expect(rmsMps).toBeLessThan(0.1);
});

test('no other polar of the same trim comes nearer to the pairs', () => {
  const pairs = [{ speedMps: 9.4, sinkMps: 1.17 }, { speedMps: 10.8, sinkMps: 1.16 }, { speedMps: 12.4, sinkMps: 1.6 }, { speedMps: 13.6, sinkMps: 1.85 }];
  const squares = (polar: Polar) => pairs.reduce((sum, pair) => sum + (pair.sinkMps - sinkMps(polar, pair.speedMps)) ** 2, 0);
  const { polar, figures: best } = fitted({ pairs, trimMps: 10.6 });
  for (const [glide, sink] of [[0.01, 0], [-0.01, 0], [0, 0.002], [0, -0.002], [0.01, 0.002], [-0.01, -0.002]] as const) {
    expect(squares(polarOf(10.6, best.glideAtTrim + glide, best.minSinkMps + sink))).toBeGreaterThan(squares(polar));
  }
});

test('own stall and top speed stay as given', () => {
  expect(fitted({ pairs: pairsOf(enB, 9.5, 13), trimMps: enB.trimMps, stallMps: 6.1, topMps: 15 }).polar).toMatchObject({ stallMps: 6.1, topMps: 15 });
});

describe('refused, with the reason', () => {
  test.each<[string, Parameters<typeof fitPolar>[0], string]>([
    ['one pair with a trim speed', { pairs: pairsOf(enB, 11), trimMps: 10.5 }, 'needs pairs at 2 different speeds, 1 given'],
    ['two pairs at the same speed', { pairs: pairsOf(enB, 11, 11), trimMps: 10.5 }, 'needs pairs at 2 different speeds, 1 given'],
    ['two pairs without a trim speed', { pairs: pairsOf(enB, 11, 12), trimMps: null }, 'without a trim speed the fit needs pairs at 3 different speeds, 2 given'],
    ['speeds whose glide is the same on any polar of that trim', { pairs: [{ speedMps: 8, sinkMps: 1 }, { speedMps: 12.5, sinkMps: 1.5 }], trimMps: 10 }, 'a pair at another speed is needed'],
    ['no number', { pairs: [{ speedMps: NaN, sinkMps: 1 }, { speedMps: 11, sinkMps: 1.2 }], trimMps: 10.5 }, 'numbers above 0 m/s'],
    ['a climb', { pairs: [{ speedMps: 10, sinkMps: -0.3 }, { speedMps: 11, sinkMps: 1.2 }], trimMps: 10.5 }, 'numbers above 0 m/s'],
    ['a trim of no number', { pairs: pairsOf(enB, 9.5, 13), trimMps: Infinity }, 'numbers above 0 m/s'],
    ['a trim of nothing', { pairs: pairsOf(enB, 9.5, 13), trimMps: 0 }, 'numbers above 0 m/s'],
    ['sink that grows ever slower', { pairs: [{ speedMps: 9, sinkMps: 1 }, { speedMps: 11, sinkMps: 1.6 }, { speedMps: 13, sinkMps: 1.8 }], trimMps: null }, 'do not curve as a polar does'],
    ['sink that falls below nothing between the pairs', { pairs: [{ speedMps: 8, sinkMps: 1 }, { speedMps: 11, sinkMps: 0.01 }, { speedMps: 14, sinkMps: 1.8 }], trimMps: null }, 'would not sink at all'],
    ['least sink below the stall', { pairs: pairsOf(enB, 9.5, 13), trimMps: enB.trimMps, stallMps: 9.3 }, 'at or below the stall'],
    ['a top speed below trim', { pairs: pairsOf(enB, 9.5, 13), trimMps: enB.trimMps, topMps: 10 }, 'below trim'],
  ])('%s', (_, given, why) => {
    const result = fitPolar(given);
    expect(result.ok).toBe(false);
    expect(!result.ok && result.error).toContain(why);
  });
});
