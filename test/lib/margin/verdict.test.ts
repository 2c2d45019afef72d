// From statuses to hours, sources and windows: small cases by hand. The laws over all cases are in test/properties.
import { describe, expect, test } from 'vitest';
import type { Margin, Verdict } from '../../../lib/margin/ids.ts';
import { combine, tightness } from '../../../lib/margin/sources.ts';
import { causesOf, isOpen, moreSevere, worstVerdict } from '../../../lib/margin/verdict.ts';
import { windowsOf } from '../../../lib/margin/window.ts';
import { HOUR_MS } from '../../../lib/time.ts';

const IN_ORDER = ['within', 'close', 'unknown', 'beyond'] as const;

test('severity grows from within over close and unknown to beyond', () => {
  IN_ORDER.forEach((a, i) => IN_ORDER.forEach((b, j) => expect([a, b, Math.sign(moreSevere(a, b))]).toEqual([a, b, Math.sign(i - j)])));
});

test.each<[readonly Verdict[], Verdict]>([
  [[], 'unknown'], [['within'], 'within'], [['within', 'close'], 'close'], [['close', 'unknown', 'within'], 'unknown'], [['unknown', 'beyond', 'within'], 'beyond'], [['beyond', 'unknown'], 'beyond'],
])('the worst of %j is %s', (verdicts, worst) => {
  expect(worstVerdict(verdicts)).toBe(worst);
});

test('within and close are open, unknown and beyond are not', () => {
  expect(IN_ORDER.map(isOpen)).toEqual([true, true, false, false]);
});

test('causes are told beyond first, then unknown, then close, never what is within', () => {
  const margins = [{ id: 'gust', status: 'close' }, { id: 'rain', status: 'within' }, { id: 'run', status: 'beyond' }, { id: 'storm', status: 'unknown' }, { id: 'slope', status: 'beyond' }] as const;
  expect(causesOf(margins)).toEqual(['run', 'slope', 'storm', 'gust']);
});

function marginOf(status: Verdict, spare: number | null, changes: Partial<Margin> = {}): Margin {
  return { id: 'gust', unit: 'm/s', spare, limit: 8, demand: null, status, missing: [], noVote: false, ...changes };
}

describe('a margin over its sources', () => {
  test('nobody asked: no margin at all', () => {
    expect(combine([])).toBeNull();
  });

  test('nobody has a vote: unknown, of no source', () => {
    const silent = marginOf('unknown', null, { noVote: true, missing: ['gustMps'] });
    expect(combine([{ source: 'a', margin: silent }, { source: 'b', margin: silent }])).toEqual({ margin: silent, source: null });
  });

  test('one without a vote does not make it unknown', () => {
    const silent = marginOf('unknown', null, { noVote: true });
    expect(combine([{ source: 'a', margin: silent }, { source: 'b', margin: marginOf('within', 2) }])).toMatchObject({ source: 'b', margin: { status: 'within' } });
  });

  test.each<[string, readonly Margin[], number]>([
    ['the more severe', [marginOf('within', 0.9), marginOf('close', 0.3), marginOf('within', 4)], 1],
    ['a proof before a gap', [marginOf('unknown', null), marginOf('beyond', -0.1)], 1],
    ['a gap before anything within', [marginOf('close', 0.1), marginOf('unknown', null)], 1],
    ['of two beyond the further', [marginOf('beyond', -0.1), marginOf('beyond', -2)], 1],
    ['no solution before any number', [marginOf('beyond', -2), marginOf('beyond', null)], 1],
    ['the first of two alike', [marginOf('within', 1), marginOf('within', 1)], 0],
    ['the tighter of two within', [marginOf('within', 3), marginOf('within', 1), marginOf('within', 2)], 1],
  ])('%s decides', (_, margins, decides) => {
    const votes = margins.map((margin, i) => ({ source: `source ${i}`, margin }));
    expect(combine(votes)).toEqual({ source: `source ${decides}`, margin: margins[decides] });
  });
});

test('tightness is the spare over the default band of its kind', () => {
  expect(tightness(marginOf('within', 1))).toBe(2);
  expect(tightness(marginOf('within', 60, { id: 'arrival', unit: 'm' }))).toBe(2);
  expect(tightness(marginOf('beyond', null))).toBe(-Infinity);
  expect(tightness(marginOf('unknown', null))).toBe(Infinity);
  expect(tightness(marginOf('within', 3, { unit: 'h' }))).toBe(3);
});

describe('windows', () => {
  const START_MS = Date.UTC(2027, 4, 14, 6);
  const letters: Readonly<Record<string, Verdict>> = { w: 'within', c: 'close', b: 'beyond', u: 'unknown' };
  const hoursOf = (text: string, flightS = 600) => Array.from(text).flatMap((letter, i) => (letter === '-' ? [] : [{ validAtMs: START_MS + i * HOUR_MS, verdict: letters[letter]!, flightS }]));
  const told = (text: string) => windowsOf(hoursOf(text)).map(({ fromMs, toMs, verdict }) => `${(fromMs - START_MS) / HOUR_MS}-${(toMs - START_MS) / HOUR_MS} ${verdict}`);

  test.each([
    ['', []], ['w', []], ['bub', []], ['ww', ['0-1 within']], ['wcw', ['0-2 close']], ['bwwb', ['1-2 within']], ['wwbww', ['0-1 within', '3-4 within']],
    ['wwuww', ['0-1 within', '3-4 within']], ['wbw', []], ['ww-ww', ['0-1 within', '3-4 within']], ['w-w', []], ['cccc', ['0-3 close']], ['wwbcw', ['0-1 within', '3-4 close']],
  ])('%s: %j', (text, windows) => {
    expect(told(text)).toEqual(windows);
  });

  test('the last launch is its last instant less the flight, to the whole minute before', () => {
    const [window] = windowsOf(hoursOf('www', 610));
    expect((window!.toMs - window!.lastLaunchMs!) / 60_000).toBe(11);
    expect((windowsOf(hoursOf('www', 660))[0]!.toMs - windowsOf(hoursOf('www', 660))[0]!.lastLaunchMs!) / 60_000).toBe(11);
    expect((windowsOf(hoursOf('www', 599))[0]!.toMs - windowsOf(hoursOf('www', 599))[0]!.lastLaunchMs!) / 60_000).toBe(10);
  });

  test('a flight exactly as long as the window may be begun at its first instant, a longer one or one of unknown length never', () => {
    expect(windowsOf(hoursOf('ww', 3600))[0]!.lastLaunchMs).toBe(START_MS);
    expect(windowsOf(hoursOf('ww', 3601))[0]!.lastLaunchMs).toBeNull();
    expect(windowsOf(hoursOf('ww', NaN))[0]!.lastLaunchMs).toBeNull();
  });

  test('it is the flight of the last hour that counts', () => {
    const hours = hoursOf('www').map((hour, i) => ({ ...hour, flightS: [3000, 2000, 60][i]! }));
    expect((windowsOf(hours)[0]!.toMs - windowsOf(hours)[0]!.lastLaunchMs!) / 60_000).toBe(1);
  });
});
