// What becomes of a morning when push services fail (F57 to F68): a house whose messages go over loopback, each fault with
// the six oracles. What one answer means to the channel is in wire.test.ts.
import { afterAll, beforeAll, describe, expect, test, vi } from 'vitest';
import type { Channel } from '../../../worker/channels/channel.ts';
import { app } from '../../../worker/routes/app.ts';
import { secretLinks } from '../../../worker/security/letter.ts';
import { seeded } from '../../support/seeded.ts';
import { PushedBrowser } from '../../support/service-worker.ts';
import { DUE, startWorld, WireHouse, type Answer, type Knock, type World } from '../../support/wire-house.ts';
import { judgedAs } from '../../worker/support/stand-ins.ts';

let world: World;
beforeAll(async () => { world = await startWorld(); });
afterAll(() => { vi.restoreAllMocks(); return world.close(); });

const MINUTE_MS = 60_000;
const HOUR_MS = 60 * MINUTE_MS;
const dueMs = Date.parse(DUE);

/** Ana's push service answers as said, at each attempt in turn and then as at the last; everybody else's takes what comes. */
function ana(...answers: readonly Answer[]) {
  return ({ name, way, attempt }: Knock): Answer => {
    const usual = { status: way === 'webhook' ? 204 : 201 };
    return name === 'ana' && way === 'push' ? (answers[attempt - 1] ?? answers.at(-1) ?? usual) : usual;
  };
}

describe('a push service', () => {
  test('F57: says 201, and the message counts as sent, once', async () => {
    const house = new WireHouse(world, ana({ status: 201 }));
    await house.people({ ana: ['push'], ben: ['push'] });
    await house.minutes(3);
    expect(await house.oracles({ told: { ana: 0, ben: 0 }, books: { sent: 2 } })).toEqual([]);
  });

  test.each([404, 410])('F58: says %i: the subscription ends, its owner is told by the next channel, and nothing goes there again', async (status) => {
    const house = new WireHouse(world, ana({ status }));
    await house.people({ ana: ['push', 'webhook'], ben: ['push'] });
    await house.minutes(3);
    expect(house.of('ana', 'push')).toHaveLength(1);
    expect(house.channels()).toEqual({ 'ana-0': 'dead', 'ana-1': 'active', 'ben-0': 'active' });
    expect(await house.oracles({ told: { ana: 1, ben: 0 }, books: { dead: 1, sent: 2 }, seen: /1 messages could not be delivered/ })).toEqual([]);
    house.nowMs = dueMs + 24 * HOUR_MS;
    await house.minutes(2);
    expect([house.of('ana', 'push').length, house.of('ana', 'webhook').length]).toEqual([1, 2]);
  });

  test.each([
    ['60', 60_000], ['300', 300_000], [new Date(dueMs + 7 * MINUTE_MS).toUTCString(), 7 * MINUTE_MS], ['20000', 20_000_000],
  ])('F59: says 429 and when to come back (%s): not before, and at once after', async (header, waitMs) => {
    const house = new WireHouse(world, ana({ status: 429, headers: { 'retry-after': header } }, { status: 201 }));
    await house.people({ ana: ['push'], ben: ['push'] });
    await house.minutes(2 + Math.ceil(waitMs / MINUTE_MS));
    const [, second] = house.of('ana');
    expect((second?.atMs ?? 0) - dueMs).toBeGreaterThanOrEqual(waitMs);
    expect(await house.oracles({ told: { ana: 1 + waitMs / MINUTE_MS, ben: 0 }, books: { sent: 2 } })).toEqual([]);
  });

  test.each(['86400', new Date(dueMs + 24 * HOUR_MS).toUTCString()])('F59: says 429 and to come back when the brief has ceased to be of use (%s): it has expired', async (header) => {
    const house = new WireHouse(world, ana({ status: 429, headers: { 'retry-after': header } }));
    await house.people({ ana: ['push'], ben: ['push'] });
    await house.minutes(7 * 60);
    expect(house.of('ana')).toHaveLength(1);
    expect(house.channels()['ana-0']).toBe('active');
    expect(await house.oracles({ told: { ben: 0 }, books: { sent: 1, expired: 1 }, seen: /"expired":1/ })).toEqual([]);
  });

  test.each(['soon', '-5', '1e3', '', '60 s', 'Fri, 14 May 2027'])('F59: says 429 and nothing that can be read (%j): as after any other failure', async (header) => {
    const house = new WireHouse(world, ana({ status: 429, headers: { 'retry-after': header } }, { status: 429, headers: { 'retry-after': header } }, { status: 201 }));
    await house.people({ ana: ['push'], ben: ['push'] });
    await house.minutes(5);
    expect(house.of('ana')).toHaveLength(3);
    expect(await house.oracles({ told: { ana: 3, ben: 0 }, books: { sent: 2 } })).toEqual([]);
  });

  test.each(['0', new Date(dueMs - HOUR_MS).toUTCString()])('F59: says 429 and that it may be at once (%s), for hours: it is not asked again without a pause', async (header) => {
    const house = new WireHouse(world, ({ name }) => (name.startsWith('s') ? { status: 429, headers: { 'retry-after': header } } : { status: 201 }));
    await house.people(Object.fromEntries([...Array.from({ length: 20 }, (_, index) => `s${index}`), 'ben'].map((name) => [name, ['push']])));
    await house.minutes(3 * 60);
    const times = house.of('s0').map(({ atMs }) => atMs);
    expect(times.length).toBeLessThan(60);
    expect(await house.oracles({ told: { ben: 0 }, books: { sent: 1, pending: 20 } })).toEqual([]);
  });

  test.each([500, 502, 503])('F60: says %i for ten minutes: tried again after waits that grow, and its subscription is kept', async (status) => {
    const house = new WireHouse(world, ({ name, atMs }) => ({ status: name === 'ana' && atMs < dueMs + 10 * MINUTE_MS ? status : 201 }));
    await house.people({ ana: ['push'], ben: ['push'] });
    await house.minutes(25);
    expect(house.of('ana').length).toBeLessThanOrEqual(7);
    expect(house.channels()).toEqual({ 'ana-0': 'active', 'ben-0': 'active' });
    expect(await house.oracles({ told: { ana: 20, ben: 0 }, books: { sent: 2 } })).toEqual([]);
  });

  test('F60: and what failed together does not come back together', async () => {
    let seed = 1;
    const random = (): number => { seed = (seed * 48_271) % 2_147_483_647; return seed / 2_147_483_647; };
    const house = new WireHouse(world, ({ attempt }) => ({ status: attempt < 4 ? 503 : 201 }), { random });
    const names = Array.from({ length: 20 }, (_, index) => `s${index}`);
    await house.people(Object.fromEntries(names.map((name) => [name, ['push']])));
    const next = (): Set<number> => new Set(house.d1.ask<{ at: number }>('SELECT next_attempt_at AS at FROM outbox').map(({ at }) => at));
    await house.minute();
    // All twenty failed at one instant, and come back at nearly as many.
    expect(next().size).toBeGreaterThan(15);
    await house.minutes(20);
    expect(await house.oracles({ told: Object.fromEntries(names.map((name) => [name, 12])), books: { sent: 20 } })).toEqual([]);
  });

  test('F61: says 413: once more with the call to look and no more, and that is taken', async () => {
    const house = new WireHouse(world, ana({ status: 413 }, { status: 201 }));
    await house.people({ ana: ['push'], ben: ['push'] });
    await house.minutes(3);
    const [full, small] = house.of('ana');
    expect(full?.read).toHaveProperty('body');
    expect(small?.read).not.toHaveProperty('body');
    expect(small?.read).toMatchObject({ id: full?.read['id'], thread: full?.read['thread'], validUntil: full?.read['validUntil'] });
    expect(await house.oracles({ told: { ana: 0, ben: 0 }, books: { sent: 2 } })).toEqual([]);
  });

  test('F61: says 413 to that as well: the message is dead, the next channel has it, the subscription is kept', async () => {
    const house = new WireHouse(world, ana({ status: 413 }));
    await house.people({ ana: ['push', 'webhook'], ben: ['push'] });
    await house.minutes(90);
    expect(house.of('ana', 'push')).toHaveLength(2);
    expect(house.channels()['ana-0']).toBe('active');
    expect(await house.oracles({ told: { ana: 1, ben: 0 }, books: { dead: 1, sent: 2 }, seen: /1 messages could not be delivered/ })).toEqual([]);
  });

  test.each([400, 401, 403])('T34 F62: says %i to everybody: it is left alone, nobody is ended, the operator hears of it, and others are told', async (status) => {
    const names = Array.from({ length: 30 }, (_, index) => `s${index}`);
    const house = new WireHouse(world, ({ way, atMs }) => ({ status: way === 'push' && atMs < dueMs + 15 * MINUTE_MS ? status : 201 }));
    await house.people({ ...Object.fromEntries(names.map((name) => [name, ['push'] as const])), ben: ['other push'], cem: ['webhook'] });
    await house.minutes(12);
    const tried = house.knocks.filter(({ way }) => way === 'push');
    // Six that were side by side, and ten minutes later six again.
    expect(tried.length).toBeLessThanOrEqual(12);
    expect(Object.values(house.channels()).every((state) => state === 'active')).toBe(true);
    expect(await house.oracles({ told: { ben: 0, cem: 0 }, books: { pending: 30, sent: 2 }, seen: /"event":"push-service-refuses-us"/ })).toEqual([]);
    expect(await house.oracles({ told: {}, books: { pending: 30, sent: 2 }, seen: /"warnings":\[[^\]]*refuse this sender/ })).toEqual([]);
    await house.minutes(20);
    expect(await house.oracles({ told: Object.fromEntries(names.map((name) => [name, 25])), books: { sent: 32 } })).toEqual([]);
  });

  test('F62: says 403 of an address that somebody signed up with: that is no quarrel, and everybody else is told', async () => {
    const house = new WireHouse(world, ({ name }) => ({ status: name === 'eve' ? 403 : 201 }), { nowIso: new Date(dueMs - 5 * MINUTE_MS).toISOString() });
    await house.people({ ana: ['push'], eve: ['push'] });
    house.d1.ask(`UPDATE channel SET state = 'unverified', ask_at = 0 WHERE subscription_id = 'eve'`);
    await house.minutes(5);
    expect(house.of('eve')).toMatchObject([{ read: { kind: 'confirm' } }]);
    await house.minutes(8);
    expect(await house.oracles({ told: { ana: 0 }, books: { sent: 1, dead: 1 }, seen: /1 messages could not be delivered/ })).toEqual([]);
  });

  test('F63: says 201 with a place and twenty megabytes: they are not read', async () => {
    const house = new WireHouse(world, ana({ status: 201, headers: { location: 'http://127.0.0.1:9/receipt' }, body: 'x'.repeat(20_000_000) }));
    await house.people({ ana: ['push'], ben: ['other push'] });
    await house.minutes(2);
    expect(await world.push.pushed.at(-1)?.isAnswerRead).toBe(false);
    expect(await world.other.pushed.at(-1)?.isAnswerRead).toBe(true);
    expect(await house.oracles({ told: { ana: 0, ben: 0 }, books: { sent: 2 } })).toEqual([]);
  });

  test('F64: takes it, and says so too late: the repeat has the same topic, and the browser shows one notification', async () => {
    const house = new WireHouse(world, ana({ status: 201, lateMs: 16_000 }, { status: 201 }));
    await house.people({ ana: ['push'], ben: ['push'] });
    await house.minutes(4);
    const knocks = house.of('ana');
    expect(knocks).toHaveLength(2);
    expect(new Set(knocks.map(({ headers }) => headers['topic'])).size).toBe(1);
    const browser = new PushedBrowser(house.nowMs);
    for (const { read } of knocks) await browser.push(read);
    expect(browser.sees()).toMatchObject([{ id: knocks[0]?.read['id'] }]);
    expect(await house.oracles({ told: { ana: 0, ben: 1 }, repeats: 1, books: { sent: 2 } })).toEqual([]);
  });

  test.each([200, 202])('F65: says %i: it has it', async (status) => {
    const house = new WireHouse(world, ana({ status }));
    await house.people({ ana: ['push'], ben: ['push'] });
    await house.minutes(3);
    expect(await house.oracles({ told: { ana: 0, ben: 0 }, books: { sent: 2 } })).toEqual([]);
  });

  test.each([301, 302, 303, 307, 308])('F65: says %i and where to: nobody goes there, it is tried again where it belongs', async (status) => {
    const house = new WireHouse(world, ana({ status, headers: { location: `${world.other.origin}/elsewhere` } }, { status: 201 }));
    await house.people({ ana: ['push'], ben: ['push'] });
    const elsewhere = world.other.pushed.length;
    await house.minutes(3);
    expect(world.other.pushed.length).toBe(elsewhere);
    expect(await house.oracles({ told: { ana: 2, ben: 0 }, books: { sent: 2 } })).toEqual([]);
  });

  // A channel without encryption, so that ten thousand take seconds; that a push service's 429 is "busy" stands in wire.test.ts.
  test('F66: takes a hundred a second of ten thousand: they come at the pace it takes, all within minutes, nobody is given up', async () => {
    const names = Array.from({ length: 10_000 }, (_, index) => `s${index}`);
    const bucket = { tokens: 100, atMs: dueMs };
    let refused = 0;
    const crowded: Channel = {
      lane: ({ id }) => id,
      host: () => 'https://push.example.net',
      send: (message, { subscriptionId = '' }) => {
        // A send takes 5 ms: left alone we would be twice as fast.
        house.nowMs += 5;
        bucket.tokens = Math.min(100, bucket.tokens + (house.nowMs - bucket.atMs) / 10);
        bucket.atMs = house.nowMs;
        const taken = bucket.tokens >= 1;
        if (taken) bucket.tokens -= 1;
        else refused += 1;
        house.told.push({ name: subscriptionId, id: message.id, atMs: house.nowMs, said: message.text, verdicts: message.days.map(({ verdict }) => verdict), validUntilMs: message.validUntilMs, taken });
        return Promise.resolve(taken ? { state: 'sent' } : { state: 'retry', reason: 'the push service answered 429', afterMs: 0, busy: true });
      },
    };
    const house: WireHouse = new WireHouse(world, undefined, { random: seeded(66), sleep: (ms) => house.sleep(ms), env: { CALLS_AN_INVOCATION: '1000' }, instead: ({ channels }) => ({ channels: { ...channels, push: crowded } }) });
    await house.people({ ...Object.fromEntries(names.map((name) => [name, ['crowd'] as const])), ben: ['webhook'] });
    for (let minute = 0; minute < 6; minute += 1) {
      house.nowMs = Math.max(house.nowMs, dueMs + minute * MINUTE_MS);
      await house.minute();
    }
    expect(refused).toBeLessThan(500);
    expect(await house.oracles({ told: { ...Object.fromEntries(names.map((name) => [name, 5])), ben: 3 }, books: { sent: 10_001 } })).toEqual([]);
  });

  test('F66: takes nothing of many for an hour: whoever is told by another way does not wait for it', async () => {
    const house: WireHouse = new WireHouse(world, ({ way, atMs }) => ({ status: way === 'push' && atMs < dueMs + HOUR_MS ? 429 : 201 }), { random: seeded(67), sleep: (ms) => house.sleep(ms), wireless: true });
    const [busy, others] = ['busy', 'other'].map((word) => Array.from({ length: 60 }, (_, index) => `${word}${index}`)) as [string[], string[]];
    await house.people({ ...Object.fromEntries(busy.map((name) => [name, ['push'] as const])), ...Object.fromEntries(others.map((name) => [name, ['other push'] as const])) });
    for (let minute = 0; minute < 120; minute += 1) {
      house.nowMs = Math.max(house.nowMs, dueMs + minute * MINUTE_MS);
      await house.minute();
    }
    expect(await house.oracles({ told: { ...Object.fromEntries(busy.map((name) => [name, 120])), ...Object.fromEntries(others.map((name) => [name, 1])) }, books: { sent: 120 } })).toEqual([]);
  });
});

describe('what a push service took', () => {
  test('F67: and no browser shows: the page of the subscription and the test of the week say when it was last handed over, and no more', async () => {
    const house = new WireHouse(world);
    await house.people({ ana: ['push'] });
    await house.minutes(5);
    const { manage } = await secretLinks({ publicUrl: '', linkKey: 'a-link-key-for-tests-only-0123456789' }, 'ana', 1);
    const page = await (await app(house.services()).request(manage)).text();
    expect(page).toMatch(/Last handed over on Fri 14 May[^<]*6:00[^<]*; the browser has not said that it showed anything/);
    expect(page).toContain('not shown so far');
    expect(await house.oracles({ told: { ana: 0 }, books: { sent: 1 } })).toEqual([]);
    // Wednesday noon.
    house.nowMs = Date.parse('2027-05-19T09:58:00Z');
    house.told.length = 0;
    await house.minutes(70);
    const test = house.of('ana').find(({ read }) => read['kind'] === 'test');
    expect(test?.read['title']).toMatch(/^Test/);
    expect(test?.read['body']).toMatch(/Something was last handed over on this way/);
  });

  test('F68: comes in the wrong order: the older brief is not shown as the newer', async () => {
    const house = new WireHouse(world, undefined, { judge: (input) => judgedAs(input, input.issuedAt < '2027-05-14T06:00:00Z' ? 'within' : 'beyond') });
    await house.people({ ana: ['push'], ben: ['push'] });
    await house.minutes(180);
    const [brief, change] = house.of('ana');
    expect([brief?.read['kind'], change?.read['kind']]).toEqual(['brief', 'change']);
    const browser = new PushedBrowser(house.nowMs);
    await browser.push(change?.read);
    await browser.push(brief?.read);
    expect(browser.sees()).toMatchObject([{ id: change?.read['id'], title: expect.stringMatching(/beyond a limit/i) }]);
    // Wiped away by its user, it does not let the older one in either.
    browser.wipe();
    await browser.push(brief?.read);
    expect(browser.sees()).toMatchObject([{ id: change?.read['id'] }]);
    // And when both have ceased to hold, neither does.
    browser.nowMs = Date.parse(String(change?.read['validUntil']));
    await browser.push(brief?.read);
    expect(browser.sees()).toMatchObject([{ title: 'Expired' }]);
    expect(await house.oracles({ told: { ana: 0, ben: 0 }, verdict: { ana: ['within', 'beyond'], ben: ['within', 'beyond'] }, messages: 2, books: { sent: 4 } })).toEqual([]);
  });
});
