import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { changeOf, isInPlay } from '../../../lib/brief/change/change.ts';
import { packed, toldOf, unpacked, type Told } from '../../../lib/brief/change/told.ts';
import type { JudgedDay } from '../../../lib/brief/day.ts';
import { absentNotice, changeNotice, changeSentence, testNotice } from '../../../lib/brief/words/change.ts';
import { dayOf } from '../../support/days.ts';

const early = Date.parse('2027-05-14T03:00:00Z');
const reader = { units: { speed: 'km/h', height: 'm' } } as const;
const at = (hourUtc: number): string => `2027-05-14T${String(hourUtc).padStart(2, '0')}:00:00Z`;

interface Notice {
  readonly run: number;
  readonly worse: readonly string[];
  readonly better: readonly string[];
  readonly before: Told;
  readonly after: Told;
  readonly text: string;
}

/** What somebody told the first of these days is told of the others, one an hour, all before the first hour. */
function noticesOf(runs: readonly JudgedDay[]): Notice[] {
  const [first, ...later] = runs;
  let told = toldOf(first!);
  let previous: JudgedDay | null = null;
  const notices: Notice[] = [];
  for (const [index, newest] of later.entries()) {
    const change = changeOf({ told, previous, newest, nowMs: early });
    previous = newest;
    if (change === null) continue;
    notices.push({
      run: index + 1, worse: change.worse.map(({ validAt }) => validAt), better: change.better, before: told, after: change.told,
      text: changeNotice([newest], [{ day: newest, change }], reader).text,
    });
    told = change.told;
    // What came before the telling is no longer a second opinion.
    previous = null;
  }
  return notices;
}

describe('a change of one day', () => {
  test('worse is told at once, with what each hour is now', () => {
    const change = changeOf({ told: toldOf(dayOf('bwwwb')), previous: null, newest: dayOf('bwbub'), nowMs: early });
    expect(change).toMatchObject({ worse: [{ validAt: at(6), now: 'beyond' }, { validAt: at(7), now: 'unknown' }], better: [], reason: 'weather' });
    expect(change!.told.hours).toBe('bobub');
  });

  test('from "cannot say" to a proven "beyond" is worse; the way back is no news', () => {
    expect(changeOf({ told: toldOf(dayOf('uww')), previous: null, newest: dayOf('bww'), nowMs: early })).toMatchObject({ worse: [{ validAt: at(4), now: 'beyond' }] });
    expect(changeOf({ told: toldOf(dayOf('bww')), previous: null, newest: dayOf('uww'), nowMs: early })).toBeNull();
    const mixed = changeOf({ told: toldOf(dayOf('bww')), previous: null, newest: dayOf('ubw'), nowMs: early });
    expect(mixed!.told.hours).toBe('bbo');
  });

  test('better takes two judgements in a row with the whole band to spare, in a window', () => {
    const told = toldOf(dayOf('bbbb'));
    const better = (previous: JudgedDay | null, newest: JudgedDay) => changeOf({ told, previous, newest, nowMs: early })?.better ?? [];
    expect(better(null, dayOf('bwwb'))).toEqual([]);
    expect(better(dayOf('bccb'), dayOf('bwwb'))).toEqual([]);
    expect(better(dayOf('bwwb'), dayOf('bccb'))).toEqual([]);
    expect(better(dayOf('bwbb'), dayOf('bwbb'))).toEqual([]);
    expect(better(dayOf('bwwb'), dayOf('bwwb'))).toEqual([at(5), at(6)]);
  });

  test('within and close are the same to a notice', () => {
    expect(changeOf({ told: toldOf(dayOf('wwww')), previous: null, newest: dayOf('cccc'), nowMs: early })).toBeNull();
  });

  test('hours that have passed are no news, the hour that runs is', () => {
    const told = toldOf(dayOf('wwww'));
    expect(changeOf({ told, previous: null, newest: dayOf('bwww'), nowMs: Date.parse(at(5)) })).toBeNull();
    expect(changeOf({ told, previous: null, newest: dayOf('wbww'), nowMs: Date.parse('2027-05-14T05:50:00Z') })).not.toBeNull();
  });

  test('hours that a new judgement no longer has can no longer be confirmed', () => {
    expect(changeOf({ told: toldOf(dayOf('www')), previous: null, newest: dayOf('ww'), nowMs: early })).toMatchObject({ worse: [{ validAt: at(6), now: 'unknown' }] });
  });

  test('another version of the sheet is said to be that', () => {
    const newest = dayOf('wbw', { sheetVersion: 2 });
    const change = changeOf({ told: toldOf(dayOf('www')), previous: null, newest, nowMs: early })!;
    expect(change).toMatchObject({ reason: 'limits', told: { sheetVersion: 2 } });
    expect(changeSentence({ day: newest, change })).toMatch(/The limits of the sheet Descent, new pilot have changed\.$/);
    expect(changeSentence({ day: newest, change })).not.toMatch(/forecast has changed/);
  });

  test('a day is in play while an hour ahead is open or not known', () => {
    expect(isInPlay(dayOf('wbbb'), early)).toBe(true);
    expect(isInPlay(dayOf('wbbb'), Date.parse(at(6)))).toBe(false);
    expect(isInPlay(dayOf('bbbu'), Date.parse(at(6)))).toBe(true);
    expect(isInPlay(dayOf('bbbb'), early)).toBe(false);
  });
});

test('what was told survives being written down', () => {
  fc.assert(fc.property(fc.stringMatching(/^[wcbu]{1,16}$/), (letters) => {
    const told = toldOf(dayOf(letters));
    expect(packed(unpacked(told), told.sheetVersion)).toEqual(told);
  }));
  expect(unpacked(toldOf(dayOf(''))).size).toBe(0);
});

describe('any sequence of judgements', () => {
  const runs = fc.integer({ min: 3, max: 7 }).chain((length) => fc.array(fc.stringMatching(new RegExp(`^[wcbu]{${length}}$`)), { minLength: 2, maxLength: 16 }));
  const days = (letters: readonly string[]): JudgedDay[] => letters.map((line) => dayOf(line));

  test('worse never waits: after each run nobody believes an hour open that is not', () => {
    fc.assert(fc.property(runs, (letters) => {
      const judged = days(letters);
      const notices = noticesOf(judged);
      let told = toldOf(judged[0]!);
      for (let run = 1; run < judged.length; run += 1) {
        told = notices.find((notice) => notice.run === run)?.after ?? told;
        const said = unpacked(told);
        for (const { validAt, verdict } of judged[run]!.hours) {
          if (verdict === 'beyond' && said.get(validAt) !== 'beyond') return false;
          if (verdict === 'unknown' && said.get(validAt) === 'open') return false;
        }
      }
      return true;
    }), { numRuns: 2000 });
  });

  test('better is only ever told of an hour that two runs in a row put within limits', () => {
    fc.assert(fc.property(runs, (letters) => {
      const judged = days(letters);
      for (const { run, better } of noticesOf(judged)) {
        for (const validAt of better) {
          if (run < 2 || [judged[run - 1]!, judged[run]!].some((day) => day.hours.find((hour) => hour.validAt === validAt)!.verdict !== 'within')) return false;
        }
      }
      return true;
    }), { numRuns: 2000 });
  });

  test('never two identical notices in a row, and each changes what is known', () => {
    fc.assert(fc.property(runs, (letters) => {
      const notices = noticesOf(days(letters));
      for (const [index, notice] of notices.entries()) {
        expect(notice.after).not.toEqual(notice.before);
        if (index > 0) expect(notice.text).not.toBe(notices[index - 1]!.text);
      }
    }), { numRuns: 1000 });
  });

  test('no flapping: an hour that swings about its limit is told once, however long it swings', () => {
    for (const swing of [['b', 'c'], ['b', 'w'], ['u', 'w'], ['b', 'u'], ['b', 'w', 'c'], ['b', 'c', 'c'], ['b', 'w', 'u']]) {
      const letters = ['www', ...Array.from({ length: 40 }, (_, index) => `w${swing[index % swing.length]}w`)];
      const notices = noticesOf(days(letters));
      expect(notices.length, swing.join(' ')).toBe(1);
    }
  });

  test('an hour is told open again at most every third run, so notices about it are rarer than its swings', () => {
    fc.assert(fc.property(fc.array(fc.constantFrom('w', 'c', 'b', 'u'), { minLength: 2, maxLength: 60 }), (letters) => {
      const judged = days(letters.map((letter) => `w${letter}w`));
      const notices = noticesOf(judged);
      const changes = letters.filter((letter, index) => index > 0 && letter !== letters[index - 1]).length;
      expect(notices.length).toBeLessThanOrEqual(changes);
      const betters = notices.filter(({ better }) => better.length > 0).map(({ run }) => run);
      betters.forEach((run, index) => { if (index > 0) expect(run - betters[index - 1]!).toBeGreaterThanOrEqual(3); });
    }), { numRuns: 2000 });
  });
});

describe('the words', () => {
  const changed = (before: string, after: string, given: Partial<JudgedDay> = {}) => {
    const day = dayOf(after, given);
    return { day, change: changeOf({ told: toldOf(dayOf(before)), previous: day, newest: day, nowMs: early })! };
  };

  test('say what got worse, hour by hour, in the clocks of the site', () => {
    expect(changeSentence(changed('wwwwwwww', 'wbbbwuwb'))).toBe(
      'Kestrel Edge, worse: 7 to 9 h and 13 h now beyond a limit; 11 h can no longer be confirmed: cannot say. The forecast has changed.');
    const notice = changeNotice([changed('www', 'wbb').day], [changed('www', 'wbb')], reader);
    expect(notice.title).toMatch(/^Worse: beyond a limit, /);
    expect(notice.text).toMatch(/^Kestrel Edge, worse: 7 to 8 h now beyond a limit\./);
    expect(notice.text).toMatch(/\n\nKestrel Edge: beyond a limit/);
    expect(notice.text).toMatch(/Computed from forecasts/);
  });

  test('a change for the better names no verdict before the day sentence', () => {
    const better = changed('bbbb', 'bwwb');
    const notice = changeNotice([better.day], [better], reader);
    expect(notice.title).toMatch(/^Changed: beyond a limit/);
    expect(notice.text).toMatch(/^Kestrel Edge, changed: other than was said at 7 to 8 h\. The forecast has changed\.\n\nKestrel Edge: beyond a limit except/);
  });

  test('several sites make one notice, what got worse first, what stayed after it', () => {
    const better = changed('bbbb', 'bwwb', { siteId: 'a', siteName: 'Alder' });
    const worse = changed('wwww', 'wwbb', { siteId: 'b', siteName: 'Birch' });
    const same = dayOf('wwww', { siteId: 'c', siteName: 'Cedar' });
    const { title, text } = changeNotice([better.day, worse.day, same], [better, worse], reader);
    expect(title).toMatch(/^Worse: beyond a limit at 2 sites/);
    expect(text.split('\n').slice(0, 2).map((line) => line.split(',')[0])).toEqual(['Birch', 'Alder']);
    expect(text).toMatch(/Cedar: within limits/);
  });

  test('invented weather is marked first, and no word permits', () => {
    const demo = changed('wwww', 'wbbw', { demo: true });
    const texts = [
      changeNotice([demo.day], [demo], reader), absentNotice({ date: '2027-05-14', reason: 'self-check', demo: true }),
    ];
    for (const { title, text } of texts) for (const said of [title, text]) expect(said).toMatch(/^Invented weather/);
    const all = [...texts, testNotice({ atMs: early, reachedAtMs: null }), absentNotice({ date: '2027-05-14', reason: 'not-made', demo: false })];
    for (const { title, text } of all) expect(`${title} ${text}`).not.toMatch(/\b(safe|good|go|OK|fly)\b/i);
    expect(absentNotice({ date: '2027-05-14', reason: 'not-run', demo: false }).title).toBe('Cannot say: no brief for Fri 14 May');
    expect(testNotice({ atMs: early, reachedAtMs: early - 3 * 3_600_000 }).text).toMatch(/last handed over on this way 3 h before/);
  });
});
