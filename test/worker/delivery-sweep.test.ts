// The n-th-operation sweep (F31, F32, F34, F42, F43, F54, F64, F72): a whole morning in which one call fails, for every
// call there is and in every way it can.
import { env } from 'cloudflare:workers';
import { beforeEach, describe, expect, test, vi } from 'vitest';
import { app } from '../../worker/routes/app.ts';
import { Faults, MODES, type Kind, type Mode } from './support/faults.ts';
import { newHouse, type House } from './support/house.ts';

// What the house says about faults that the test has made is of no interest to who reads the tests.
beforeEach(() => { vi.spyOn(console, 'error').mockImplementation(() => undefined); });

const six = '2027-05-14T04:00:00Z';
const hook = (name: string): string => `http://127.0.0.1:9/${name}`;
const subscribers = [
  { id: 'ana', sites: ['north', 'south'], urls: [hook('ana')], dueIso: six },
  { id: 'ben', sites: ['south'], urls: [hook('ben')], dueIso: six },
];

/** One morning with one fault: the platform goes on calling, and forgets calls that failed, as the harsher of the two does. */
async function morningWith(faults: Faults): Promise<House> {
  const house = await newHouse({ nowIso: six });
  await house.seed(subscribers);
  house.options = { ...house.options, faults };
  for (let minute = 0; minute < 10; minute += 1) {
    try {
      await house.minute();
    } catch {
      // A tick that fails is a tick that the platform reports; the next one comes anyway.
      await house.answerAll().catch(() => undefined);
    }
    house.nowMs += 60_000;
    const open = await env.DB.prepare(`SELECT COUNT(*) AS n FROM outbox WHERE state = 'pending'`).first<{ n: number }>();
    const all = await env.DB.prepare('SELECT COUNT(*) AS n FROM outbox').first<{ n: number }>();
    if (all!.n === subscribers.length && open!.n === 0) break;
  }
  return house;
}

async function checkOracles(house: House, faults: Faults): Promise<string[]> {
  const wrong: string[] = [];
  const rows = await house.outbox();
  // O2: nothing lost, everything settled with a reason.
  if (rows.length !== subscribers.length) wrong.push(`${rows.length} rows`);
  for (const row of rows) if (row.state !== 'sent' || row.reason === null) wrong.push(`${row.channel_id} is ${row.state}: ${row.reason}`);
  for (const { id } of subscribers) {
    const posts = house.posts.filter((post) => post.url.endsWith(`/${id}`));
    // O3: one id, and no more sends than one and those that a crash had in flight.
    if (new Set(posts.map((post) => post.id)).size !== 1) wrong.push(`${id} got ${posts.length} messages under ${new Set(posts.map((post) => post.id)).size} ids`);
    if (posts.length > 2) wrong.push(`${id} got ${posts.length} messages`);
    if (new Set(posts.map((post) => post.body)).size > 1) wrong.push(`${id} got different messages under one id`);
    // O4 and O5: in time, whatever happened to the other.
    for (const post of posts) if (post.atMs - Date.parse(six) > 5 * 60_000) wrong.push(`${id} was told after ${(post.atMs - Date.parse(six)) / 60_000} minutes`);
    // O1: what it says is what was judged.
    for (const post of posts) if (!/"verdict":"within"/.test(post.body)) wrong.push(`${id} was told something else`);
  }
  // O6: the house says that it works again.
  if ((await app(house.services()).request('/healthz')).status !== 200) wrong.push('health is not 200');
  return wrong.map((text) => `${faults.kind} call ${faults.at}, ${faults.mode}: ${text}`);
}

describe.each<Kind>(['db', 'fetch', 'queue'])('every %s call of a morning', (kind) => {
  test.each<Mode>(MODES.map((mode) => mode))('fails in the way "%s", and nothing is lost', { timeout: 240_000 }, async (mode) => {
    const wrong: string[] = [];
    let cases = 0;
    for (let at = 1; ; at += 1) {
      const faults = new Faults(kind, at, mode);
      const house = await morningWith(faults);
      if (!faults.isHit) break;
      cases += 1;
      wrong.push(...(await checkOracles(house, faults)));
    }
    expect(wrong).toEqual([]);
    expect(cases).toBeGreaterThanOrEqual({ db: 30, fetch: 2, queue: 3 }[kind]);
  });
});
