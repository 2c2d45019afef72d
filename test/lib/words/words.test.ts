import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { CAUTION_IDS } from '../../../lib/brief/cautions.ts';
import { SI_UNITS } from '../../../lib/brief/units-out.ts';
import {
  briefText, briefTitle, causeSentence, cautionSentence, CLOSING, daySentence, failureSentence, marginName, marginRow, windowSentence, type Reader,
} from '../../../lib/brief/words/index.ts';
import { MARGIN_IDS } from '../../../lib/margin/ids.ts';
import { dayOf, fullHour, marginOf, voteOf } from '../../support/days.ts';
import { cautions, days, failures, readers } from './arbitrary.ts';
import { blemishes } from './forbidden.ts';

const reader: Reader = { units: SI_UNITS };
const gustAt13 = { id: 'forwardLaunch', validAt: '2027-05-14T11:00:00Z' } as const;

describe('the day sentence', () => {
  test('opens with the most restrictive verdict and excepts the window up to its last launch', () => {
    const day = dayOf('bbbwwwwbbb', { cause: gustAt13 });
    expect(daySentence(day, reader)).toBe(
      'Beyond a limit except 9 h to last launch 11:48 (within limits). At 13 h a gust leaves 1.2 m/s forward; the sheet asks 2.5.',
    );
  });

  test.each([
    ['bbbb', 'Beyond a limit all day. At 6 h a gust leaves 1.2 m/s forward; the sheet asks 2.5.'],
    ['bwbb', 'Beyond a limit, no window. At 6 h a gust leaves 1.2 m/s forward; the sheet asks 2.5.'],
    ['wwww', 'Within limits, last launch 8:48, all day 6 to 9 h. Tightest at 6 h: a gust leaves 4.9 m/s forward; the sheet asks 2.5.'],
    ['wccw', 'Close to a limit, last launch 8:48, all day 6 to 9 h. Tightest at 7 h: a gust leaves 2.8 m/s forward; the sheet asks 2.5.'],
    ['uuuu', 'Cannot say all day. At 6 h nothing is known of the forward speed at launch: gust missing.'],
    ['wwub', 'Beyond a limit or cannot say except 6 h to last launch 6:48 (within limits). At 9 h a gust leaves 1.2 m/s forward; the sheet asks 2.5. At 8 h nothing is known of the forward speed at launch: gust missing.'],
    ['w', 'No window: 6 h alone was judged. Tightest at 6 h: a gust leaves 4.9 m/s forward; the sheet asks 2.5.'],
  ])('%s', (letters, expected) => {
    expect(daySentence(dayOf(letters), reader)).toBe(expected);
  });

  test('says who has no vote and why when nobody has one', () => {
    const why = failureSentence({ kind: 'withheld' });
    const day = dayOf('uuu', { sources: [voteOf({ state: 'no vote', why, runAt: null, runAgeHours: null })], demo: true });
    expect(daySentence(day, reader)).toBe('Invented weather: cannot say all day. No source has a vote: Demo weather (its data is withheld).');
  });

  test('says why there is no legal day', () => {
    const day = dayOf('', { legalDay: { none: 'the sun does not rise' } });
    expect(daySentence(day, reader)).toMatch(/^Cannot say: the sun does not rise\./);
  });
});

describe('causes', () => {
  test.each(MARGIN_IDS)('%s has a name, a row and a sentence for every status', (id) => {
    expect(blemishes(marginName(id))).toEqual([]);
    for (const verdict of ['within', 'close', 'beyond', 'unknown'] as const) {
      const day = dayOf('b', { hours: [fullHour('2027-05-14T11:00:00Z', verdict)] });
      const said = causeSentence(day, { id, validAt: '2027-05-14T11:00:00Z' }, reader);
      expect(said).toMatch(/^At 13 h .+\.$/);
      expect(blemishes(said)).toEqual([]);
    }
    for (const spare of [null, -3.2]) {
      const row = marginRow(marginOf(id, { status: 'beyond', spare, demand: spare, limit: 0 }), reader);
      expect(blemishes(Object.values(row).join(' '))).toEqual([]);
    }
  });

  test('tells two numbers apart that would round to the same', () => {
    const day = dayOf('b', { hours: [{ ...fullHour(gustAt13.validAt, 'beyond'), margins: [marginOf('gust', { status: 'beyond', limit: 6.71, demand: 6.7132, spare: -0.0032 })] }] });
    expect(causeSentence(day, { ...gustAt13, id: 'gust' }, reader)).toBe('At 13 h a gust at launch reaches 6.713 m/s; the sheet allows 6.710.');
  });

  test('never rounds a spare up', () => {
    expect(marginRow(marginOf('gust', { spare: 0.39 }), reader).spare).toBe('0.3 m/s to spare');
    expect(marginRow(marginOf('gust', { spare: 0.3 - 1e-17 }), reader).spare).toBe('0.3 m/s to spare');
    expect(marginRow(marginOf('gust', { spare: -0.01, status: 'beyond' }), reader).spare).toBe('0.1 m/s short');
  });
});

test('a window says verdict and last launch before its hours', () => {
  const [window] = dayOf('bccb').windows;
  expect(windowSentence(window!, { timeZone: 'Europe/Vienna' })).toBe('Close to a limit, last launch 7:48, window 7 to 8 h.');
});

test.each(CAUTION_IDS)('caution %s is a sentence with and without its number and hours', (id) => {
  fc.assert(fc.property(cautions, readers, (caution, units) => {
    const said = cautionSentence({ ...caution, id }, { timeZone: 'Europe/Vienna' }, units);
    expect(said).toMatch(/^[A-Z].*\.$/);
    expect(blemishes(said)).toEqual([]);
  }), { numRuns: 40 });
});

test('every failure has words, none of them a provider’s', () => {
  fc.assert(fc.property(failures, (failure) => {
    expect(blemishes(failureSentence(failure))).toEqual([]);
  }), { numRuns: 400 });
  expect(failureSentence({ kind: 'unit', field: 'gustMps', expected: 'm/s', found: null })).toBe('gustMps: unit not given, m/s was asked for');
  expect(failureSentence({ kind: 'unit', field: 'gustMps', expected: 'm/s', found: '<b>' })).not.toContain('<b>');
  expect(failureSentence({ kind: 'shape', path: 'within limits' })).not.toContain('within limits');
});

test('a brief says ages, sources, cautions, what is not judged, and the notice', () => {
  const day = dayOf('bbwwb', {
    demo: true, localRules: 'Ask at the hut first.',
    cautions: [{ id: 'thinAir', value: 2600, unit: 'm', from: null, to: null, subject: null }],
    notJudged: [{ id: 'crosswind', why: 'the sheet has no limit for it' }],
    sources: [voteOf(), voteOf({ source: 'open-meteo:icon_d2', state: 'no vote', why: failureSentence({ kind: 'timeout', afterMs: 10_000 }) })],
  });
  expect(briefText([day], reader)).toBe(`Invented weather, Kestrel Edge: beyond a limit except 8 h to last launch 8:48 (within limits). At 6 h a gust leaves 1.2 m/s forward; the sheet asks 2.5.
  Friday 14 May 2027, EN B, sheet Descent, new pilot.
  Within limits, last launch 8:48, window 8 to 9 h.
  Caution: Thin air: longer run, faster landing; density altitude 2600 m.
  Without a vote: Open-Meteo ICON-D2 (no answer within 10 s); from Demo weather (run 3 h old); computed 5:12.
  Not judged: Wind across the launch: the sheet has no limit for it.
  Local rules: Ask at the hut first.

Weather data by Open-Meteo.com (https://open-meteo.com/)

${CLOSING}
`);
  expect(briefTitle([day])).toBe('Invented weather: beyond a limit, with 1 window, Kestrel Edge, Fri 14 May');
});

test('a brief puts days without a window first', () => {
  const text = briefText([dayOf('wwww', { siteName: 'A' }), dayOf('uuuu', { siteName: 'B' }), dayOf('bwwb', { siteName: 'C' }), dayOf('bbbb', { siteName: 'D' })], reader);
  expect([...text.matchAll(/^([A-D]):/gm)].map((match) => match[1])).toEqual(['D', 'B', 'C', 'A']);
});

test('no text ever holds a forbidden word, an empty value or a control character', () => {
  fc.assert(fc.property(fc.array(days, { maxLength: 4 }), readers, (list, units) => {
    // What people typed may say anything; it is left out here and tested for being inert elsewhere.
    const own = list.map((day) => ({ ...day, siteName: 'Kestrel Edge', localRules: null }));
    expect(blemishes(briefText(own, units))).toEqual([]);
    expect(blemishes(briefTitle(own))).toEqual([]);
    expect(briefText(list, units)).toMatch(/^[^\p{Cf}]*$/u);
  }), { numRuns: 300 });
});
