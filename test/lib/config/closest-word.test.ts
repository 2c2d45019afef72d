import { describe, expect, test } from 'vitest';
import { closestWord } from '../../../lib/config/closest-word.ts';
import { LIMIT_NAMES } from '../../../lib/margin/sheet.ts';

describe('did you mean', () => {
  test.each([
    ['maxGsutMps', 'maxGustMps'],
    ['max_gust_mps', 'maxGustMps'],
    ['maxGust', 'maxGustMps'],
    ['max_gsut', 'maxGustMps'],
    ['MAXMEANMPS', 'maxMeanMps'],
    ['minArivalM', 'minArrivalM'],
    ['maxRainChance', 'maxRainChancePct'],
    ['minRelease', 'minReleaseM'],
  ])('%s: %s', (typed, meant) => {
    expect(closestWord(typed, LIMIT_NAMES)).toBe(meant);
  });

  test.each(['', 'x', 'colour', 'maximumPermittedBreeze', 'm'.repeat(200)])('nothing for %j', (typed) => {
    expect(closestWord(typed, LIMIT_NAMES)).toBeUndefined();
  });

  test('every limit is nearest to itself', () => {
    for (const name of LIMIT_NAMES) expect(closestWord(name, LIMIT_NAMES)).toBe(name);
  });
});
