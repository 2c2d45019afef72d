// The holder of a plan is told when a planned block turns: by the subscription that they named, once a turn, worst first.
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import type { DayInput } from '../../../lib/brief/day-input.ts';
import type { JudgedDay } from '../../../lib/brief/day.ts';
import { CLOSING } from '../../../lib/brief/words/index.ts';
import type { Verdict } from '../../../lib/margin/ids.ts';
import { app } from '../../../worker/routes/app.ts';
import { linkToken } from '../../../worker/secrets.ts';
import { FastHouse, hook, type FastOptions } from '../../support/fast-house.ts';
import { judgedAs } from '../../worker/support/stand-ins.ts';

const LINK_KEY = 'a-link-key-for-tests-only-0123456789';
const ana = { id: 'ana', sites: ['north'], urls: [hook('ana')], dueIso: '2027-05-14T04:00:00Z' };

/** Within limits all day, but for these hours (UTC), which are what the test says. */
function day(input: DayInput, verdict: Verdict, hours: readonly number[]): JudgedDay {
  const judged = judgedAs(input, 'within');
  return { ...judged, hours: judged.hours.map((hour) => (hours.includes(Number(hour.validAt.slice(11, 13))) && hour.verdict === 'within' ? { ...hour, verdict, margins: hour.margins.map((margin) => ({ ...margin, status: verdict })) } : hour)) };
}

const form = (groups: readonly string[], date = '2027-05-14'): URLSearchParams => {
  const fields = new URLSearchParams({ date, instructors: '9', movingMin: '30', 's0.id': 'south', 's0.capacity': '9', 's0.openFromHour': '0', 's0.openToHour': '24' });
  for (const [nth, name] of groups.entries()) {
    for (const [field, value] of Object.entries({ name, sheet: 'hill', wing: 'EN B', minHours: '1', wishHours: '3', earliestHour: '12', latestHour: '15', instructors: '1', sites: 'south' })) fields.set(`g${nth}.${field}`, value);
  }
  return fields;
};

class School {
  readonly house: FastHouse;
  constructor(given: Partial<FastOptions>) {
    this.house = new FastHouse({ nowIso: '2027-05-14T03:50:00Z', ...given });
  }
  async open(): Promise<this> {
    await this.house.seed([ana, { ...ana, id: 'ben', urls: [hook('ben')] }], ['north', 'south']);
    const { stores } = this.house.services();
    // South is on the board, and nobody's brief.
    await stores.db.together(stores.published.replaceAll([{ siteId: 'south', wingKey: 'EN B', sheetId: 'hill' }]));
    await this.house.until('2027-05-14T04:10:00Z');
    return this;
  }
  post(path: string, body: URLSearchParams, headers: Record<string, string> = {}): Promise<Response> {
    return Promise.resolve(app(this.house.services()).request(path, { method: 'POST', body: body.toString(), headers: { 'content-type': 'application/x-www-form-urlencoded', ...headers } }));
  }
  /** The link of a new plan. */
  async plan(groups: readonly string[]): Promise<string> {
    const made = await this.post('/plan', form(groups));
    expect(made.status, await made.clone().text()).toBe(303);
    return made.headers.get('location')!;
  }
  manageLink = (id = 'ana'): Promise<string> => linkToken(LINK_KEY, { purpose: 'manage', id, version: 1 }).then((token) => `http://127.0.0.1:8787/manage/${token}`);
  async told(groups: readonly string[]): Promise<string> {
    const link = await this.plan(groups);
    expect((await this.post(`${link}/notice`, new URLSearchParams({ manage: await this.manageLink() }))).status).toBe(303);
    return link;
  }
  get notices() {
    return this.house.posts.filter(({ type }) => type === 'plan.turned');
  }
}

const turning = (verdict: Verdict, fromIso: string, hours: readonly number[] = [11]): Partial<FastOptions> => ({ judge: (input) => (input.issuedAt >= fromIso ? day(input, verdict, hours) : judgedAs(input, 'within')) });

describe('a planned block that turns', () => {
  test('is told within minutes of the hour in which it did, to the named subscription, once', async () => {
    const school = await new School(turning('beyond', '2027-05-14T06:00:00Z')).open();
    await school.told(['First hops', 'Tow course']);
    await school.house.until('2027-05-14T09:00:00Z');
    const [notice, ...more] = school.notices;
    expect(more).toEqual([]);
    expect(notice!.url).toBe(hook('ana'));
    expect(notice!.atMs - Date.parse('2027-05-14T06:10:00Z')).toBeLessThanOrEqual(5 * 60_000);
    expect(notice!.data.title).toBe('Beyond a limit: 2 planned blocks, training day, Fri 14 May');
    expect(notice!.data.text).toMatch(/^Beyond a limit at 13 h: First hops, 12 to 15 h at Site south\. .*\nBeyond a limit at 13 h: Tow course, 12 to 15 h at Site south\./);
    expect(notice!.data.text).toMatch(/plan the day again on its page, or call them off/);
    expect(notice!.data.text).toContain(CLOSING);
    expect(notice!.data.text).toMatch(/computed 8:1\d/);
    expect(school.house.rows().filter(({ kind }) => kind === 'plan')).toMatchObject([{ state: 'sent', seq: 1, subscription_id: 'ana', due_local_date: '2027-05-14' }]);
    // The site of the plan is none of hers: her own brief stays as it was.
    expect(school.house.posts.filter(({ url, type }) => url === hook('ana') && type === 'brief.issued')).toHaveLength(1);
  });

  test('from unknown to beyond is told again; back and forth is not', async () => {
    const said: readonly Verdict[] = ['unknown', 'within', 'unknown', 'beyond', 'within', 'beyond'];
    const school = await new School({ judge: (input) => { const hour = Number(input.issuedAt.slice(11, 13)) - 5; return hour < 0 ? judgedAs(input, 'within') : day(input, said[hour] ?? 'within', [11]); } }).open();
    await school.told(['First hops']);
    await school.house.until('2027-05-14T11:00:00Z');
    expect(school.notices.map(({ data }) => data.title)).toEqual(['Cannot say: 1 planned block, training day, Fri 14 May', 'Beyond a limit: 1 planned block, training day, Fri 14 May']);
    expect(school.notices.map(({ data }) => data.issuedAt.slice(11, 13))).toEqual(['05', '08']);
  });

  test('because no source answers any more is told as "cannot say"', async () => {
    const school = await new School({}).open();
    await school.told(['First hops']);
    school.house.options = { ...school.house.options, judge: (input) => judgedAs(input, 'unknown') };
    await school.house.until('2027-05-14T07:00:00Z');
    expect(school.notices.map(({ data }) => data.title)).toEqual(['Cannot say: 1 planned block, training day, Fri 14 May']);
  });

  test('is no news when its hours are over, when nobody asked, when the link was stopped, or after planning around it', async () => {
    const late = await new School(turning('beyond', '2027-05-14T13:20:00Z')).open();
    await late.told(['First hops']);
    await late.house.until('2027-05-14T15:00:00Z');
    expect(late.notices).toEqual([]);

    const nobody = await new School(turning('beyond', '2027-05-14T05:00:00Z')).open();
    await nobody.plan(['First hops']);
    const stopped = await nobody.told(['Tow course']);
    expect((await nobody.post(`${stopped}/notice`, new URLSearchParams({ stop: '1' }))).status).toBe(303);
    await nobody.house.until('2027-05-14T07:00:00Z');
    expect(nobody.notices).toEqual([]);

    const again = await new School(turning('beyond', '2027-05-14T05:00:00Z', [13])).open();
    const link = await again.told(['First hops']);
    await again.house.until('2027-05-14T05:30:00Z');
    expect(again.notices).toHaveLength(1);
    expect((await again.post(link, form(['First hops']))).status).toBe(303);
    await again.house.until('2027-05-14T08:00:00Z');
    expect(again.notices).toHaveLength(1);
  });

  test('in several plans of one holder makes one notice', async () => {
    const school = await new School(turning('beyond', '2027-05-14T05:00:00Z', [12])).open();
    await school.told(['First hops']);
    await school.told(['Tow course']);
    await school.house.until('2027-05-14T06:00:00Z');
    expect(school.notices).toHaveLength(1);
    expect(school.notices[0]!.data.title).toMatch(/^Beyond a limit: 2 planned blocks/);
  });
});

describe('who is told', () => {
  test.each([
    ['no link', async () => ''], ['a word', async () => 'manage'], ['a link of another purpose', () => linkToken(LINK_KEY, { purpose: 'unsubscribe', id: 'ana', version: 1 })],
    ['a revoked link', () => linkToken(LINK_KEY, { purpose: 'manage', id: 'ana', version: 2 })], ['nobody’s link', () => linkToken(LINK_KEY, { purpose: 'manage', id: 'eve', version: 1 })],
    ['a link of another key', () => linkToken('another-key-of-the-same-length-00000', { purpose: 'manage', id: 'ana', version: 1 })],
  ])('%s is none, and nothing is kept', async (_, token) => {
    const school = await new School({}).open();
    const link = await school.plan(['First hops']);
    const answer = await school.post(`${link}/notice`, new URLSearchParams({ manage: await token() }));
    expect(answer.status).toBe(400);
    expect(await answer.text()).toContain('There is no subscription behind this link');
    expect(school.house.d1.ask('SELECT subscription_id FROM plan')).toEqual([{ subscription_id: null }]);
  });

  test('is said on the page, kept when the day is planned again, never shown, and erased with the subscription', async () => {
    const school = await new School({}).open();
    const link = await school.told(['First hops']);
    const page = async (): Promise<string> => (await app(school.house.services()).request(link)).text();
    expect(await page()).toContain('A subscription is told when a planned block turns');
    expect(await page()).not.toMatch(/ana|127\.0\.0\.1:9/);
    await school.post(link, form(['First hops', 'Tow course']));
    expect(await page()).toContain('Tell it no more');
    const { stores } = school.house.services();
    await stores.db.together(stores.subscription.erase('ana'));
    expect(school.house.d1.ask('SELECT subscription_id FROM plan')).toEqual([{ subscription_id: null }]);
    expect(await page()).toContain('Tell me when a block turns');
  });

  test('another site cannot change it, nor a link that is not ours, nor GET', async () => {
    const school = await new School({}).open();
    const link = await school.told(['First hops']);
    expect((await school.post(`${link}/notice`, new URLSearchParams({ stop: '1' }), { 'sec-fetch-site': 'cross-site' })).status).toBe(403);
    expect((await school.post(`${link.slice(0, -2)}xx/notice`, new URLSearchParams({ stop: '1' }))).status).toBe(404);
    expect((await app(school.house.services()).request(`${link}/notice`)).status).toBe(404);
    expect(school.house.d1.ask('SELECT subscription_id FROM plan')).toEqual([{ subscription_id: 'ana' }]);
  });
});

test('whatever the hours turn to and whenever the channel is down: worse never waits, nothing is said twice', { timeout: 120_000 }, async () => {
  const verdicts = fc.array(fc.constantFrom<Verdict>('within', 'close', 'unknown', 'beyond'), { minLength: 5, maxLength: 5 });
  await fc.assert(fc.asyncProperty(verdicts, fc.array(fc.boolean(), { minLength: 5, maxLength: 5 }), async (said, down) => {
    const hourOf = (iso: string): number => Number(iso.slice(11, 13)) - 5;
    const school = await new School({
      judge: (input) => day(input, said[hourOf(input.issuedAt)] ?? 'within', [11]),
      answer: (post) => new Response(null, { status: down[hourOf(new Date(post.atMs).toISOString())] === true ? 503 : 204 }),
    }).open();
    await school.told(['First hops']);
    for (let at = 0; at < 25; at += 1) {
      for (const minute of [0, 1, 2, 4]) { school.house.nowMs = Date.parse('2027-05-14T05:10:00Z') + (at * 12 + minute) * 60_000; await school.house.minute(); }
    }
    // A group that takes no close hours: anything but within has turned. What is known after each hour is the worst so far.
    const rank = (verdict: Verdict): number => ['within', 'close', 'unknown', 'beyond'].indexOf(verdict);
    let worst = 0;
    for (const [hour, verdict] of said.entries()) {
      const [before, sent] = [worst, school.notices.filter(({ atMs }) => hourOf(new Date(atMs).toISOString()) === hour)];
      if (down[hour] === true) { expect(sent).toEqual([]); continue; }
      if (rank(verdict) > before) expect(sent.length, `hour ${hour} of ${said.join(' ')}`).toBeGreaterThan(0);
      worst = Math.max(before, ...sent.map(({ data }) => rank(data.title.startsWith('Beyond') ? 'beyond' : data.title.startsWith('Cannot') ? 'unknown' : 'close')));
      expect(sent.length).toBeLessThanOrEqual(worst > before ? 2 : 0);
    }
    const texts = school.notices.map(({ data }) => data.title);
    expect(new Set(texts).size).toBe(texts.length);
    school.house.d1.close();
  }), { numRuns: 10, seed: 10 });
});
