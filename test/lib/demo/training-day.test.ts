// The worked training day is what the README says of it, on days of every season.
import { readFileSync } from 'node:fs';
import path from 'node:path';
import { beforeAll, describe, expect, test } from 'vitest';
import demoPlan from '../../../config/plan-demo.json' with { type: 'json' };
import { judgeDay } from '../../../lib/brief/judge-day.ts';
import type { JudgedDay } from '../../../lib/brief/day.ts';
import { parsePlanRequest } from '../../../lib/config/plan.ts';
import type { DayPlan, GroupPlan } from '../../../lib/plan/day-plan.ts';
import { planDay } from '../../../lib/plan/plan-day.ts';
import { dayKey, pairsOf } from '../../../lib/plan/request.ts';
import { epochOf, HOUR_MS, isoUtc } from '../../../lib/time.ts';
import { DEMO_SITES, demoInput, SHEETS } from '../../support/demo-days.ts';
import { root } from '../../support/run-tool.ts';
import { valueOf } from '../config/fixtures.ts';

describe.each(['2027-05-14', '2027-01-20', '2027-03-28', '2027-07-05', '2027-10-31', '2026-12-01'])('on %s', (date) => {
  const days = new Map<string, JudgedDay>();
  let plan: DayPlan;

  beforeAll(async () => {
    const request = valueOf(parsePlanRequest({ ...demoPlan, date }, { sites: DEMO_SITES, sheets: SHEETS, dateAt: () => date }));
    for (const pair of pairsOf(request)) {
      const [site, sheet] = [DEMO_SITES.find(({ id }) => id === pair.site)!, SHEETS.find(({ id }) => id === pair.sheet)!];
      days.set(dayKey(pair), judgeDay(await demoInput(site, { wing: pair.wing, sheet, date })));
    }
    plan = planDay(request, days);
  });

  const group = (name: string): GroupPlan => plan.groups.find((each) => each.name === name)!;
  const blockOf = (name: string) => { const [block, ...more] = group(name).blocks; expect(more).toEqual([]); return block!; };

  test('three groups have a place, each with its tightest margin and what ends it', () => {
    expect(plan.objective.placed).toBe(3);
    for (const { blocks } of plan.groups) for (const { tightest, endsAt } of blocks) expect([tightest?.margin.id, endsAt?.kind]).not.toContain(undefined);
  });

  test('First hops has an hour or two of the early morning at Wennet Meadow, marked close', () => {
    const block = blockOf('First hops');
    expect(block).toMatchObject({ site: 'wennet-meadow', verdict: 'close' });
    expect(block.hours).toBeLessThanOrEqual(2);
    expect(block.closeAt.length).toBeGreaterThan(0);
    const first = days.get(dayKey({ site: 'wennet-meadow', wing: 'EN A', sheet: 'first-hops' }))!.hours[0]!;
    expect(epochOf(block.from) - epochOf(first.validAt)).toBeLessThanOrEqual(2 * HOUR_MS);
    // Thermals pass its sheet in the hour after, or would leave it less.
    expect(block.endsAt).toMatchObject(block.endsAt?.kind === 'margin' ? { margin: { id: 'thermal' } } : { kind: 'less spare' });
  });

  test('the tow course waits for the fog to lift from Tivvern Strip', () => {
    const block = blockOf('Tow course');
    const strip = days.get(dayKey({ site: 'tivvern-strip', wing: 'EN B', sheet: 'solo-tow' }))!;
    const before = strip.hours.find(({ validAt }) => validAt === isoUtc(epochOf(block.from) - HOUR_MS))!;
    expect(before.verdict).toBe('beyond');
    expect(before.margins.filter(({ status }) => status === 'beyond').map(({ id }) => id)).toContain('visibility');
  });

  test('the licence class takes Orlask Shoulder, because nothing can be said of Maddle Bowl', () => {
    expect(blockOf('Licence class').site).toBe('orlask-shoulder');
    const bowl = days.get(dayKey({ site: 'maddle-bowl', wing: 'EN B', sheet: 'descent-experienced' }))!;
    expect(new Set(bowl.hours.map(({ verdict }) => verdict))).toEqual(new Set(['unknown']));
  });
});

test('the README says so', () => {
  const [, section = ''] = /## The training day\n\n([\s\S]*?)\n## /.exec(readFileSync(path.join(root, 'README.md'), 'utf8')) ?? [];
  for (const { name } of demoPlan.groups) expect(section.toLowerCase()).toContain(name.toLowerCase());
  for (const said of ['Wennet Meadow', 'Tivvern Strip', 'Orlask Shoulder', 'Maddle Bowl', 'marked close', 'fog', '`POST /api/v1/plan`']) expect(section.replace(/\s+/g, ' ')).toContain(said);
});
