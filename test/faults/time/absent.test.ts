// Never silent: "no brief today" with its reason, a judge that tests itself, a heartbeat that stops, a weekly test.
import { describe, expect, test } from 'vitest';
import { judgeDay } from '../../../lib/brief/judge-day.ts';
import type { Judge } from '../../../lib/brief/self-test/self-test.ts';
import { selfTester } from '../../../worker/morning/self-test.ts';
import { tick } from '../../../worker/morning/tick.ts';
import { app } from '../../../worker/routes/app.ts';
import { FastHouse, hook, type FastOptions } from '../../support/fast-house.ts';
import { oraclesOf, toldByWebhook, type Expected } from '../../support/oracles.ts';
import { PLANTED } from '../../support/planted-faults.ts';

const six = '2027-05-14T04:00:00Z';
const ana = { id: 'ana', sites: ['north'], urls: [hook('ana')], dueIso: six };
const WATCHDOG = 'https://watchdog.example/ping-secret';

async function house(given: Partial<FastOptions> = {}): Promise<FastHouse> {
  const made = new FastHouse({ nowIso: six, ...given });
  await made.seed([ana]);
  return made;
}

function with_(judge: Judge): Partial<FastOptions> {
  return { instead: (services) => ({ judge, selfTest: selfTester(judge, services.thresholds) }) };
}

const health = async (made: FastHouse) => (await (await app(made.services()).request('/healthz')).json()) as { status: string; warnings: string[]; steps: Record<string, { lastAt: string | null }> };
const log = (made: FastHouse): string[] => made.d1.ask<{ event: string }>('SELECT event FROM log ORDER BY id').map(({ event }) => event);

function oracles(made: FastHouse, expected: Omit<Expected, 'dueIso'>): Promise<string[]> {
  const told = made.posts.map((post) => toldByWebhook({ ...post, taken: true }, post.data));
  return oraclesOf({ told, health: () => health(made), ask: <Row>(sql: string) => Promise.resolve(made.d1.ask<Row>(sql)) }, { dueIso: six, ...expected });
}

describe('F92, F93, F94: a judge that is broken', () => {
  test.each(Object.entries<Judge>(PLANTED))('%s: nothing it judged is sent, and everybody is told that there is no brief', async (_, judge) => {
    const made = await house(with_(judge));
    for (const minute of [0, 1, 5, 9, 10, 11]) {
      made.nowMs = Date.parse(six) + minute * 60_000;
      await made.minute();
    }
    expect(made.posts.map(({ type }) => type)).toEqual(['brief.missed']);
    expect(made.posts[0]!.data.text).toMatch(/^Cannot say: there is no brief for Friday 14 May 2027, because this service found a fault in its own judging/);
    expect(made.posts[0]!.atMs - Date.parse(six)).toBeLessThanOrEqual(30 * 60_000);
    expect(made.d1.ask('SELECT 1 FROM brief')).toEqual([]);
    expect(log(made)).toContain('judge-fault');
    const seen = await health(made);
    expect(seen.status).toBe('needs a look');
    expect(seen.warnings.join()).toMatch(/self-test/);
  });

  test('mended within ten minutes, it judges, and the brief leaves', async () => {
    const made = await house(with_(PLANTED['m/s are read as km/h']!));
    await made.minutes(3);
    made.options = { ...made.options, ...with_(judgeDay) };
    await made.minutes(10);
    expect(made.posts.map(({ type }) => type)).toEqual(['brief.issued']);
    expect((await health(made)).warnings.join()).not.toMatch(/self-test/);
  });
});

describe('the books', () => {
  const watched = (given: Partial<FastOptions> = {}): Partial<FastOptions> => ({ env: { HEARTBEAT_URL: WATCHDOG }, ...given });
  const beats = (made: FastHouse): number => made.fetched.filter((url) => url === WATCHDOG).length;

  test('balance: the watchdog is told every five minutes', async () => {
    const made = await house(watched());
    await made.minutes(30);
    expect(beats(made)).toBeGreaterThanOrEqual(5);
    expect(beats(made)).toBeLessThanOrEqual(7);
    expect((await health(made)).steps['heartbeat']?.lastAt).not.toBeNull();
  });

  test('do not while the judge is not trusted, nor (F96) while messages wait and nobody sends them', async () => {
    const broken = await house(watched(with_(PLANTED['everything is within']!)));
    await broken.minutes(30);
    expect(beats(broken)).toBe(0);

    const stuck = await house(watched());
    stuck.options = { ...stuck.options, instead: (services) => ({ wake: async (step, calls) => { if (step !== 'deliver') await services.wake(step, calls); } }) };
    await stuck.minutes(45);
    expect(log(stuck)).toContain('no-brief');
    const before = beats(stuck);
    await stuck.minutes(30);
    expect(beats(stuck) - before).toBeLessThanOrEqual(2);
    expect(log(stuck)).toContain('books-do-not-balance');
    expect((await health(stuck)).warnings.join()).toMatch(/messages wait/);
    stuck.options = watched({ nowIso: six }) as FastOptions;
    await stuck.minutes(5);
    expect(stuck.posts.map(({ type }) => type)).toEqual(['brief.missed']);
    expect(stuck.posts[0]!.data.text).toMatch(/because it was not made in time/);
  });

  test('F95: a watchdog that is down changes nothing but its own line on the health page', async () => {
    const made = await house(watched());
    made.options = { ...made.options, instead: () => ({ heartbeat: async () => false }) };
    await made.minutes(10);
    expect(made.posts.map(({ type }) => type)).toEqual(['brief.issued']);
    const seen = await health(made);
    expect(seen.steps['heartbeat']?.lastAt).toBeNull();
    expect(seen.warnings.join()).toMatch(/watchdog/);
    expect(JSON.stringify(seen)).not.toContain('ping-secret');
  });
});

describe('the cron', () => {
  test('F50: fires five times at once, and everything happens once', async () => {
    const made = await house();
    await Promise.all([1, 2, 3, 4, 5].map(() => tick(made.services(), made.nowMs)));
    await made.answerAll();
    expect(made.posts).toHaveLength(1);
    // Overlapping ticks of different minutes, too.
    made.nowMs += 3_600_000 + 11 * 60_000;
    await Promise.all([0, 1, 2].map((minute) => tick(made.services(), made.nowMs + minute * 60_000)));
    await made.answerAll();
    await made.minutes(5);
    expect(made.posts).toHaveLength(1);
    expect(await oracles(made, { told: { ana: 0 }, verdict: 'within', books: { sent: 1 } })).toEqual([]);
  });

  test('F51: comes twenty minutes late, and the brief says when it was made', async () => {
    const made = await house({ nowIso: '2027-05-14T04:20:00Z' });
    await made.minute(Date.parse(six));
    expect(made.posts[0]!.data.issuedAt).toBe('2027-05-14T04:20:00.000Z');
    expect(await oracles(made, { told: { ana: 20 }, verdict: 'within', books: { sent: 1 } })).toEqual([]);
  });

  test('F52: is missing for a day: yesterday is owned up to, today is briefed', async () => {
    const made = await house({ nowIso: '2027-05-15T03:00:00Z' });
    await made.minutes(90);
    expect(made.posts.map(({ type }) => type)).toEqual(['brief.missed', 'brief.issued']);
    expect(made.posts[0]!.data.text).toMatch(/14 May 2027/);
    expect(made.posts[1]!.data.days[0]!.localDate).toBe('2027-05-15');
    await made.minutes(3);
    expect(log(made)).not.toContain('step-failed');
    expect(await oracles(made, { told: { ana: 23 * 60 }, verdict: { ana: ['unknown', 'within'] }, messages: 2, books: { sent: 2 } })).toEqual([]);
  });

  test('F83: a clock that jumps back an hour, or a day ahead and back, sends nothing twice', async () => {
    const made = await house();
    await made.minutes(5);
    made.nowMs -= 3_600_000;
    await made.minutes(70);
    expect(made.posts).toHaveLength(1);
    made.nowMs += 86_400_000;
    await made.minutes(2);
    made.nowMs -= 86_400_000;
    await made.minutes(30);
    const ids = made.posts.map(({ id }) => id);
    expect(new Set(ids).size).toBe(ids.length);
    const days = made.rows().filter(({ kind }) => kind !== 'change').map(({ due_local_date, kind }) => `${due_local_date} ${kind}`);
    expect(new Set(days).size).toBe(days.length);
  });
});

test('once a week every channel is tested, fallbacks too, by a message that says it is a test', async () => {
  const made = new FastHouse({ nowIso: '2027-05-12T09:30:00Z' });
  await made.seed([{ ...ana, urls: [hook('ana'), hook('ana-2')] }]);
  await made.minutes(180);
  expect(made.posts.map(({ type, url }) => `${type} ${url}`).toSorted((a, b) => a.localeCompare(b))).toEqual([`service.test ${hook('ana')}`, `service.test ${hook('ana-2')}`]);
  const [first] = made.posts;
  expect(first!.data).toMatchObject({ title: 'Test: cannot say anything about any day', days: [] });
  expect(first!.data.text).toMatch(/Nothing has been handed over on this way so far/);
  made.nowMs = Date.parse('2027-05-19T10:30:00Z');
  await made.minutes(5);
  expect(made.posts.filter(({ type }) => type === 'service.test')).toHaveLength(4);
  expect(made.posts.filter(({ type }) => type === 'service.test').at(-1)!.data.text).toMatch(/last handed over on this way 7 days before/);
});
