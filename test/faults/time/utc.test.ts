// F85: the rules of time that this runtime has are not those that are known. The operator is told, and every time that
// anybody reads is said in UTC, which needs no rules. Here Vienna's clocks show London's time; UTC itself is right.
import { expect, test, vi } from 'vitest';
import { judgeDay } from '../../../lib/brief/judge-day.ts';
import { clockFaults } from '../../../lib/brief/self-test/clock.ts';
import { briefText, clockTime, hourName, hourSpan, momentName } from '../../../lib/brief/words/index.ts';
import { SI_UNITS } from '../../../lib/brief/units-out.ts';
import { app } from '../../../worker/routes/app.ts';
import { FastHouse, hook } from '../../support/fast-house.ts';
import { DEMO_SITES, demoInput, SHEETS } from '../../support/demo-days.ts';
import { judgedAs } from '../../worker/support/stand-ins.ts';

// An older table of zones, as a runtime of another edition would have it, before anything asks for one.
vi.hoisted(() => {
  const own = Intl.DateTimeFormat;
  Intl.DateTimeFormat = function older(locales?: string, options?: Intl.DateTimeFormatOptions) {
    return new own(locales, options?.timeZone === 'Europe/Vienna' ? { ...options, timeZone: 'Europe/London' } : options);
  } as unknown as typeof Intl.DateTimeFormat;
});

test('the hours of a day are said in UTC, each with the word', () => {
  expect(clockFaults()).toEqual(['Europe/Vienna']);
  expect(clockTime('2027-05-14T09:48:00Z', 'Europe/Vienna')).toBe('9:48 UTC');
  // No zone is trusted any more, not only those in which the difference was seen.
  expect(hourName('2027-05-14T11:00:00Z', 'America/New_York')).toBe('11 h UTC');
  expect(hourSpan({ from: '2027-05-14T07:00:00Z', to: '2027-05-14T10:00:00Z' }, 'Europe/Vienna')).toBe('7 to 10 h UTC');
  expect(hourSpan({ from: '2027-05-14T07:15:00Z', to: '2027-05-14T10:00:00Z' }, 'Europe/Vienna')).toBe('7:15 to 10 h UTC');
  expect(momentName('2027-05-13T23:30:00Z', { timeZone: 'Europe/Vienna', localDate: '2027-05-14' })).toBe('Thu 13 May 23:30 UTC');
  expect(clockTime('2027-05-14T09:48:00Z', 'UTC')).toBe('9:48');
});

test('the operator is alarmed, the watchdog is not told that all is well, and the brief says its times in UTC and why', async () => {
  const WATCHDOG = 'https://watchdog.example/ping';
  const house = new FastHouse({ nowIso: '2027-05-14T04:00:00Z', env: { HEARTBEAT_URL: WATCHDOG }, judge: (input) => judgedAs(input, input.issuedAt > '2027-05-14T05' ? 'beyond' : 'within') });
  await house.seed([{ id: 'ana', sites: ['north'], urls: [hook('ana')], dueIso: '2027-05-14T04:00:00Z' }]);
  await house.minutes(90);
  const [brief, change] = house.posts;
  expect(brief!.data.text).toMatch(/last launch \d+:\d\d UTC/);
  expect(brief!.data.text).toMatch(/computed 4:00 UTC; times in UTC, because the rules of local time here are not the known ones\./);
  expect(change!.data.text).toMatch(/^Site north, worse: \d+ to \d+ h UTC now beyond a limit\./);
  for (const { data } of house.posts) expect(withoutUtc(data.text)).toEqual([]);
  expect(house.d1.ask<{ event: string; detail: string }>(`SELECT event, detail FROM log WHERE step = 'self-test'`)).toEqual([{ event: 'clock-fault', detail: '{"zones":"Europe/Vienna"}' }]);
  expect(house.fetched).not.toContain(WATCHDOG);
  const hono = app(house.services());
  expect(((await (await hono.request('/healthz')).json()) as { warnings: string[] }).warnings.join()).toMatch(/rules of time differ for Europe\/Vienna/);
  const page = (await (await hono.request('/sites/north?date=2027-05-14&wing=EN+B&sheet=hill')).text()).replace(/<[^>]*>/g, ' ').replace(/\s+/g, ' ');
  expect(page).toMatch(/times in UTC, because/);
});

test('days that were really judged, with their cautions and runs, name no time without the word', async () => {
  const reader = { units: SI_UNITS };
  let times = 0;
  for (const site of DEMO_SITES) {
    for (const sheet of SHEETS.filter(({ kind }) => kind === site.kind).slice(0, 2)) {
      const day = judgeDay(await demoInput(site, { wing: 'EN B', sheet, date: '2027-05-14' }));
      const text = briefText([day], reader);
      times += text.split(' UTC').length - 1;
      expect(withoutUtc(text), text).toEqual([]);
    }
  }
  expect(times).toBeGreaterThan(100);
});

/** Clock times and hours of the day in a text that are not said to be in UTC. Ages ("3 h old") are none. */
function withoutUtc(text: string): string[] {
  return [...text.matchAll(/\b\d{1,2}(:\d\d| h)\b(?! UTC| to \d+( h|:\d\d) UTC| old)(.{0,20})/g)].map(([found]) => found);
}
