// Threats and bad input of the catalogue (assurance.md 2.3, 4-B, 4-C) that no other file names, through the doors that
// strangers have: what they hand in, what providers hand in, and what stands in the lockfile.
import { readFileSync } from 'node:fs';
import path from 'node:path';
import { afterEach, describe, expect, test } from 'vitest';
import { judgeDay } from '../../lib/brief/judge-day.ts';
import type { SourceFailure } from '../../lib/forecast/failure.ts';
import { failure, success } from '../../lib/result.ts';
import { sha256Hex } from '../../worker/secrets.ts';
import { answersTo } from '../support/fast-house.ts';
import { FastPostHouse, OPERATOR_TOKEN } from '../support/fast-post-house.ts';
import { root } from '../support/run-tool.ts';
import { launchFeature } from '../worker/support/stand-ins.ts';

const EVENING = '2027-05-13T20:00:00Z';
const MORNING_MS = Date.parse('2027-05-14T04:00:00Z');
const bearer = { authorization: `Bearer ${OPERATOR_TOKEN}` };
const wish = (over: Readonly<Record<string, unknown>> = {}) => ({
  sites: [{ id: 'north', sheet: 'hill' }], wing: { class: 'EN B' }, deliver: { at: '06:00', timeZone: 'Europe/Vienna' }, channels: [{ kind: 'mail', address: 'ana@mail.example.org' }], ...over,
});

let house: FastPostHouse | undefined;

afterEach(() => {
  house?.d1.close();
  house = undefined;
});

async function opened(options: Partial<ConstructorParameters<typeof FastPostHouse>[0]> = {}): Promise<FastPostHouse> {
  const made = await FastPostHouse.open({ nowIso: EVENING, ...options });
  house = made;
  return made;
}

async function told(post: FastPostHouse): Promise<string> {
  await post.ask('POST', '/api/v1/subscriptions', wish());
  await post.answerAll();
  await post.form(post.pathIn('confirm'), { confirm: '1' });
  post.nowMs = MORNING_MS;
  await post.minutes(12);
  return post.letters.at(-1)?.text ?? '';
}

describe('what a provider hands in', () => {
  test.each<[string, (at: number) => object]>([
    ['a run of the day before yesterday', (at) => ({ runAt: new Date(at - 40 * 3_600_000).toISOString() })],
    ['a run of tomorrow', (at) => ({ runAt: new Date(at + 20 * 3_600_000).toISOString() })],
    ['a place eighty kilometres away', () => ({ gridDistanceM: 80_000 })],
    ['no hours', () => ({ members: [[]] })],
  ])('T1 %s leads to "cannot say" and never to "within limits"', async (_, spoilt) => {
    const post = await opened({
      judge: judgeDay,
      source: async (request) => new Map([...answersTo(request, MORNING_MS)].map(([id, answer]) => [id, answer.ok ? success({ ...answer.value, ...spoilt(MORNING_MS) }) : answer] as const)),
    });
    const text = await told(post);
    expect(text.toLowerCase()).toContain('cannot say');
    expect(text.toLowerCase()).not.toContain('within limits');
  });

  test('T3 no text of a provider reaches a letter, a page, a feed or the log', async () => {
    const EVIL = '<script>evil</script>\r\nBcc: x@y.example\r\nBEGIN:VEVENT';
    const why: SourceFailure = { kind: 'unit', field: 'gustMps', expected: 'm/s', found: EVIL };
    const post = await opened({ judge: judgeDay, source: async (request) => new Map(request.sites.map(({ id }) => [id, failure(why)] as const)) });
    const letter = await told(post);
    const feed = new URL(/https?:\S+\.atom/.exec(letter)?.[0] ?? '').pathname;
    const pages = await Promise.all(['/', '/sites/north', '/status', '/healthz', feed, feed.replace('.atom', '.ics')].map(async (at) => (await post.ask('GET', at)).text()));
    const log = JSON.stringify(post.d1.ask('SELECT * FROM log'));
    const headers = JSON.stringify(post.letters.map(({ headers: own, subject }) => [own, subject]));
    for (const output of [letter, post.letters.at(-1)?.html ?? '', headers, log, ...pages]) expect(output).not.toMatch(/<script>evil|evil<|Bcc: x@|\nBEGIN:VEVENT\r?\n[^D]*evil/);
    expect(letter.toLowerCase()).toContain('cannot say');
  });
});

describe('people at the door', () => {
  test('T8 ten thousand sign-ups for one mailbox from five hundred networks: one mail, with nothing of theirs in it', async () => {
    const post = await opened({ instead: ({ settings }) => ({ settings: { ...settings, local: false, mailFrom: 'brief@dawnmargin.example.org' } }) });
    const doors = post.doors();
    const statuses: Record<string, number> = {};
    for (let index = 0; index < 10_000; index += 1) {
      const address = ['ana@mail.example.org', 'ANA@mail.example.org', 'Ana@MAIL.example.ORG'][index % 3] ?? '';
      const body = JSON.stringify(wish({ channels: [{ kind: 'mail', address }] }));
      const { status } = await doors.request('/api/v1/subscriptions', { method: 'POST', body, headers: { 'content-type': 'application/json', 'cf-connecting-ip': `198.${Math.floor(index / 20) >> 8}.${(Math.floor(index / 20)) & 255}.7` } });
      statuses[status] = (statuses[status] ?? 0) + 1;
      if (index % 1000 === 0) await post.answerAll();
    }
    await post.answerAll();
    expect(statuses).toEqual({ 202: 10_000 });
    expect(post.letters.map(({ to }) => to.toLowerCase())).toEqual(['ana@mail.example.org']);
    expect(post.letters[0]?.text).not.toMatch(/ana@/i);
  });

  test('T10 a thousand who sign up at once take no mail from those who are told, and no more than three hundred an hour are answered', async () => {
    const post = await opened();
    await told(post);
    post.nowMs = Date.parse('2027-05-15T03:50:00Z');
    for (let index = 0; index < 1000; index += 1) await post.ask('POST', '/api/v1/subscriptions', wish({ channels: [{ kind: 'mail', address: `c${index}@mail.example.org` }] }));
    const isBrief = (letter: { readonly headers: Readonly<Record<string, string>> }): boolean => letter.headers['List-Unsubscribe'] !== undefined;
    const before = post.letters.filter(isBrief).length;
    post.nowMs = Date.parse('2027-05-15T04:00:00Z');
    await post.minute();
    expect(post.letters.filter(isBrief).length).toBe(before + 1);
    await post.minutes(50);
    expect(post.letters.filter((letter) => !isBrief(letter) && letter.atMs >= Date.parse('2027-05-15T04:00:00Z')).length).toBeLessThanOrEqual(300);
    for (let hour = 0; hour < 4; hour += 1) {
      for (let minute = 0; minute < 60; minute += 1) await post.minutes(1);
    }
    // Nobody who came was forgotten, only made to wait.
    expect(new Set(post.letters.map(({ to }) => to)).size).toBe(1001);
  });

  test('T12 every table is empty of who was told and of who had only asked, once they are forgotten', async () => {
    const post = await opened();
    await told(post);
    await post.ask('POST', '/api/v1/subscriptions', wish({ channels: [{ kind: 'mail', address: 'ben@mail.example.org' }] }));
    await post.answerAll();
    for (const address of ['ana@mail.example.org', 'ben@mail.example.org']) await post.ask('POST', '/api/v1/operator/forget', { address }, bearer);
    expect(post.everyRow()).not.toMatch(/ana@|ben@|mail\.example/i);
    for (const table of ['subscription', 'subscription_site', 'channel', 'outbox', 'signup', 'token']) expect(post.d1.ask(`SELECT * FROM ${table}`), table).toEqual([]);
  });

  test.each(['../../etc', 'xx', 'en-GB', ''])('C20 who asks for the language %j is answered in the one there is', async (language) => {
    const post = await opened();
    expect((await post.ask('POST', '/api/v1/subscriptions', wish({ language }))).status).toBe(202);
  });

  test.each(['9999-12-31', '2100-01-01', '0000-01-01', '2027-05-13', '2027-02-30', '20270520'])('a pause until %j is refused, by its own action and among the wishes', async (until) => {
    const post = await opened();
    const made = await post.ask('POST', '/api/v1/subscriptions', wish({ channels: [{ kind: 'webhook', url: 'http://127.0.0.1:9/x' }] }));
    const api = `/api/v1${new URL(((await made.json()) as { links: { manage: string } }).links.manage).pathname}`;
    expect((await post.ask('POST', api, { action: 'pause', until })).status).toBe(400);
    // Among the wishes a day that has passed is no pause.
    expect((await post.ask('POST', '/api/v1/subscriptions', wish({ pauseUntil: until }))).status).toBe(['2027-05-13', '0000-01-01'].includes(until) ? 202 : 400);
    expect((await post.ask('POST', api, { action: 'pause', until: '2099-12-31' })).status).toBe(200);
  });

  test('B26 an hour that the clocks leave out is taken, shown as it was asked for, and kept to as F78 has it', async () => {
    const post = await opened({ nowIso: '2027-03-27T12:00:00Z' });
    const asked = await post.ask('POST', '/api/v1/subscriptions', wish({ deliver: { at: '02:30', timeZone: 'Europe/Vienna' }, channels: [{ kind: 'webhook', url: 'http://127.0.0.1:9/x' }] }));
    const { links } = (await asked.json()) as { links: { manage: string } };
    const kept = await (await post.ask('GET', `/api/v1${new URL(links.manage).pathname}`)).json();
    expect(kept).toMatchObject({ deliver: { at: '02:30', timeZone: 'Europe/Vienna' }, nextBriefAt: '2027-03-28T01:30:00Z' });
  });
});

describe('what an operator hands in', () => {
  const launch = launchFeature('north') as { readonly properties: object };
  const withProperties = (more: object): unknown => ({ type: 'FeatureCollection', features: [{ ...launch, properties: { ...launch.properties, ...more } }] });
  const sheet = (more: object): unknown => ({ id: 'hill', name: 'Hill', kind: 'launch', limits: { maxMeanMps: 6 }, ...more });
  const SITES = '/api/v1/operator/sites';
  const HILL = '/api/v1/operator/sheets/hill';

  test.each<[string, string, unknown, string]>([
    ['B1 YAML', SITES, 'type: FeatureCollection\nfeatures: []', '$'], ['B1 XML', SITES, '<?xml version="1.0"?><sites/>', '$'], ['B1 nothing', SITES, ' ', '$'],
    ['B8 hours that end before they begin', SITES, withProperties({ localWind: [{ fromHour: 14, toHour: 9, speedMps: 5, fromDeg: 9 }] }), '$.features[0].properties.localWind[0].toHour'],
    ['B10 a limit without a unit', HILL, sheet({ limits: { maxMean: 6 } }), '$.limits.maxMean'], ['B11 a limit in miles an hour: every unit stands in the name, and none is turned', HILL, sheet({ limits: { maxMeanMph: 12 } }), '$.limits.maxMeanMph'],
    ['B11 a limit with its unit as text', HILL, sheet({ limits: { maxMeanMps: '12 mph' } }), '$.limits.maxMeanMps'],
    ['B22 a zone that is valid and elsewhere', SITES, withProperties({ timeZone: 'America/New_York' }), '$.features[0].properties.timeZone'],
    ['B27 an age of zero', HILL, sheet({ maxAgeHours: 0 }), '$.maxAgeHours'], ['B27 an age of ten thousand hours', HILL, sheet({ limits: { maxMeanMps: 6, maxAgeHours: 10_000 } }), '$.limits.maxAgeHours'],
    ['B35 a link', SITES, withProperties({ link: 'javascript:alert(1)' }), '$.features[0].properties.link'],
    ['B33 a name that turns the direction of what follows', SITES, withProperties({ name: 'North \u202egnihton' }), '$.features[0].properties.name'],
    ['B32 a name with a line of its own', SITES, withProperties({ name: 'North\r\nBcc: x@y.example' }), '$.features[0].properties.name'],
  ])('%s is refused with its place, and nothing is stored', async (_, door, body, place) => {
    const post = await opened();
    const etag = (await post.ask('GET', door, undefined, bearer)).headers.get('etag') ?? '';
    const before = post.everyRow();
    const response = await post.ask('PUT', door, body, { ...bearer, 'if-match': etag });
    const { problems } = (await response.json()) as { problems: { path: string }[] };
    expect([response.status, problems.map((problem) => problem.path)]).toEqual([400, expect.arrayContaining([place])]);
    expect(post.everyRow()).toBe(before);
  });
});

test('T4 B38 where the operator has set two keys, what loosens a sheet waits for the second; what tightens it does not', async () => {
  const SECOND = 'another-token-for-tests-only-0123456789abcdef';
  const post = await opened({ env: { OPERATOR_SECOND_TOKEN_SHA256: await sha256Hex(SECOND) } });
  const HILL = '/api/v1/operator/sheets/hill';
  const sheet = (maxMeanMps: number) => ({ id: 'hill', name: 'Hill', kind: 'launch', limits: { maxMeanMps } });
  const second = { authorization: `Bearer ${SECOND}` };
  const before = post.everyRow();
  const put = async (mps: number, etag: string, headers: Readonly<Record<string, string>> = {}) => (await post.ask('PUT', HILL, sheet(mps), { ...bearer, 'if-match': etag, ...headers })).status;
  expect(await put(25, '"1"')).toBe(409);
  // One person with one key, whichever it is, cannot do it alone.
  expect((await post.ask('POST', `${HILL}/approval`, sheet(25), { ...bearer, 'if-match': '"1"' })).status).toBe(401);
  expect((await post.ask('PUT', HILL, sheet(25), { ...second, 'if-match': '"1"' })).status).toBe(401);
  const { approval } = (await (await post.ask('POST', `${HILL}/approval`, sheet(8), { ...second, 'if-match': '"1"' })).json()) as { approval: string };
  // What was approved is this text and no other.
  expect(await put(25, '"1"', { approval })).toBe(409);
  expect(await put(8, '"1"', { approval: `${approval}x` })).toBe(409);
  expect(post.everyRow()).toBe(before);
  expect(await put(8, '"1"', { approval })).toBe(200);
  expect(await put(5, '"2"')).toBe(200);
  // And this place in the order of versions: it is good once.
  expect(await put(8, '"3"', { approval })).toBe(409);
  const [newest] = post.d1.ask<{ body: string; version: number }>(`SELECT body, version FROM sheet WHERE id = 'hill' ORDER BY version DESC LIMIT 1`);
  expect([newest?.version, JSON.parse(newest?.body ?? '{}')]).toEqual([3, { ...sheet(5), version: 3 }]);
});

test('T32 "you said it was within limits": from what is kept the brief is made again, byte for byte', async () => {
  const post = await opened({ judge: judgeDay });
  await told(post);
  const briefs = (): { body: string; digest: string; input_hash: string }[] => post.d1.ask('SELECT body, digest, input_hash FROM brief ORDER BY site_id, wing_key');
  const [said] = briefs();
  expect(said?.input_hash).toMatch(/^[0-9a-f]{16,}$/);
  const issuedAtMs = post.d1.ask<{ issued_at: number }>('SELECT issued_at FROM brief')[0]?.issued_at ?? 0;
  post.d1.ask('DELETE FROM brief');
  post.d1.ask(`UPDATE run SET state = 'wanted', attempts = 0, next_attempt_at = 0, start_by = 0 WHERE step = 'assess'`);
  post.nowMs = issuedAtMs;
  post.queue.push('assess');
  await post.answerAll();
  expect(briefs()).toEqual([said]);
});

test('T33 every package of the lockfile is held to a hash, comes from no named address, and is of one exact version', () => {
  const lock = JSON.parse(readFileSync(path.join(root, 'package-lock.json'), 'utf8')) as { packages: Record<string, { integrity?: string; resolved?: string; link?: boolean }> };
  const own = JSON.parse(readFileSync(path.join(root, 'package.json'), 'utf8')) as { dependencies: Record<string, string>; devDependencies: Record<string, string>; allowScripts: Record<string, boolean> };
  const packages = Object.entries(lock.packages).filter(([name]) => name !== '');
  expect(packages.length).toBeGreaterThan(100);
  expect(packages.filter(([, { integrity, resolved }]) => !(integrity ?? '').startsWith('sha512-') || resolved !== undefined).map(([name]) => name)).toEqual([]);
  for (const version of Object.values({ ...own.dependencies, ...own.devDependencies })) expect(version).toMatch(/^\d+\.\d+\.\d+(-[\w.]+)?$/);
  expect(Object.keys(own.allowScripts).toSorted()).toEqual(['esbuild', 'node', 'workerd']);
  expect(Object.keys(own.dependencies).length).toBeLessThanOrEqual(6);
});
