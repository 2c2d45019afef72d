import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { isOpen } from '../../../lib/margin/verdict.ts';
import { instantsOf } from '../../../lib/plan/blocks.ts';
import { planChanges } from '../../../lib/plan/changes.ts';
import { planDay } from '../../../lib/plan/plan-day.ts';
import type { PlanRequest } from '../../../lib/plan/request.ts';
import { dayKey } from '../../../lib/plan/request.ts';
import { at, daysFor, groupOf, judged, requestOf, siteOf } from './make.ts';

const plan = (given: Partial<PlanRequest>, bySite: Parameters<typeof daysFor>[1]) => {
  const request = requestOf(given);
  return planDay(request, daysFor(request, bySite));
};
const spans = (result: ReturnType<typeof planDay>) => result.groups.map(({ blocks }) => blocks.map(({ site, from, to }) => `${site} ${from.slice(11, 13)}-${to.slice(11, 13)}`));

describe('which hours are used', () => {
  test('the hour between two instants, both of them judged and open', () => {
    const result = plan({}, { hill: judged('hill', 'bwwwb') });
    expect(spans(result)).toEqual([['hill 05-07']]);
    expect(result.groups[0]!.blocks[0]).toMatchObject({ hours: 2, verdict: 'within', closeAt: [], movingMin: null });
  });

  test('one instant alone makes no hour', () => {
    expect(plan({}, { hill: judged('hill', 'bwbub') }).groups[0]!.leftOut).toMatchObject({ kind: 'no hours', longestHours: 0 });
  });

  test('close only where the group takes it, and then marked', () => {
    const days = { hill: judged('hill', 'wwcw') };
    expect(spans(plan({}, days))).toEqual([['hill 04-05']]);
    const taken = plan({ groups: [groupOf('A', { close: true, minHours: 3 })] }, days).groups[0]!.blocks[0]!;
    expect(taken).toMatchObject({ verdict: 'close', closeAt: [at(8)] });
  });

  test('a group that does not take close is told so where that is what limits it', () => {
    expect(plan({ groups: [groupOf('A', { minHours: 2 })] }, { hill: judged('hill', 'wcccw') }).groups[0]!.leftOut).toMatchObject({ kind: 'no hours', site: 'hill', cause: { kind: 'margin', verdict: 'close' } });
  });

  test('a site that nobody judged is not used', () => {
    expect(plan({ sites: [siteOf('hill'), siteOf('far')], groups: [groupOf('A', { sites: ['far', 'hill'] })] }, { hill: judged('hill', 'ww') }).groups[0]!.blocks[0]!.site).toBe('hill');
    expect(plan({}, {}).groups[0]!.leftOut).toMatchObject({ kind: 'no hours' });
    expect(plan({}, {}).asOf).toBeNull();
  });

  test('own hours, site hours and lost hours close', () => {
    const days = { hill: judged('hill', 'wwwwwww') };
    expect(spans(plan({ groups: [groupOf('A', { earliestHour: 7, latestHour: 9 })] }, days))).toEqual([['hill 05-07']]);
    expect(spans(plan({ sites: [siteOf('hill', { openFromHour: 10 })] }, days))).toEqual([['hill 08-10']]);
    expect(spans(plan({ lost: [{ site: 'hill', hour: 8 }], groups: [groupOf('A', { minHours: 3 })] }, days))).toEqual([['hill 07-10']]);
    expect(plan({ lost: [6, 7, 8, 9, 10, 11].map((hour) => ({ site: 'hill', hour })) }, days).groups[0]!.leftOut).toMatchObject({ cause: { kind: 'lost' } });
  });

  test('whatever the day: never beyond, never unknown, close only with leave', () => {
    const letters = fc.string({ unit: fc.constantFrom('w', 'c', 'b', 'u'), minLength: 2, maxLength: 10 });
    const groups = fc.array(fc.record({ close: fc.boolean(), minHours: fc.integer({ min: 1, max: 3 }), sites: fc.constantFrom(['hill'], ['strip'], ['hill', 'strip']) }), { minLength: 1, maxLength: 3 });
    fc.assert(fc.property(letters, letters, groups, (hill, strip, given) => {
      const request = requestOf({ sites: [siteOf('hill'), siteOf('strip')], groups: given.map((group, index) => groupOf(`G${index}`, group)) });
      const days = daysFor(request, { hill: judged('hill', hill), strip: judged('strip', strip) });
      const result = planDay(request, days);
      expect(planChanges(request, result, days)).toEqual([]);
      for (const [index, { wing, sheet, blocks, leftOut }] of result.groups.entries()) {
        expect(leftOut === null).toBe(blocks.length > 0);
        for (const block of blocks) {
          const verdicts = instantsOf(block).map((validAt) => days.get(dayKey({ site: block.site, wing, sheet }))!.hours.find((hour) => hour.validAt === validAt)?.verdict ?? 'unknown');
          expect(verdicts.every(isOpen)).toBe(true);
          if (!given[index]!.close) expect(verdicts).not.toContain('close');
          expect(block.closeAt.length).toBe(verdicts.filter((verdict) => verdict === 'close').length);
        }
      }
    }), { numRuns: 300 });
  });
});

describe('which plan is best', () => {
  test('the smallest spare first, then hours', () => {
    const spares = [2, 2, 1, 3, 3, 3, 1];
    const result = plan({ groups: [groupOf('A', { wishHours: 6 })] }, { hill: judged('hill', 'wwwwwww', { spares }) });
    expect(spans(result)).toEqual([['hill 07-09']]);
    expect(result.groups[0]!.blocks[0]!.tightest).toMatchObject({ validAt: at(9), margin: { id: 'arrival', spare: 124 } });
  });

  test('the group goes where the wind lets it, with the way between', () => {
    const request = { sites: [siteOf('hill'), siteOf('ridge')], groups: [groupOf('A', { minHours: 2, wishHours: 6, sites: ['hill', 'ridge'] })] };
    const days = { hill: judged('hill', 'wwwbbbbb'), ridge: judged('ridge', 'bbbwwwww') };
    expect(spans(plan(request, days))).toEqual([['hill 04-06', 'ridge 07-11']]);
    const slow = plan({ ...request, movingMin: 90 }, days).groups[0]!.blocks;
    expect(slow[1]).toMatchObject({ from: at(10), movingMin: 90 });
    expect(spans(plan({ ...request, moves: [{ from: 'ridge', to: 'hill', minutes: 150 }] }, days))).toEqual([['ridge 07-11']]);
  });

  test('places and instructors are shared; who is left out is told for want of what', () => {
    const two = [groupOf('A', { minHours: 3 }), groupOf('B', { minHours: 3 })];
    const days = { hill: judged('hill', 'wwwww') };
    expect(plan({ groups: two }, days).groups.map(({ leftOut }) => leftOut)).toContainEqual({ kind: 'shared', lacking: 'places' });
    expect(plan({ sites: [siteOf('hill', { capacity: 2 })], instructors: 1, groups: two }, days).groups.map(({ leftOut }) => leftOut)).toContainEqual({ kind: 'shared', lacking: 'instructors' });
    expect(plan({ instructors: 1, groups: two }, days).groups.map(({ leftOut }) => leftOut)).toContainEqual({ kind: 'shared', lacking: 'places and instructors' });
    expect(plan({ instructors: 1, groups: [groupOf('A', { instructors: 2 })] }, days).groups[0]!.leftOut).toEqual({ kind: 'instructors', needed: 2 });
    expect(plan({ sites: [siteOf('hill', { capacity: 2 })], groups: two }, days).objective).toMatchObject({ placed: 2, hours: 8 });
  });

  test('what ends a block, what is next best, what a lost hour changes', () => {
    const result = plan({ groups: [groupOf('A', { wishHours: 2 })] }, { hill: judged('hill', 'wwwwb') });
    expect(spans(result)).toEqual([['hill 04-06']]);
    expect(result.groups[0]!.blocks[0]!.endsAt).toEqual({ kind: 'wish' });
    expect(plan({}, { hill: judged('hill', 'www') }).groups[0]!.blocks[0]!.endsAt).toBeNull();
    expect(plan({}, { hill: judged('hill', 'wwww', { spares: [2, 2, 1, 1] }) }).groups[0]!.blocks[0]!.endsAt).toEqual({ kind: 'less spare', spare: 2 });
    expect(plan({ groups: [groupOf('A'), groupOf('B', { minHours: 2, earliestHour: 7 })] }, { hill: judged('hill', 'wwww') }).groups[0]!.blocks[0]!.endsAt).toEqual({ kind: 'elsewhere' });
    expect(result.nextBest).toMatchObject({ objective: { placed: 1, hours: 1 }, changes: [{ group: 'A', blocks: [{ from: at(8), to: at(9) }] }] });
    expect(result.ifLost.map(({ from, objective, changes }) => [from, objective.hours, changes[0]?.blocks.map(({ from: begin }) => begin)])).toEqual([
      [at(6), 2, [at(7)]], [at(7), 2, [at(6), at(8)]],
    ]);
    expect(plan({}, { hill: judged('hill', 'wwb') }).groups[0]!.blocks[0]!.endsAt).toMatchObject({ kind: 'margin', verdict: 'beyond', margin: { id: 'forwardLaunch' } });
  });

  test('the same request gives the same plan, to the byte', () => {
    const days = { hill: judged('hill', 'wwwcwwwb'), ridge: judged('ridge', 'wwwwwwww') };
    const request = { sites: [siteOf('hill'), siteOf('ridge')], groups: ['A', 'B', 'C'].map((name) => groupOf(name, { sites: ['hill', 'ridge'] })) };
    expect(JSON.stringify(plan(request, days))).toBe(JSON.stringify(plan(request, days)));
  });

  test('on the days that clocks change the local hours count', () => {
    for (const [date, hours] of [['2027-03-28', 3], ['2027-10-31', 3]] as const) {
      const day = judged('hill', 'wwwwwwwwwwwwwwwwwwwwwwwww');
      const shifted = { ...day, localDate: date, hours: day.hours.map((hour, index) => ({ ...hour, validAt: new Date(Date.parse(`${date}T00:00:00Z`) + (index - 2) * 3_600_000).toISOString().replace('.000', '') })) };
      const result = plan({ date, groups: [groupOf('A', { earliestHour: 6, latestHour: 9 })] }, { hill: shifted });
      expect(result.objective.hours).toBe(hours);
    }
  });
});

describe('what has changed since', () => {
  const request = requestOf({ groups: [groupOf('A', { minHours: 2, wishHours: 2 }), groupOf('B', { minHours: 2, wishHours: 2, close: true })], sites: [siteOf('hill', { capacity: 2 })] });
  const planned = planDay(request, daysFor(request, { hill: judged('hill', 'wwwww') }));

  test('nothing: no notice', () => {
    expect(planChanges(request, planned, daysFor(request, { hill: judged('hill', 'wwwbb') }))).toEqual([]);
  });

  test('beyond and unknown turn a block; close turns it for who does not take that', () => {
    const notices = (letters: string) => planChanges(request, planned, daysFor(request, { hill: judged('hill', letters, { issuedAt: '2027-05-14T09:00:00Z' }) }));
    expect(notices('wwbww')).toMatchObject([{ group: 'A', verdict: 'beyond', validAt: at(8), margin: { id: 'forwardLaunch' }, asOf: '2027-05-14T09:00:00Z' }, { group: 'B', verdict: 'beyond' }]);
    expect(notices('wuwww')).toMatchObject([{ verdict: 'unknown', validAt: at(7) }, { verdict: 'unknown' }]);
    expect(notices('ubwww')).toMatchObject([{ verdict: 'beyond', validAt: at(7) }, { verdict: 'beyond' }]);
    expect(notices('wcwww')).toMatchObject([{ group: 'A', verdict: 'close' }]);
  });

  test('a day that is not judged any more is unknown', () => {
    expect(planChanges(request, planned, new Map())).toMatchObject([{ group: 'A', verdict: 'unknown', margin: null, asOf: null }, { group: 'B' }]);
  });
});
