// What the members of an ensemble agree about, on rules made for it: how many may differ, how many may not know, and the
// spread that is shown beside it.
import { describe, expect, test } from 'vitest';
import type { Conditions } from '../../../lib/forecast/conditions.ts';
import { checkHour } from '../../../lib/forecast/ranges.ts';
import { ensembleHour } from '../../../lib/margin/agreement.ts';
import type { HourView } from '../../../lib/margin/hour-view.ts';
import { alone, viewsOf } from '../../../lib/margin/judge-member.ts';
import type { Rule } from '../../../lib/margin/rule.ts';
import { setUp } from '../../../lib/margin/setup.ts';
import { ALPINE, ALPINE_GROUND_M, instantAt, sheetOf, wings } from '../../support/typical-days.ts';
import { isoUtc } from '../../../lib/time.ts';

/** A member whose gust is the number that the rules below measure; null for one that does not know. */
function members(gusts: readonly (number | null)[], closeBand?: number): HourView[] {
  const sheet = sheetOf('descent-experienced');
  const setup = setUp({ site: ALPINE, wing: wings['EN B'], sheet: closeBand === undefined ? sheet : { ...sheet, closeBands: { agreement: closeBand } } });
  return gusts.flatMap((gustMps) => {
    const hour: Conditions = { validAt: isoUtc(instantAt(12)), gridElevationM: ALPINE_GROUND_M, gustMps };
    return viewsOf(setup, [checkHour(hour)], alone(['gustMps']));
  });
}

/** Ten metres a second at most, close from nine and a half on. */
const GUST: Rule = { id: 'gust', unit: 'm/s', sense: 'atMost', limit: () => 10, needs: () => ['gustMps'], demand: ({ hour }) => hour.gustMps, terms: () => [] };

function agreementOf(gusts: readonly (number | null)[], minAgreement = 0.7, closeBand?: number) {
  return ensembleHour([GUST], members(gusts, closeBand), minAgreement).agreement;
}

const times = (count: number, gust: number | null) => Array.from({ length: count }, () => gust);

describe('the share that agrees', () => {
  test.each<[string, readonly (number | null)[], string, number | null]>([
    ['everybody within', times(5, 4), 'within', 1],
    ['one alone', [4], 'within', 1],
    ['those that are close agree too', [...times(3, 4), ...times(2, 9.8)], 'within', 1],
    ['everybody beyond', times(5, 14), 'beyond', 0],
    ['three in four', [4, 4, 4, 14], 'within', 0.75],
    ['two in three', [4, 4, 14], 'beyond', 2 / 3],
    ['an unknown one is one that does not agree', [...times(8, 4), 14, null], 'within', 0.8],
    ['one in five may be unknown', [...times(4, 4), null], 'within', 0.8],
    ['three in fourteen may not', [...times(11, 4), ...times(3, null)], 'unknown', null],
    ['nobody knows', times(4, null), 'unknown', null],
  ])('%s', (_, gusts, status, demand) => {
    const margin = agreementOf(gusts)!;
    expect(margin).toMatchObject({ id: 'agreement', unit: 'share', limit: 0.7, status, noVote: false });
    if (demand === null) expect(margin).toMatchObject({ demand: null, spare: null });
    else expect(margin.demand).toBeCloseTo(demand, 12);
    expect(margin.missing).toEqual(status === 'unknown' ? [`${gusts.filter((gust) => gust === null).length} of ${gusts.length} members`] : []);
  });

  test('is close within its band: five hundredths, or what the sheet says, of one member as of many', () => {
    expect(agreementOf([...times(74, 4), ...times(26, 14)])!.status).toBe('close');
    expect(agreementOf([...times(75, 4), ...times(25, 14)])!.status).toBe('within');
    expect(agreementOf(times(4, 4), 0.8, 0.3)!.status).toBe('close');
    expect(agreementOf([4], 0.8, 0.3)!.status).toBe('close');
    expect(agreementOf([4], 0.8, 0.1)!.status).toBe('within');
  });
});

describe('what they agree about', () => {
  test('is nothing without members, without rules they feed, or where the sheet asks for none', () => {
    expect(ensembleHour([GUST], [], 0.7)).toEqual({ agreement: null, about: [], spreads: [] });
    expect(ensembleHour([], members([4]), 0.7)).toEqual({ agreement: null, about: [], spreads: [] });
    expect(ensembleHour([{ ...GUST, needs: () => ['visibilityM'] }], members([4]), 0.7)).toEqual({ agreement: null, about: [], spreads: [] });
    expect(ensembleHour([GUST], members([4]), undefined)).toMatchObject({ agreement: null, about: ['gust'] });
  });

  test('is no margin that needs no field: the law and the slope are the same for all', () => {
    expect(ensembleHour([{ ...GUST, id: 'slope', needs: () => [] }], members([14]), 0.7).about).toEqual([]);
  });

  test('is the worst of the margins of each member', () => {
    const rain: Rule = { ...GUST, id: 'rain', demand: ({ hour }) => (hour.gustMps > 5 ? 12 : 0) };
    expect(ensembleHour([GUST, rain], members([4, 4, 6]), 0.7).agreement!.demand).toBeCloseTo(2 / 3, 12);
  });

  test('leaves out what a member has no vote on: its other margins speak for it', () => {
    const reaching: Rule = { ...GUST, id: 'upperWind', needs: ({ hour }) => (hour.gustMps > 5 ? ['levels'] : ['gustMps']) };
    expect(ensembleHour([GUST, reaching], members([4, 6]), 0.7).agreement!.demand).toBe(1);
  });
});

describe('the spread', () => {
  const spreads = (rule: Rule, gusts: readonly (number | null)[]) => ensembleHour([rule], members(gusts), 0.7).spreads;

  test('is the median spare and the one that nine in ten exceed', () => {
    // Spares of 1 to 9: by Hyndman and Fan's eighth the tenth of them lies at 0.1 × (9 + 1/3) + 1/3.
    const [spread] = spreads(GUST, [9, 8, 7, 6, 5, 4, 3, 2, 1]);
    expect(spread).toMatchObject({ id: 'gust', unit: 'm/s', medianSpare: 5 });
    expect(spread!.adverseSpare).toBeCloseTo(0.1 * (9 + 1 / 3) + 1 / 3, 12);
    expect(spreads(GUST, [9, 8])[0]!.medianSpare).toBe(1.5);
    expect(spreads(GUST, [4])).toEqual([{ id: 'gust', unit: 'm/s', medianSpare: 6, adverseSpare: 6 }]);
  });

  test('is of those that have a number: not of the unknown, nor of no solution', () => {
    expect(spreads(GUST, [4, null, 6])[0]!.medianSpare).toBe(5);
    const blocked: Rule = { ...GUST, demand: ({ hour }) => (hour.gustMps > 5 ? 'no solution' : hour.gustMps) };
    expect(spreads(blocked, [4, 4, 4, 6, 6])[0]!.medianSpare).toBe(6);
    expect(spreads(blocked, [6, 6])).toEqual([]);
    expect(spreads(GUST, [null, null])).toEqual([]);
  });
});
