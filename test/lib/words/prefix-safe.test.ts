// Invariant I7: whatever is cut off at the end, what remains reads no more permissive than the whole.
import fc from 'fast-check';
import { expect, test } from 'vitest';
import { briefText, briefTitle, daySentence, restrictiveness, siteBlock, siteSentence, verdictPhrase, windowSentence } from '../../../lib/brief/words/index.ts';
import { days, readers } from './arbitrary.ts';
import { permissivePrefixes, readAs, VERDICTS } from './reading.ts';

/** Every prefix, one after the other: slow, and what the quick way must agree with. */
function permissiveOneByOne(text: string): boolean {
  const whole = readAs(text) ?? restrictiveness('unknown');
  return Array.from({ length: text.length }, (_, length) => readAs(text.slice(0, length))).some((heard) => heard !== null && heard < whole);
}

test('the classifier hears a permissive prefix', () => {
  expect(permissivePrefixes('Within limits 9 to 12 h, then beyond a limit.')).not.toEqual([]);
  expect(permissivePrefixes('Beyond a limit except 9 h (within limits).')).toEqual([]);
});

test('the quick way to look at every prefix agrees with the slow one', () => {
  const phrase = fc.constantFrom(...VERDICTS.map(verdictPhrase), ' ', ', except ', 'with', 'cannot', 'Beyond a limi');
  fc.assert(fc.property(fc.array(phrase, { maxLength: 8 }), (parts) => {
    const text = parts.join('');
    expect(permissivePrefixes(text).length > 0).toBe(permissiveOneByOne(text));
  }), { numRuns: 500 });
});

/** A hundred thousand texts; a million with DAWNMARGIN_PROVE=1. */
const DAYS = process.env['DAWNMARGIN_PROVE'] === '1' ? 250_000 : 25_000;

test(`T31 no prefix of a day sentence, block or title of ${DAYS} days is more permissive than the whole`, () => {
  let texts = 0;
  fc.assert(fc.property(days, readers, (day, reader) => {
    for (const text of [daySentence(day, reader), siteBlock(day, reader), briefTitle([day]), siteSentence(day, reader), ...day.windows.map((window) => windowSentence(window, day))]) {
      texts += 1;
      if (permissivePrefixes(text).length > 0) expect.fail(text);
    }
  }), { numRuns: DAYS });
  expect(texts).toBeGreaterThanOrEqual(4 * DAYS);
}, 300_000);

test('no prefix of a title of several sites is more permissive than the whole', () => {
  fc.assert(fc.property(fc.array(days, { maxLength: 6 }), (list) => {
    expect(permissivePrefixes(briefTitle(list))).toEqual([]);
  }), { numRuns: 400 });
});

test('within is said of a day only when all of it is', () => {
  fc.assert(fc.property(days, readers, (day, reader) => {
    const first = /within limits|close to a limit|beyond a limit|cannot say/.exec(daySentence(day, reader).toLowerCase());
    if (day.hours.some((hour) => hour.verdict !== 'within')) expect(first?.[0]).not.toBe('within limits');
  }), { numRuns: 400 });
});

/** Clock times and hours that a prefix ends in are never later than in the whole: no leading zero, no open end. */
test('a cut through a window never lengthens it', () => {
  fc.assert(fc.property(days, readers, (day, reader) => {
    const text = daySentence(day, reader);
    for (const match of text.matchAll(/(\d+)(?::(\d\d)| h) to last launch (\d+):(\d\d)/g)) {
      const whole = Number(match[3]) * 60 + Number(match[4]);
      const shown = match[0].slice(match[0].indexOf('launch ') + 7);
      for (let length = 1; length <= shown.length; length += 1) {
        const [hour = '0', minute = '0'] = shown.slice(0, length).split(':');
        expect(Number(hour) * 60 + Number(minute || '0')).toBeLessThanOrEqual(whole);
      }
    }
  }), { numRuns: 200 });
});

test('in a brief of several sites the first verdict of every block is its own worst', () => {
  fc.assert(fc.property(fc.array(days, { maxLength: 5 }), readers, (list, reader) => {
    for (const block of briefText(list, reader).split('\n\n')) {
      if (readAs(block) !== null) expect(permissivePrefixes(block)).toEqual([]);
    }
  }), { numRuns: 200 });
});
