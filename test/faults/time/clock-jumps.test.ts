// F83: a clock that jumps. What has been sent stays sent, what was skipped comes or is owned up to, and nothing waits for
// the clock to come round again.
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { isoUtc, shiftDate } from '../../../lib/time.ts';
import { FastHouse, hook, type FastOptions } from '../../support/fast-house.ts';
import { judgedAs } from '../../worker/support/stand-ins.ts';

const six = '2027-05-14T04:00:00Z';
const ana = { id: 'ana', sites: ['north'], urls: [hook('ana')], dueIso: six };
const [MINUTE_MS, HOUR_MS, DAY_MS] = [60_000, 3_600_000, 86_400_000];

async function house(given: Partial<FastOptions> = {}): Promise<FastHouse> {
  const made = new FastHouse({ nowIso: '2027-05-14T03:50:00Z', ...given });
  await made.seed([ana]);
  return made;
}

/** "14 brief.issued": the day of the month a message is about, and what it is. */
function said(made: FastHouse): string[] {
  return made.posts.filter(({ type }) => type !== 'service.test').map(({ type, data }) => `${data.days[0]?.localDate.slice(-2) ?? /(\d+) May/.exec(data.text)?.[1]} ${type}`);
}

const log = (made: FastHouse): string[] => made.d1.ask<{ event: string }>('SELECT event FROM log ORDER BY id').map(({ event }) => event);

describe('a morning that the clock skips', () => {
  test('is owned up to when the clock has jumped a day and stays: one for each morning, and today is briefed', async () => {
    const made = await house();
    await made.minutes(2);
    made.nowMs = Date.parse('2027-05-15T04:20:00Z');
    await made.minutes(3);
    expect(said(made)).toEqual(['14 brief.missed', '15 brief.issued']);
    expect(made.posts[0]!.data.title).toBe('Cannot say: no brief was computed for Fri 14 May');
    expect(made.posts[1]!.data.issuedAt.slice(0, 16)).toBe('2027-05-15T04:20');
    made.nowMs = Date.parse('2027-05-18T04:20:00Z');
    await made.minutes(3);
    expect(said(made).slice(2)).toEqual(['16 brief.missed', '17 brief.missed', '18 brief.issued']);
  });

  test('a silence of months is owned up to for its first morning and its last week', async () => {
    const made = await house({ nowIso: '2027-08-20T03:00:00Z' });
    await made.minutes(70);
    const dates = made.rows().map(({ due_local_date, kind }) => `${due_local_date} ${kind}`).toSorted((a, b) => a.localeCompare(b));
    expect(dates).toEqual(['2027-05-14 missed', ...[13, 14, 15, 16, 17, 18, 19].map((day) => `2027-08-${day} missed`), '2027-08-20 brief']);
  });

  test('comes after all when the clock was a day ahead before it, and is right again', async () => {
    const made = await house();
    made.nowMs += DAY_MS;
    await made.minutes(3);
    expect(said(made)).toEqual(['14 brief.missed']);
    made.nowMs -= DAY_MS;
    await made.until('2027-05-15T05:00:00Z');
    expect(said(made)).toEqual(['14 brief.missed', '14 brief.issued', '15 brief.issued']);
    expect(isoUtc(made.posts[1]!.atMs)).toBe(six);
    expect(log(made)).toContain('clock-went-back');
  });

  test('is owned up to once when it has passed, and a brief that left a day early does not leave again', async () => {
    const made = await house();
    made.nowMs += DAY_MS;
    await made.minutes(25);
    expect(said(made)).toEqual(['14 brief.missed', '15 brief.issued']);
    made.nowMs -= DAY_MS;
    await made.until('2027-05-16T05:00:00Z');
    expect(said(made)).toEqual(['14 brief.missed', '15 brief.issued', '16 brief.issued']);
  });

  test('a brief that could not be handed over, and that the wrong clock gave up, is handed over when it is right', async () => {
    let isDown = true;
    const made = await house({ answer: () => new Response(null, { status: isDown ? 503 : 204 }) });
    await made.until('2027-05-14T04:05:00Z');
    made.nowMs += DAY_MS;
    await made.minutes(4);
    made.nowMs -= DAY_MS;
    isDown = false;
    await made.minutes(5);
    expect(said(made)).toEqual(['14 brief.issued']);
    expect(made.posts[0]!.data.days[0]).toMatchObject({ verdict: 'within' });
    await made.until('2027-05-15T05:00:00Z');
    expect(said(made)).toEqual(['14 brief.issued', '15 brief.issued']);
  });
});

test.each([['an hour', HOUR_MS], ['a day', DAY_MS]])('a clock that was %s ahead leaves nobody without the news that it has got worse', async (_, aheadMs) => {
  let verdict: 'within' | 'beyond' = 'within';
  const made = await house({ judge: (input) => judgedAs(input, verdict) });
  await made.until('2027-05-14T05:30:00Z');
  made.nowMs += aheadMs;
  await made.minutes(60);
  made.nowMs -= aheadMs;
  verdict = 'beyond';
  const fromMs = made.nowMs;
  await made.minutes(20);
  const worse = made.posts.filter(({ type, data }) => type === 'brief.changed' && data.days[0]?.localDate === '2027-05-14');
  expect(worse.map(({ data }) => data.title)).toEqual(['Worse: beyond a limit, no window, Site north, Fri 14 May']);
  expect(worse[0]!.atMs - fromMs).toBeLessThanOrEqual(5 * MINUTE_MS);
});

test('whatever the clock does, no brief and no notice comes twice, none after its time, and every morning has one', { timeout: 120_000 }, async () => {
  const jumps = fc.array(fc.record({ afterMin: fc.integer({ min: 1, max: 1500 }), aheadMin: fc.constantFrom(60, 61, 150, 1440, 1500, 2880), forMin: fc.integer({ min: 1, max: 90 }) }), { minLength: 1, maxLength: 3 });
  await fc.assert(fc.asyncProperty(jumps, async (plan) => {
    const made = await house();
    const last = '2027-05-18';
    for (const { afterMin, aheadMin, forMin } of plan) {
      await ticks(made, afterMin);
      made.nowMs += aheadMin * MINUTE_MS;
      await ticks(made, forMin);
      made.nowMs -= aheadMin * MINUTE_MS;
    }
    await ticks(made, Math.max(0, (Date.parse(`${last}T05:00:00Z`) - made.nowMs) / MINUTE_MS));
    const all = said(made).filter((each) => !each.endsWith('changed'));
    expect(new Set(all).size).toBe(all.length);
    for (const { atMs, data } of made.posts) expect(atMs).toBeLessThan(Date.parse(data.validUntil));
    for (let date = '2027-05-14'; date <= last; date = shiftDate(date, 1)) expect(all.filter((each) => each.startsWith(date.slice(-2)))).not.toEqual([]);
    expect(made.d1.ask(`SELECT 1 FROM outbox WHERE state = 'pending' AND due_at < ${made.nowMs - HOUR_MS}`)).toEqual([]);
    made.d1.close();
  }), { numRuns: 12, seed: 83 });
});

/** Every minute around six, every tenth besides: those in which something is due. */
async function ticks(made: FastHouse, minutes: number): Promise<void> {
  const endMs = made.nowMs + minutes * MINUTE_MS;
  for (; made.nowMs < endMs; made.nowMs += MINUTE_MS) {
    const minute = Math.floor(made.nowMs / MINUTE_MS) % 1440;
    if (minute % 10 === 0 || (minute >= 235 && minute < 255) || endMs - made.nowMs <= 5 * MINUTE_MS) await made.minute();
  }
}
