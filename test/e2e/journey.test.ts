// The whole life of a subscription by HTTP alone, over a loopback port, in twelve zones at each of their two changes of the
// clocks: asked for, confirmed, told on the morning of the change, a sheet changed, paused, resumed, ended by one click.
// When the clocks change, and what they show, is read from the runtime's own tables of zones and not from our time.ts.
import { afterEach, expect, test } from 'vitest';
import { FastPostHouse } from '../support/fast-post-house.ts';
import { serve, type Served } from '../browser/support/server.ts';

const ZONES = [
  'Europe/Vienna', 'Europe/London', 'America/New_York', 'America/Los_Angeles', 'America/St_Johns', 'America/Santiago', 'Africa/Cairo', 'Asia/Beirut',
  'Atlantic/Azores', 'Australia/Lord_Howe', 'Australia/Adelaide', 'Pacific/Auckland',
];
const MINUTE_MS = 60_000;
const HOUR_MS = 60 * MINUTE_MS;
const DAY_MS = 24 * HOUR_MS;

const clocks = new Map(ZONES.map((timeZone) => [timeZone, new Intl.DateTimeFormat('sv', { timeZone, dateStyle: 'short', timeStyle: 'medium' })]));

/** What the clocks of a zone show, as if it were UTC. */
function wallMs(atMs: number, timeZone: string): number {
  return Date.parse(`${clocks.get(timeZone)?.format(atMs).replace(' ', 'T') ?? ''}Z`);
}

interface Change {
  readonly atMs: number;
  /** What the clocks jump from and to. */
  readonly fromMs: number;
  readonly toMs: number;
}

/** The two of 2027. */
function changesOf(timeZone: string): Change[] {
  const found: Change[] = [];
  for (let atMs = Date.UTC(2027, 0, 1); atMs < Date.UTC(2028, 0, 1); atMs += 15 * MINUTE_MS) {
    const [before, after] = [wallMs(atMs - MINUTE_MS, timeZone) + MINUTE_MS, wallMs(atMs, timeZone)];
    if (before !== after) found.push({ atMs, fromMs: before, toMs: after });
  }
  return found.slice(0, 2);
}

const clockText = (ms: number): string => new Date(ms).toISOString().slice(11, 16);
const dateText = (ms: number): string => new Date(ms).toISOString().slice(0, 10);

/** When the clocks first show a time of a date; a time that they leave out is as much after the change as it is into the gap (F78, F79). */
function firstMs(wantedWallMs: number, timeZone: string, { atMs, fromMs, toMs }: Change): number {
  if (wantedWallMs >= fromMs && wantedWallMs < toMs) return atMs + (wantedWallMs - fromMs);
  const candidates = [-1, 0, 1].map((hours) => wantedWallMs - (wallMs(atMs + hours * DAY_MS, timeZone) - (atMs + hours * DAY_MS)));
  const right = candidates.filter((ms) => wallMs(ms, timeZone) === wantedWallMs);
  if (right.length === 0) throw new Error(`${timeZone} never shows ${new Date(wantedWallMs).toISOString()}`);
  return Math.min(...right);
}

let served: Served | undefined;
let house: FastPostHouse | undefined;

afterEach(async () => {
  await served?.close();
  house?.d1.close();
});

const cases = ZONES.flatMap((timeZone) => changesOf(timeZone).map((change) => [timeZone, dateText(change.toMs), change] as const));

test('there are twelve zones and two changes of each', () => {
  expect(cases.length).toBe(24);
  expect(cases.filter(([, , { fromMs, toMs }]) => toMs > fromMs).length).toBe(12);
});

test.each(cases)('%s, clocks changed on %s: told once a wanted morning at the hour that was chosen, and no trace at the end', async (timeZone, _, change) => {
  // In the middle of the hour that is left out, or of the one that comes twice.
  const [low, high] = [Math.min(change.fromMs, change.toMs), Math.max(change.fromMs, change.toMs)];
  const wanted = low + Math.floor((high - low) / (2 * MINUTE_MS)) * MINUTE_MS;
  const isGap = change.toMs > change.fromMs;
  const dueMs = (daysLater: number): number => {
    if (daysLater > 0) return firstMs(wanted + daysLater * DAY_MS, timeZone, change);
    return isGap ? change.atMs + (wanted - change.fromMs) : change.atMs - (change.fromMs - wanted);
  };
  const post = await FastPostHouse.open({ nowIso: new Date(dueMs(0) - 12 * HOUR_MS).toISOString() });
  house = post;
  const http = await serve({ request: (path: string, init?: RequestInit) => post.doors().request(path, init) } as Parameters<typeof serve>[0], { after: () => post.answerAll() });
  served = http;
  const address = 'Ana@Mail.Example.org';
  const ask = (method: string, path: string, body?: unknown): Promise<Response> => fetch(`${http.origin}${path}`, { method, redirect: 'manual', ...(body === undefined ? {} : { body: JSON.stringify(body), headers: { 'content-type': 'application/json' } }) });
  const form = (path: string, fields: Record<string, string>): Promise<Response> => fetch(`${http.origin}${path}`, { method: 'POST', body: new URLSearchParams(fields), redirect: 'manual' });
  /** Minutes pass: a tick every five around the hours that matter, every thirty between. */
  const passTo = async (untilMs: number): Promise<void> => {
    while (post.nowMs < untilMs) {
      const isNear = [0, 1, 2, 3, 4, 5, 6].some((day) => Math.abs(post.nowMs - dueMs(day)) <= 70 * MINUTE_MS);
      post.nowMs = Math.min(untilMs, post.nowMs + (isNear ? 5 : 30) * MINUTE_MS);
      await post.minute();
    }
  };
  // On Wednesdays there is a test besides.
  const briefs = (): { readonly atMs: number; readonly text: string }[] => post.letters.filter(({ headers, subject }) => headers['List-Unsubscribe'] !== undefined && !subject.startsWith('Test: '));
  const expectBrief = (count: number, day: number): void => {
    expect(briefs().length, `day ${day}`).toBe(count);
    const lateMs = (briefs().at(-1)?.atMs ?? NaN) - dueMs(day);
    expect(lateMs >= 0 && lateMs <= 10 * MINUTE_MS, `day ${day}: ${lateMs / MINUTE_MS} min after ${new Date(dueMs(day)).toISOString()}`).toBe(true);
  };

  // Asked for and confirmed, over HTTP and by the link of a mail.
  const wish = { sites: [{ id: 'north', sheet: 'hill' }], wing: { class: 'EN B', allUpMassKg: 95 }, deliver: { at: clockText(wanted), timeZone } };
  expect((await ask('POST', '/api/v1/subscriptions', { ...wish, channels: [{ kind: 'mail', address }] })).status).toBe(202);
  await post.answerAll();
  await passTo(post.nowMs + 30 * MINUTE_MS);
  expect(briefs().length).toBe(0);
  const manage = (await form(post.pathIn('confirm'), { confirm: '1' })).headers.get('location') ?? '';
  const api = `/api/v1${manage}`;

  // The morning on which the clocks change.
  await passTo(dueMs(0) + 5 * HOUR_MS);
  expectBrief(1, 0);
  expect(briefs().at(-1)?.text).toContain('sheet Hill');
  if (isGap) expect(clockText(wallMs(briefs().at(-1)?.atMs ?? 0, timeZone)) >= clockText(wanted)).toBe(true);

  // Another sheet, from the next brief on.
  expect((await ask('PUT', api, { ...wish, sites: [{ id: 'north', sheet: 'easy' }] })).status).toBe(200);
  await passTo(dueMs(1) + 5 * HOUR_MS);
  expectBrief(2, 1);
  expect(briefs().at(-1)?.text).toContain('sheet Easy');

  // Paused for one morning, and then without an end.
  expect((await ask('POST', api, { action: 'pause', until: dateText(wanted + 3 * DAY_MS) })).status).toBe(200);
  await passTo(dueMs(2) + 5 * HOUR_MS);
  expect(briefs().length).toBe(2);
  await passTo(dueMs(3) + 5 * HOUR_MS);
  expectBrief(3, 3);
  expect((await ask('POST', api, { action: 'pause' })).status).toBe(200);
  await passTo(dueMs(4) + 5 * HOUR_MS);
  expect(briefs().length).toBe(3);
  expect((await ask('POST', api, { action: 'resume' })).status).toBe(200);
  await passTo(dueMs(5) + 5 * HOUR_MS);
  expectBrief(4, 5);

  expect((await ask('POST', api, { action: 'test' })).status).toBe(200);

  // One click, as a mail program makes it, and nothing is left of her: not in a table, not behind a link, not in a later morning.
  const [{ id } = { id: '' }] = post.d1.ask<{ id: string }>('SELECT id FROM subscription');
  const leave = new URL(/<(.+)>/.exec(post.letters.at(-1)?.headers['List-Unsubscribe'] ?? '')?.[1] ?? '').pathname;
  const feed = new URL(/https?:\S+\.atom/.exec(post.letters.at(-1)?.text ?? '')?.[0] ?? '').pathname;
  expect((await ask('GET', feed)).status).toBe(200);
  expect((await form(leave, { 'List-Unsubscribe': 'One-Click' })).status).toBe(200);
  expect(id).not.toBe('');
  expect(post.everyRow().toLowerCase()).not.toMatch(new RegExp(`${id.toLowerCase()}|ana@|mail\\.example`));
  expect(post.everyRow()).not.toContain('own-');
  for (const path of [manage, api, leave, feed]) expect((await ask('GET', path)).status, path).toBe(404);
  await passTo(dueMs(6) + 5 * HOUR_MS);
  expect(briefs().length).toBe(4);
});
