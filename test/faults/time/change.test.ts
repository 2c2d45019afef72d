// Change notices over whole days: what was told, what is judged anew, what is sent.
import { describe, expect, test } from 'vitest';
import type { DayInput } from '../../../lib/brief/day-input.ts';
import type { JudgedDay } from '../../../lib/brief/day.ts';
import type { Verdict } from '../../../lib/margin/ids.ts';
import { epochOf } from '../../../lib/time.ts';
import { FastHouse, hook, type FastSubscriber } from '../../support/fast-house.ts';
import { judgedAs } from '../../worker/support/stand-ins.ts';

const six = '2027-05-14T04:00:00Z';
const ana = { id: 'ana', sites: ['north', 'south'], urls: [hook('ana')], dueIso: six };
const MINUTE_MS = 60_000;

/** A day judged as told for one stretch of hours (UTC), and within limits besides. */
function judgedWith(input: DayInput, verdict: Verdict, fromHour = 10, toHour = 12): JudgedDay {
  const day = judgedAs(input, 'within');
  const isIn = (validAt: string): boolean => { const hour = Number(validAt.slice(11, 13)); return hour >= fromHour && hour <= toHour; };
  const hours = day.hours.map((hour) => (isIn(hour.validAt) && hour.verdict === 'within' ? judgedHour(hour, verdict) : hour));
  const open = (each: Verdict): boolean => each === 'within' || each === 'close';
  const runs: JudgedDay['hours'][] = [];
  for (const hour of hours) {
    const run = runs.at(-1);
    if (!open(hour.verdict)) continue;
    if (run !== undefined && epochOf(hour.validAt) - epochOf(run.at(-1)!.validAt) === 3_600_000) (run as JudgedDay['hours'][number][]).push(hour);
    else runs.push([hour]);
  }
  const windows = runs.map((run) => ({ from: run[0]!.validAt, to: run.at(-1)!.validAt, lastLaunch: run.at(-1)!.validAt, verdict: 'within' as const }));
  return { ...day, hours, windows, verdict: hours.some((hour) => hour.verdict === 'beyond') ? 'beyond' : hours.some((hour) => hour.verdict === 'unknown') ? 'unknown' : 'within' };
}

function judgedHour(hour: JudgedDay['hours'][number], verdict: Verdict): JudgedDay['hours'][number] {
  return { ...hour, verdict, margins: hour.margins.map((margin) => ({ ...margin, status: verdict })) };
}

async function changing(judge: (input: DayInput) => JudgedDay, subscribers: readonly FastSubscriber[] = [ana]): Promise<FastHouse> {
  const house = new FastHouse({ nowIso: six, judge });
  await house.seed(subscribers);
  return house;
}

async function newSheet(house: FastHouse): Promise<void> {
  const { stores } = house.services();
  await stores.db.together([stores.sheet.put([{ id: 'hill', version: 2, body: JSON.stringify({ id: 'hill', name: 'Hill', version: 2, kind: 'launch', limits: { maxMeanMps: 3 } }) }], house.nowMs)]);
}

const posts = (house: FastHouse) => house.posts;

describe('a change notice', () => {
  test('goes within minutes of the hour in which it got worse, for all sites in one, and once', async () => {
    const house = await changing((input) => judgedWith(input, input.issuedAt >= '2027-05-14T06:00:00Z' ? 'beyond' : 'within'));
    await house.until('2027-05-14T09:00:00Z');
    const [brief, change, ...more] = posts(house);
    expect(brief!.type).toBe('brief.issued');
    expect(change).toMatchObject({ type: 'brief.changed', data: { days: [{ siteId: 'north' }, { siteId: 'south' }] } });
    expect(change!.atMs - Date.parse('2027-05-14T06:10:00Z')).toBeLessThanOrEqual(5 * MINUTE_MS);
    expect(change!.data.title).toMatch(/^Worse: beyond a limit at 2 sites/);
    expect(change!.data.text).toMatch(/^Site north, worse: 12 to 14 h now beyond a limit\. The forecast has changed\.\nSite south, worse/);
    expect(more).toEqual([]);
    expect(house.rows()).toMatchObject([
      { kind: 'brief', seq: 1, state: 'sent', due_local_date: '2027-05-14' }, { kind: 'change', seq: 2, state: 'sent', due_local_date: '2027-05-14' },
    ]);
    const [revisions] = house.d1.ask<{ n: number }>(`SELECT MAX(revision) AS n FROM brief WHERE site_id = 'north'`);
    expect(revisions!.n).toBeGreaterThanOrEqual(5);
  });

  test('F87: a number that swings about its limit each hour is told once; better takes two runs', async () => {
    const house = await changing((input) => judgedWith(input, Number(input.issuedAt.slice(11, 13)) % 2 === 0 ? 'beyond' : 'close', 15, 17), [{ ...ana, sites: ['north'] }]);
    await house.until('2027-05-14T12:00:00Z');
    // Told beyond at six; close every other hour, with no margin, is no news.
    expect(posts(house)).toHaveLength(1);

    const better = await changing((input) => judgedWith(input, input.issuedAt < '2027-05-14T05:00:00Z' ? 'beyond' : 'within', 15, 17), [{ ...ana, sites: ['north'] }]);
    await better.until('2027-05-14T09:00:00Z');
    const [, change, ...more] = posts(better);
    expect(change).toMatchObject({ type: 'brief.changed' });
    expect(change!.atMs).toBeGreaterThanOrEqual(Date.parse('2027-05-14T06:10:00Z'));
    expect(change!.atMs).toBeLessThan(Date.parse('2027-05-14T06:20:00Z'));
    expect(change!.data.title).toMatch(/^Changed: /);
    expect(more).toEqual([]);
  });

  test('F88: a source that does not serve us any more takes the windows back', async () => {
    const house = await changing((input) => judgedAs(input, 'within'), [{ ...ana, sites: ['north'] }]);
    await house.until('2027-05-14T05:00:00Z');
    house.options = { ...house.options, source: async (request) => new Map(request.sites.map((site) => [site.id, { ok: false, error: { kind: 'refused', status: 403 } } as const])) };
    await house.until('2027-05-14T07:00:00Z');
    expect(posts(house)[1]!.data.text).toMatch(/^Site north, worse: .* can no longer be confirmed: cannot say\./);
    expect(posts(house)).toHaveLength(2);
  });

  test('F88: one that cannot be reached leaves its last forecast standing, until that is too old', async () => {
    // The age limit of a run as the judge has it, on a stand-in for the rest.
    const ageH = (input: DayInput): number => Math.max(...input.answers.map(({ outcome }) => (outcome.ok && outcome.value.runAt !== null ? (epochOf(input.issuedAt) - epochOf(outcome.value.runAt)) / 3_600_000 : Infinity)));
    const house = await changing((input) => judgedAs(input, ageH(input) > 9 ? 'unknown' : 'within'), [{ ...ana, sites: ['north'] }]);
    await house.until('2027-05-14T05:00:00Z');
    house.options = { ...house.options, source: async (request) => new Map(request.sites.map((site) => [site.id, { ok: false, error: { kind: 'unreachable' } } as const])) };
    await house.until('2027-05-14T08:00:00Z');
    expect(posts(house)).toHaveLength(1);
    await house.until('2027-05-14T11:00:00Z');
    const [, notice, ...more] = posts(house);
    expect(notice!.data.text).toMatch(/^Site north, worse: .* can no longer be confirmed: cannot say\./);
    expect(notice!.atMs).toBeGreaterThan(Date.parse('2027-05-14T09:00:00Z'));
    expect(more).toEqual([]);
  });

  test('F89: what changes before the brief has left stands in the brief', async () => {
    const house = await changing((input) => judgedWith(input, input.sheet.version > 1 ? 'beyond' : 'within'), [{ ...ana, sites: ['north'] }]);
    await house.services().stores.db.together(house.services().stores.published.replaceAll([{ siteId: 'north', wingKey: 'EN B', sheetId: 'hill' }]));
    house.nowMs = Date.parse('2027-05-14T02:07:00Z');
    await house.minute();
    await newSheet(house);
    await house.until('2027-05-14T05:00:00Z');
    expect(posts(house).map(({ type }) => type)).toEqual(['brief.issued']);
    expect(posts(house)[0]!.data.title).toMatch(/^Beyond a limit/);
  });

  test('F90: forty sites that worsen together make one message a subscriber', async () => {
    const sites = Array.from({ length: 40 }, (_, index) => `s${index}`);
    const house = await changing((input) => judgedWith(input, input.issuedAt >= '2027-05-14T05:00:00Z' ? 'beyond' : 'within'), [
      { ...ana, sites }, { ...ana, id: 'ben', sites: sites.slice(0, 20), urls: [hook('ben')] },
    ]);
    await house.until('2027-05-14T06:30:00Z');
    const byUrl = Map.groupBy(posts(house), ({ url }) => url);
    for (const own of byUrl.values()) expect(own.map(({ type }) => type)).toEqual(['brief.issued', 'brief.changed']);
    expect(byUrl.get(hook('ana'))![1]!.data.days).toHaveLength(40);
  });

  test('F91: limits that were changed are said to have been, and not the weather', async () => {
    const house = await changing((input) => judgedWith(input, input.sheet.version > 1 ? 'beyond' : 'within'), [{ ...ana, sites: ['north'] }]);
    await house.until('2027-05-14T05:00:00Z');
    await newSheet(house);
    await house.until('2027-05-14T06:00:00Z');
    expect(posts(house)[1]!.data.text).toMatch(/^Site north, worse: .*\. The limits of the sheet Hill have changed\.\n/);
  });

  test('a brief that could not be sent yet is replaced by the notice, so that the older never follows the newer', async () => {
    const house = await changing((input) => judgedWith(input, input.issuedAt >= '2027-05-14T05:00:00Z' ? 'beyond' : 'within'), [{ ...ana, sites: ['north'] }]);
    house.options = { ...house.options, answer: () => (house.nowMs < Date.parse('2027-05-14T05:05:00Z') ? new Response(null, { status: 503, headers: { 'retry-after': '5400' } }) : new Response(null, { status: 204 })) };
    await house.until('2027-05-14T07:00:00Z');
    const taken = posts(house);
    expect(taken.map(({ type }) => type)).toEqual(['brief.changed']);
    const rows = house.rows();
    expect(rows.map(({ kind, state }) => [kind, state])).toEqual([['brief', 'suppressed'], ['change', 'sent']]);
    expect(rows[0]!.reason).toBe('a newer message took its place');
  });

  test('a notice lost with its channel down for two hours is made anew, and told once', async () => {
    const house = await changing((input) => judgedWith(input, input.issuedAt >= '2027-05-14T05:00:00Z' ? 'beyond' : 'within', 14, 16), [{ ...ana, sites: ['north'] }]);
    const isDown = (): boolean => house.nowMs > Date.parse('2027-05-14T04:30:00Z') && house.nowMs < Date.parse('2027-05-14T07:00:00Z');
    house.options = { ...house.options, answer: () => new Response(null, { status: isDown() ? 503 : 204 }) };
    await house.until('2027-05-14T11:00:00Z');
    const taken = posts(house);
    expect(taken.map(({ type }) => type)).toEqual(['brief.issued', 'brief.changed']);
    expect(taken[1]!.data.text).toMatch(/^Site north, worse: 16 to 18 h now beyond a limit/);
  });

  test('days all beyond are judged again every three hours, days that are over never', async () => {
    const house = await changing((input) => judgedAs(input, 'beyond'), [{ ...ana, sites: ['north'] }]);
    await house.until('2027-05-14T10:00:00Z');
    expect(house.asked.length).toBeLessThanOrEqual(3);
    const asked = house.asked.length;
    house.nowMs = Date.parse('2027-05-14T20:00:00Z');
    await house.until('2027-05-14T22:30:00Z');
    expect(house.asked).toHaveLength(asked);
  });
});
