// Subscribing, changing and leaving over HTTP, by the ids of assurance.md (C and T).
import { env } from 'cloudflare:workers';
import { beforeEach, describe, expect, test } from 'vitest';
import { CLOSING } from '../../lib/brief/words/index.ts';
import { everyRow, newPostHouse, wish, type PostHouse } from './support/post-house.ts';

let house: PostHouse;

beforeEach(async () => {
  house = await newPostHouse({ nowIso: '2027-05-13T20:00:00Z' });
});

const POST = '/api/v1/subscriptions';

async function subscribed(over: Readonly<Record<string, unknown>> = {}): Promise<string> {
  expect((await house.ask('POST', POST, wish(over))).status).toBe(202);
  await house.answerAll();
  const response = await house.form(house.pathIn('confirm'), { confirm: '1' });
  expect(response.status).toBe(303);
  return response.headers.get('location')!;
}

async function count(table: string): Promise<number> {
  return (await env.DB.prepare(`SELECT COUNT(*) AS n FROM ${table}`).first<{ n: number }>())!.n;
}

describe('a whole life', () => {
  test('subscribe, confirm, brief, change, pause, resume, one click, no trace', async () => {
    const manage = await subscribed();
    expect(await count('signup')).toBe(0);
    house.nowMs = Date.parse('2027-05-14T04:00:00Z');
    await house.minute();
    const brief = house.letters.at(-1)!;
    expect(brief.to).toBe('ana@mail.example.org');
    expect(brief.subject).toBe('Within limits, with 1 window, Site north, Fri 14 May'.replace(', with 1 window', ''));
    expect(brief.text).toContain(CLOSING);
    expect(brief.headers['List-Unsubscribe-Post']).toBe('List-Unsubscribe=One-Click');
    expect((await house.form(manage, { action: 'change', 'sheet:north': 'easy' })).status).toBe(200);
    house.nowMs = Date.parse('2027-05-15T04:00:00Z');
    await house.minute();
    expect(house.letters.at(-1)!.text).toContain('sheet Easy');
    const before = house.letters.length;
    expect((await house.form(manage, { action: 'pause', until: '2027-05-18' })).status).toBe(200);
    for (const day of ['16', '17']) {
      house.nowMs = Date.parse(`2027-05-${day}T04:00:00Z`);
      await house.minutes(2);
    }
    expect(house.letters.length).toBe(before);
    house.nowMs = Date.parse('2027-05-17T20:00:00Z');
    await house.minute();
    house.nowMs = Date.parse('2027-05-18T04:00:00Z');
    await house.minute();
    expect(house.letters.length).toBe(before + 1);
    expect((await house.form(manage, { action: 'pause' })).status).toBe(200);
    expect((await house.form(manage, { action: 'resume' })).status).toBe(200);
    house.nowMs = Date.parse('2027-05-19T04:00:00Z');
    await house.minute();
    expect(house.letters.length).toBe(before + 2);
    const id = (await env.DB.prepare('SELECT id FROM subscription').first<{ id: string }>())!.id;
    const leave = new URL(house.letters.at(-1)!.headers['List-Unsubscribe']!.slice(1, -1)).pathname;
    expect((await house.form(leave, { 'List-Unsubscribe': 'One-Click' })).status).toBe(200);
    const rows = await everyRow();
    expect(rows).not.toContain('ana@');
    expect(rows).not.toContain(id);
    for (const path of [manage, leave]) expect((await house.ask('GET', path)).status).toBe(404);
    house.nowMs = Date.parse('2027-05-20T04:00:00Z');
    await house.minute();
    expect(house.letters.length).toBe(before + 2);
  });
});
