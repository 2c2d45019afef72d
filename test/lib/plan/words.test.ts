// The plan in words, as a table and as a calendar: nothing forbidden, nothing bare, and what other programs read is what was meant.
import ICAL from 'ical.js';
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { CLOSING } from '../../../lib/brief/words/index.ts';
import { SI_UNITS } from '../../../lib/brief/units-out.ts';
import { planCsv } from '../../../lib/plan/csv.ts';
import { planChanges } from '../../../lib/plan/changes.ts';
import { planDay } from '../../../lib/plan/plan-day.ts';
import { turnedNotice } from '../../../lib/plan/words/notice.ts';
import { verdictPhrase } from '../../../lib/brief/words/index.ts';
import { worstVerdict } from '../../../lib/margin/verdict.ts';
import { blockReason, blockSentence, eventTitle, ifLostSentence, leftOutSentence, nextBestSentence, noticeSentence, planSentence, planTitle } from '../../../lib/plan/words/index.ts';
import { planCalendar } from '../../../worker/web/plan/calendar.ts';
import { blemishes } from '../words/forbidden.ts';
import { daysFor, groupOf, judged, requestOf, siteOf } from './make.ts';

const reader = { units: SI_UNITS };
const caution = { id: 'strongThermals', value: 2.1, unit: 'm/s', from: '2027-05-14T11:00:00Z', to: '2027-05-14T14:00:00Z', subject: null } as const;

function planned(letters: readonly [string, string], given: { readonly demo?: boolean; readonly name?: string } = {}) {
  const request = requestOf({ sites: [siteOf('hill'), siteOf('ridge')], groups: [groupOf(given.name ?? 'A', { close: true, minHours: 2 }), groupOf('B', { sites: ['ridge', 'hill'], minHours: 2 })], lost: [{ site: 'ridge', hour: 9 }] });
  const days = daysFor(request, { hill: judged('hill', letters[0], { demo: given.demo ?? true, cautions: [caution], localRules: 'Ask, then; at the hut.' }), ridge: judged('ridge', letters[1], { demo: given.demo ?? true }) });
  return { request, days, plan: planDay(request, days) };
}

const letters = fc.string({ unit: fc.constantFrom('w', 'c', 'b', 'u'), minLength: 2, maxLength: 8 });

test('no word that may not stand, no leak, on any day', () => {
  fc.assert(fc.property(letters, letters, letters, fc.boolean(), (hill, ridge, later, demo) => {
    const { request, plan } = planned([hill, ridge], { demo });
    const changed = daysFor(request, { hill: judged('hill', later) });
    const texts = [
      planTitle(plan), planSentence(plan), nextBestSentence(plan), ...plan.ifLost.map((lost) => ifLostSentence(lost, plan)),
      ...plan.groups.flatMap((group) => [leftOutSentence(group, plan, reader), ...group.blocks.flatMap((block) => [blockSentence(block, plan.timeZone), blockReason(block, plan.timeZone, reader), eventTitle(plan, group, block)])]),
      ...planChanges(request, plan, changed).map((notice) => noticeSentence(notice, plan, reader)),
    ];
    expect(texts.flatMap(blemishes)).toEqual([]);
  }), { numRuns: 200 });
});

test('a notice of blocks that turned names the worst first, then each block, then the days with their cautions', () => {
  fc.assert(fc.property(letters, letters, fc.boolean(), (first, later, demo) => {
    const { request, plan } = planned([first, first], { demo });
    const days = daysFor(request, { hill: judged('hill', later, { demo, cautions: [caution], localRules: 'Ask at the hut.' }), ridge: judged('ridge', later, { demo }) });
    const notices = planChanges(request, plan, days);
    fc.pre(notices.length > 0);
    const { title, text } = turnedNotice([{ id: 'p', revision: 1, timeZone: plan.timeZone, demo, notices: notices.toReversed() }], { date: plan.date, days: [...days.values()], reader });
    const worst = verdictPhrase(worstVerdict(notices.map(({ verdict }) => verdict)));
    expect(title.toLowerCase().startsWith(`${demo ? 'invented weather: ' : ''}${worst}`)).toBe(true);
    expect(text.toLowerCase().startsWith(`${demo ? 'invented weather, ' : ''}${worst} at `)).toBe(true);
    for (const { group } of notices) expect(text.split('These blocks')[0]).toContain(`${group}, `);
    expect(text).toMatch(/Caution: .*\n/);
    expect(text).toContain('Local rules: Ask at the hut.');
    expect(text.trimEnd().endsWith(CLOSING)).toBe(true);
    expect([title, text].flatMap(blemishes)).toEqual([]);
    // No cut of it says that anything is within limits before it has said what is not.
    for (let end = 1; end < text.indexOf('These blocks'); end += 7) expect(text.slice(0, end)).not.toMatch(/within limits/i);
  }), { numRuns: 200 });
});

test('the title says what could not be done and the worst of the rest first; invented weather before all', () => {
  expect(planTitle(planned(['wwcw', 'bbbb']).plan)).toBe('Invented weather: 1 group without a place; close to a limit; plan as of 5:12, Fri 14 May');
  expect(planTitle(planned(['wwwwwwwww', 'wwwwww'], { demo: false }).plan)).toBe('Within limits; plan as of 5:12, Fri 14 May');
});

test('the title of an event says when it was computed, and no verdict', () => {
  const { plan } = planned(['wwcw', 'wwww']);
  for (const group of plan.groups) {
    for (const block of group.blocks) {
      const title = eventTitle(plan, group, block);
      expect(title).toMatch(/^Invented weather, as of 5:12 Fri 14 May: . at Site /);
      expect(title).not.toMatch(/limit|cannot say/i);
    }
  }
});

describe('as a calendar', () => {
  const { plan } = planned(['wwcww', 'wwwwww'], { name: 'First; hops, \\ "é' });
  const text = planCalendar(plan, { id: 'p1', revision: 3, reader });
  const events = new ICAL.Component(ICAL.parse(text) as never).getAllSubcomponents('vevent').map((each) => new ICAL.Event(each));

  test('another program reads the same blocks, in UTC, one each', () => {
    const blocks = plan.groups.flatMap((group) => group.blocks.map((block) => ({ block, title: eventTitle(plan, group, block) })));
    expect(events.map((event) => event.summary)).toEqual(blocks.map(({ title }) => title));
    expect(events.map((event) => [event.startDate.toJSDate().toISOString(), event.endDate.toJSDate().toISOString()])).toEqual(blocks.map(({ block }) => [block.from, block.to].map((at) => at.replace('Z', '.000Z'))));
    expect(events.every((event) => event.startDate.zone.tzid === 'UTC' && event.sequence === 3)).toBe(true);
    expect(new Set(events.map(({ uid }) => uid)).size).toBe(events.length);
  });

  test('every event carries cautions, local rules, ages and the notice', () => {
    const atHill = events.filter((event) => event.location === 'Site hill');
    expect(atHill.length).toBeGreaterThan(0);
    for (const event of events) expect(event.description).toContain(CLOSING);
    for (const event of atHill) expect(event.description).toMatch(/Caution: Strong thermals[\s\S]*Local rules: Ask, then; at the hut\.[\s\S]*run 3 h old/);
  });

  test('lines are at most 75 octets and end in CR LF', () => {
    const lines = text.split('\r\n');
    expect(lines.at(-1)).toBe('');
    expect(lines.every((line) => new TextEncoder().encode(line).length <= 75 && !line.includes('\n'))).toBe(true);
  });
});

test('as a table: a row a block and a row a group without one, each with its time and notice; no formula', () => {
  const rows = planCsv(planned(['wwcww', 'bbbbb'], { name: '=1+1' }).plan, reader).trimEnd().split('\r\n');
  expect(rows).toHaveLength(3);
  expect(rows[1]).toMatch(/^"Invented weather","2027-05-14T03:12:00Z","'=1\+1","EN B","descent-new","close to a limit","2027-05-14T06:00:00Z","Site hill","2027-05-14T04:00:00Z"/);
  expect(rows[2]).toMatch(/"B","EN B","descent-new","no place"/);
  for (const row of rows.slice(1)) expect(row).toContain(CLOSING);
});
