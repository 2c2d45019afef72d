// Laws of the comparison with a limit and of what is made of it: hours, sources, members, windows.
import fc from 'fast-check';
import { expect } from 'vitest';
import { MARGIN_IDS, type Margin, type Verdict } from '../../lib/margin/ids.ts';
import { closeBand, defaultBand, margin, type Demand } from '../../lib/margin/margin.ts';
import { combine, type Vote } from '../../lib/margin/sources.ts';
import { causesOf, isOpen, moreSevere, worstVerdict } from '../../lib/margin/verdict.ts';
import { windowsOf, type WindowHour } from '../../lib/margin/window.ts';
import { HOUR_MS, MINUTE_MS } from '../../lib/time.ts';
import { UNIT_OF } from '../support/days.ts';
import { from, law, tellSeed } from './support/law.ts';

tellSeed();

const VERDICTS = ['within', 'close', 'unknown', 'beyond'] as const satisfies readonly Verdict[];
const verdicts = fc.constantFrom(...VERDICTS);
const senses = fc.constantFrom('atMost', 'atLeast');
const numbers = from(-500, 500);
const bands = from(0, 60);

/** What JavaScript would let pass a comparison, and what it would not. */
const notNumbers = fc.constantFrom<unknown>(null, undefined, '', '15', [], [5], {}, true, false, NaN, Infinity, -Infinity, () => 1);

law('nothing but a finite number is ever within a limit, on either side of the comparison', [notNumbers, numbers, bands, senses], (odd, value, band, sense) => {
  const unknown = { spare: null, status: 'unknown' };
  expect(margin({ demand: odd as Demand, limit: value, sense, band })).toEqual(unknown);
  expect(margin({ demand: value, limit: odd as number, sense, band })).toEqual(unknown);
  expect(margin({ demand: value, limit: value, sense, band: odd as number })).toEqual(unknown);
});

law('the spare is what is left on the good side of the limit, and the status is what it says', [numbers, numbers, bands, senses], (demand, limit, band, sense) => {
  const { spare, status } = margin({ demand, limit, sense, band });
  expect(spare).toBeCloseTo(sense === 'atMost' ? limit - demand : demand - limit, 8);
  expect(status).toBe(spare! < 0 ? 'beyond' : spare! < band - 1e-9 ? 'close' : 'within');
});

law('a harder demand, a tighter limit or a wider band never loosens a margin', [numbers, numbers, bands, senses, from(0, 50)], (demand, limit, band, sense, more) => {
  const before = margin({ demand, limit, sense, band });
  const harder = sense === 'atMost' ? more : -more;
  for (const after of [margin({ demand: demand + harder, limit, sense, band }), margin({ demand, limit: limit - harder, sense, band }), margin({ demand, limit, sense, band: band + more })]) {
    expect(moreSevere(after.status, before.status)).toBeGreaterThanOrEqual(0);
    expect(after.spare).toBeLessThanOrEqual(before.spare!);
  }
});

law('exactly on the limit is not beyond it and exactly at the band is not close', [numbers, bands, senses], (limit, band, sense) => {
  expect(margin({ demand: limit, limit, sense, band: 0 })).toEqual({ spare: 0, status: 'within' });
  expect(margin({ demand: limit, limit, sense, band: band + 0.001 })).toEqual({ spare: 0, status: 'close' });
  expect(margin({ demand: sense === 'atMost' ? limit - band : limit + band, limit, sense, band }).status).toBe('within');
  expect(margin({ demand: sense === 'atMost' ? limit + 0.001 : limit - 0.001, limit, sense, band }).status).toBe('beyond');
});

const ids = fc.constantFrom(...MARGIN_IDS);

law('the close band is the default of the unit, never more than a quarter of the limit, and what the sheet says where it says it', [ids, numbers, bands], (id, limit, sheetBand) => {
  const unit = UNIT_OF[id];
  const own = closeBand(id, { unit, limit, sheetBand: undefined });
  expect(own).toBeLessThanOrEqual(defaultBand(id, unit));
  expect(own).toBeGreaterThanOrEqual(0);
  if (id === 'daylight') expect(own).toBe(15);
  else {
    expect(own).toBeLessThanOrEqual(Math.abs(limit) / 4);
    expect([defaultBand(id, unit), Math.abs(limit) / 4]).toContain(own);
    expect(closeBand(id, { unit, limit: 0, sheetBand: undefined })).toBe(0);
  }
  expect(closeBand(id, { unit, limit, sheetBand })).toBe(sheetBand);
});

const statuses = fc.array(verdicts, { maxLength: 32 });

law('one margin that gets worse never makes an hour better, one more never does either, and their order says nothing', [statuses, fc.nat(), verdicts, fc.nat()], (given, which, other, turn) => {
  const before = worstVerdict(given);
  expect(moreSevere(worstVerdict([...given, other]), given.length === 0 ? other : before)).toBeGreaterThanOrEqual(0);
  if (given.length === 0) return expect(before).toBe('unknown');
  const i = which % given.length;
  const worse = given.map((status, k) => (k === i && moreSevere(other, status) > 0 ? other : status));
  expect(moreSevere(worstVerdict(worse), before)).toBeGreaterThanOrEqual(0);
  const shift = turn % given.length;
  expect(worstVerdict([...given.slice(shift), ...given.slice(0, shift)].reverse())).toBe(before);
});

law('an hour is beyond by one proof, unknown by one gap, and within only when every margin is', [statuses], (given) => {
  const verdict = worstVerdict(given);
  expect(verdict === 'beyond').toBe(given.includes('beyond'));
  expect(verdict === 'within').toBe(given.length > 0 && given.every((status) => status === 'within'));
  expect(isOpen(verdict)).toBe(given.length > 0 && given.every((status) => status === 'within' || status === 'close'));
});

law('the causes are all margins that are not within, the worst first', [fc.array(fc.record({ id: ids, status: verdicts }), { maxLength: 20 })], (margins) => {
  const causes = causesOf(margins);
  expect(causes).toHaveLength(margins.filter(({ status }) => status !== 'within').length);
  const expected = ['beyond', 'unknown', 'close'].flatMap((status) => margins.filter((each) => each.status === status).map(({ id }) => id));
  expect(causes).toEqual(expected);
});

const votes: fc.Arbitrary<Vote[]> = fc.array(fc.record({ status: verdicts, spare: from(0, 5), noVote: fc.boolean() }), { minLength: 1, maxLength: 6 })
  .map((given) => given.map(({ status, spare, noVote }, i): Vote => {
    const margin: Margin = {
      id: 'gust', unit: 'm/s', limit: 8, demand: null, missing: [], noVote, status: noVote ? 'unknown' : status,
      spare: noVote || status === 'unknown' ? null : status === 'beyond' ? -spare - 0.01 : spare,
    };
    return { source: `source ${i}`, margin };
  }));

law('a margin over its sources is that of the worst source that has a vote, unknown when none has', [votes], (given) => {
  const combined = combine(given)!;
  const voting = given.filter(({ margin: { noVote } }) => !noVote);
  expect(combined.margin.status).toBe(voting.length === 0 ? 'unknown' : worstVerdict(voting.map(({ margin: { status } }) => status)));
  expect(combined.source === null).toBe(voting.length === 0);
  if (combined.source !== null) expect(given.find(({ source }) => source === combined.source)!.margin).toBe(combined.margin);
  const same = voting.filter(({ margin: { status, spare } }) => status === combined.margin.status && spare !== null);
  if (combined.margin.spare !== null) expect(combined.margin.spare).toBe(Math.min(...same.map(({ margin: { spare } }) => spare!)));
});

law('another source never turns beyond into anything else nor close into within, and the order of the sources says nothing', [votes, votes, fc.nat()], (given, more, turn) => {
  const before = combine(given)!.margin;
  const after = combine([...given, ...more])!.margin;
  const hadVote = given.some(({ margin: { noVote } }) => !noVote);
  if (hadVote) expect(moreSevere(after.status, before.status)).toBeGreaterThanOrEqual(0);
  const shift = turn % given.length;
  const turned = combine([...given.slice(shift), ...given.slice(0, shift)])!.margin;
  expect([turned.status, turned.spare]).toEqual([before.status, before.spare]);
});

const START_MS = Date.UTC(2027, 4, 14, 4);
const hourLists: fc.Arbitrary<WindowHour[]> = fc.array(fc.record({ verdict: verdicts, gone: fc.boolean(), flightS: fc.oneof(from(0, 9000), fc.constant(NaN)) }), { maxLength: 24 })
  .map((given) => given.flatMap(({ verdict, gone, flightS }, i) => (gone && i % 3 === 0 ? [] : [{ validAtMs: START_MS + i * HOUR_MS, verdict, flightS }])));

law('windows are maximal runs of open hours, apart from each other, of two instants at least', [hourLists], (hours) => {
  const windows = windowsOf(hours);
  const at = new Map(hours.map((hour) => [hour.validAtMs, hour.verdict]));
  const open = (ms: number) => isOpen(at.get(ms) ?? 'unknown');
  const inside = new Set<number>();
  for (const { fromMs, toMs, verdict } of windows) {
    const instants = Array.from({ length: (toMs - fromMs) / HOUR_MS + 1 }, (_, i) => fromMs + i * HOUR_MS);
    expect(instants.length).toBeGreaterThanOrEqual(2);
    expect(instants.every(open)).toBe(true);
    expect(open(fromMs - HOUR_MS) || open(toMs + HOUR_MS)).toBe(false);
    expect(verdict).toBe(instants.some((ms) => at.get(ms) === 'close') ? 'close' : 'within');
    for (const ms of instants) {
      expect(inside.has(ms)).toBe(false);
      inside.add(ms);
    }
  }
  const alone = hours.filter(({ validAtMs }) => open(validAtMs) && !inside.has(validAtMs));
  expect(alone.every(({ validAtMs }) => !open(validAtMs - HOUR_MS) && !open(validAtMs + HOUR_MS))).toBe(true);
});

law('the last launch is a whole minute inside its window, from which the flight still ends in it', [hourLists], (hours) => {
  for (const { fromMs, toMs, lastLaunchMs } of windowsOf(hours)) {
    const { flightS } = hours.find(({ validAtMs }) => validAtMs === toMs)!;
    if (lastLaunchMs === null) {
      expect(Number.isNaN(flightS) || flightS * 1000 > toMs - fromMs - MINUTE_MS).toBe(true);
      continue;
    }
    expect(lastLaunchMs % MINUTE_MS).toBe(0);
    expect(lastLaunchMs).toBeGreaterThanOrEqual(fromMs);
    expect(lastLaunchMs + flightS * 1000).toBeLessThanOrEqual(toMs + 1e-6);
    expect(toMs - flightS * 1000 - lastLaunchMs).toBeLessThan(MINUTE_MS);
  }
});

law('an hour that closes never opens or lengthens a window, and the order the hours come in says nothing', [hourLists, fc.nat()], (hours, which) => {
  fc.pre(hours.length > 0);
  const windows = windowsOf(hours);
  expect(windowsOf([...hours].reverse())).toEqual(windows);
  const closed = windowsOf(hours.map((hour, i) => (i === which % hours.length ? { ...hour, verdict: 'beyond' as const } : hour)));
  for (const { fromMs, toMs } of closed) expect(windows.some((window) => window.fromMs <= fromMs && window.toMs >= toMs)).toBe(true);
});
