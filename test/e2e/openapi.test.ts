// The description of the API: right by the official schema of OpenAPI 3.1 (spec.openapis.org/oas/3.1, as the validator
// carries it), and true: every answer that it promises is seen here, and none that it does not.
import { Validator } from '@seriousme/openapi-schema-validator';
import { afterAll, beforeAll, expect, test } from 'vitest';
import type { FastPostHouse as House } from '../support/fast-post-house.ts';
import { FastPostHouse, LINK_KEY, OPERATOR_TOKEN } from '../support/fast-post-house.ts';
import { ApiRecorder, type Described } from '../support/api-recorder.ts';
import { openapi } from '../support/openapi.ts';
import { feedDoor } from '../../worker/feeds/door.ts';
import { DESK_METHODS } from '../../worker/routes/desk.ts';
import { FRONT_METHODS } from '../../worker/routes/front.ts';
import { OPERATOR_METHODS } from '../../worker/routes/operator-desk.ts';
import { base64, derivedKey, hmacSha256, sha256Hex } from '../../worker/secrets.ts';
import { newBrowser } from '../worker/support/browser.ts';
import { launchFeature } from '../worker/support/stand-ins.ts';

const NOW = '2027-05-13T20:00:00Z';
const bearer = { authorization: `Bearer ${OPERATOR_TOKEN}` };
const OPERATOR = '/api/v1/operator';
const recorder = new ApiRecorder(openapi() as unknown as Described);
const houses: House[] = [];

async function house(env: Readonly<Record<string, string>> = {}): Promise<House> {
  const door = feedDoor(null, async () => undefined);
  const made = await FastPostHouse.open({ nowIso: NOW, env, instead: () => ({ feedDoor: door }) });
  houses.push(made);
  return made;
}

let first: House;

beforeAll(async () => { first = await house(); });
afterAll(() => { for (const one of houses) one.d1.close(); });

async function ask(method: string, path: string, body?: unknown, { headers = {}, of = first }: { readonly headers?: Readonly<Record<string, string>>; readonly of?: House } = {}): Promise<Response> {
  return recorder.took(method, path, await of.ask(method, path, body, headers));
}

/** What every door that takes JSON refuses in the same way. */
async function refusals(method: string, path: string, headers: Readonly<Record<string, string>> = {}, of = first): Promise<void> {
  expect((await ask(method, path, 'not JSON', { headers, of })).status).toBe(400);
  expect((await ask(method, path, `"${'x'.repeat(300_000)}"`, { headers, of })).status).toBe(413);
  expect((await ask(method, path, '{}', { headers: { ...headers, 'content-type': 'text/plain' }, of })).status).toBe(415);
}

const wish = (channels: readonly unknown[]) => ({ sites: [{ id: 'north', sheet: 'hill' }], wing: { class: 'EN B' }, deliver: { at: '06:00', timeZone: 'Europe/Vienna' }, channels });
const mail = { kind: 'mail', address: 'ana@mail.example.org' };

async function subscribed(): Promise<string> {
  await ask('POST', '/api/v1/subscriptions', wish([mail]));
  await first.answerAll();
  return new URL((await first.form(first.pathIn('confirm'), { confirm: '1' })).headers.get('location') ?? '', 'http://x').pathname;
}

test('is right by the official schema, and the schema finds a document that is not', async () => {
  expect(await new Validator().validate({ ...openapi() })).toEqual({ valid: true });
  const spoilt = structuredClone(openapi()) as { paths: Record<string, unknown>; readonly [part: string]: unknown };
  spoilt.paths['/x'] = { get: { responses: { 200: {} } } };
  expect((await new Validator().validate({ ...spoilt })).valid).toBe(false);
});

test('describes every path of the interface, and no other', () => {
  const answered = Object.keys({ ...DESK_METHODS, ...FRONT_METHODS, ...OPERATOR_METHODS }).filter((path) => /^\/(api|feeds|healthz)/.test(path)).map((path) => path.replaceAll(/:(\w+)/g, '{$1}'));
  const described = Object.keys((openapi() as unknown as Described).paths).filter((path) => path !== '/unsubscribe/{token}');
  expect(described.toSorted()).toEqual(answered.toSorted());
});

test('describes requests that are taken, and none with more in them', () => {
  expect(recorder.takes('post', '/api/v1/subscriptions', wish([mail]))).toBe(true);
  expect(recorder.takes('post', '/api/v1/subscriptions', { ...wish([mail]), confirmed: true })).toBe(false);
  expect(recorder.takes('post', '/api/v1/subscriptions', wish([]))).toBe(false);
  expect(recorder.takes('post', '/api/v1/subscriptions/confirm-push', { nonce: 'x' })).toBe(true);
});

test('reading and judging', async () => {
  const hour = { validAt: '2027-05-14T10:00:00Z', gridElevationM: 900, wind10m: { speedMps: 3, fromDeg: 250 } };
  expect((await ask('POST', '/api/v1/assess', { site: launchFeature('x'), wing: { class: 'EN B' }, sheet: { id: 'hill', limits: { maxMeanMps: 6 } }, hours: [hour] })).status).toBe(200);
  await refusals('POST', '/api/v1/assess');
  const open = await FastPostHouse.open({ nowIso: NOW, instead: ({ settings }) => ({ settings: { ...settings, local: false } }) });
  houses.push(open);
  for (let index = 0; index < 300; index += 1) await open.ask('POST', '/api/v1/assess', '');
  expect((await ask('POST', '/api/v1/assess', {}, { of: open })).status).toBe(429);
  expect((await ask('GET', '/api/v1/sites')).status).toBe(200);
  for (const [path, status] of [['north/days/2027-05-14?wing=EN+B&sheet=hill', 200], ['north/days/2027-05-34', 400], ['nowhere/days/2027-05-14', 404]] as const) expect((await ask('GET', `/api/v1/sites/${path}`)).status).toBe(status);
  const request = { date: '2027-05-14', instructors: 2, sites: [{ id: 'north', capacity: 2 }], groups: [{ name: 'One', wing: 'EN A', sheet: 'hill', wishHours: 3, sites: ['north'] }] };
  const planned = await ask('POST', '/api/v1/plan', request);
  expect(planned.status, await planned.clone().text()).toBe(200);
  await refusals('POST', '/api/v1/plan');
  for (let index = 0; index < 40; index += 1) await open.ask('POST', '/api/v1/plan', '');
  expect((await ask('POST', '/api/v1/plan', {}, { of: open })).status).toBe(429);
  expect((await ask('GET', '/healthz')).status).toBe(200);
  const broken = await house();
  broken.d1.ask(`DELETE FROM meta WHERE key = 'schema'`);
  expect((await ask('GET', '/healthz', undefined, { of: broken })).status).toBe(503);
});

test('subscribing, changing and leaving', async () => {
  const manage = await subscribed();
  const api = `/api/v1${manage}`;
  const feed = new URL(((await (await ask('POST', api, { action: 'renew-links' })).json()) as { links: { feed: string } }).links.feed).pathname;
  expect((await ask('GET', api)).status).toBe(404);
  const known = (await ask('GET', feed)).headers.get('etag') ?? '';
  expect((await ask('GET', feed, undefined, { headers: { 'if-none-match': known } })).status).toBe(304);
  expect((await ask('GET', `${feed.slice(0, -6)}x.atom`)).status).toBe(404);
  expect((await ask('GET', feed.replace('.atom', '.ics'))).status).toBe(200);
  for (let index = 0; index < 30; index += 1) await first.ask('GET', feed);
  expect((await ask('GET', feed)).status).toBe(429);
  await refusals('POST', '/api/v1/subscriptions');
  const open = await FastPostHouse.open({ nowIso: NOW, instead: ({ settings }) => ({ settings: { ...settings, local: false } }) });
  houses.push(open);
  for (let index = 0; index < 100; index += 1) await open.ask('POST', '/api/v1/subscriptions', '');
  expect((await ask('POST', '/api/v1/subscriptions', wish([mail]), { of: open })).status).toBe(429);
  const keyless = await FastPostHouse.open({ nowIso: NOW, instead: ({ settings }) => ({ settings: { ...settings, linkKey: null } }) });
  houses.push(keyless);
  expect((await ask('POST', '/api/v1/subscriptions', wish([mail]), { of: keyless })).status).toBe(503);
  expect((await ask('GET', `${OPERATOR}/bounce-secret`, undefined, { of: keyless, headers: bearer })).status).toBe(503);

  first = await house();
  const own = `/api/v1${await subscribed()}`;
  expect((await ask('GET', own)).status).toBe(200);
  const { channels: _, ...wishes } = wish([]);
  expect((await ask('PUT', own, wishes)).status).toBe(200);
  for (const method of ['PUT', 'POST']) {
    await refusals(method, own);
    expect((await ask(method, `${own}x`, {})).status).toBe(404);
  }
  for (let index = 0; index < 10; index += 1) expect((await ask('POST', own, { action: 'test' })).status).toBe(200);
  expect((await ask('POST', own, { action: 'test' })).status).toBe(429);
  expect((await ask('DELETE', own)).status).toBe(200);
  expect((await ask('DELETE', own)).status).toBe(404);

  const hook = await ask('POST', '/api/v1/subscriptions', wish([{ kind: 'webhook', url: 'http://127.0.0.1:9/hook' }]));
  const leave = new URL(((await hook.json()) as { links: { unsubscribe: string } }).links.unsubscribe).pathname;
  for (const [fields, status] of [[{}, 400], [{ 'List-Unsubscribe': 'One-Click' }, 200], [{ 'List-Unsubscribe': 'One-Click' }, 404]] as const) {
    expect((await recorder.took('POST', leave, await first.form(leave, fields))).status).toBe(status);
  }
});

test('browsers', async () => {
  const browser = await newBrowser();
  await ask('POST', '/api/v1/subscriptions', wish([{ kind: 'push', ...browser.subscription }]));
  await first.answerAll();
  const { nonce } = (await browser.read(first.pushes.at(-1)?.body ?? new Uint8Array())) as { nonce: string };
  expect((await ask('POST', '/api/v1/subscriptions/confirm-push', { nonce })).status).toBe(200);
  expect((await ask('POST', '/api/v1/subscriptions/confirm-push', { nonce })).status).toBe(404);
  expect((await ask('POST', '/api/v1/push/renew', { old: browser.subscription, fresh: (await newBrowser()).subscription })).status).toBe(200);
  expect((await ask('POST', '/api/v1/push/renew', { old: browser.subscription, fresh: browser.subscription })).status).toBe(410);
  expect((await ask('POST', '/api/v1/push/shown', { id: `msg_${'0'.repeat(32)}` })).status).toBe(204);
  for (const path of ['/api/v1/subscriptions/confirm-push', '/api/v1/push/renew', '/api/v1/push/shown']) await refusals('POST', path);
  expect((await ask('GET', '/api/v1/push/key')).status).toBe(200);
  const silent = await FastPostHouse.open({ nowIso: NOW, instead: ({ settings }) => ({ settings: { ...settings, vapid: null } }) });
  houses.push(silent);
  expect((await ask('GET', '/api/v1/push/key', undefined, { of: silent })).status).toBe(404);
});

test('what the mail service reports', async () => {
  const report = async (body: string): Promise<number> => {
    const at = String(Math.floor(first.nowMs / 1000));
    const key = await derivedKey(LINK_KEY, { purpose: 'bounce', id: 'mail', version: 1 });
    const signature = `v1,${base64(await hmacSha256(key, new TextEncoder().encode(`evt.${at}.${body}`)))}`;
    return (await ask('POST', '/api/v1/bounces', body, { headers: { 'webhook-id': 'evt', 'webhook-timestamp': at, 'webhook-signature': signature } })).status;
  };
  expect(await report(JSON.stringify({ messageId: `<msg_${'0'.repeat(32)}@x.example>`, type: 'hard' }))).toBe(200);
  expect(await report('{}')).toBe(400);
  expect((await ask('POST', '/api/v1/bounces', '{}')).status).toBe(401);
  expect((await ask('POST', '/api/v1/bounces', 'x'.repeat(9000))).status).toBe(413);
});

test('what a webhook is sent is what is described, from its challenge to its brief', async () => {
  const sent: string[] = [];
  const hooked = await FastPostHouse.open({
    nowIso: NOW,
    fetch: (_, init) => {
      sent.push(init.body as string);
      const { data } = JSON.parse(init.body as string) as { data: { challenge?: string } };
      return Promise.resolve(Response.json({ challenge: data.challenge }));
    },
  });
  houses.push(hooked);
  const made = (await (await ask('POST', '/api/v1/subscriptions', wish([{ kind: 'webhook', url: 'http://127.0.0.1:9/x' }]), { of: hooked })).json()) as { links: { manage: string } };
  await ask('POST', `/api/v1${new URL(made.links.manage).pathname}`, { action: 'test' }, { of: hooked });
  await hooked.answerAll();
  hooked.nowMs = Date.parse('2027-05-14T04:00:00Z');
  await hooked.minute();
  const bodies = sent.map((text) => JSON.parse(text) as { type: string; data: object });
  expect(bodies.map(({ type }) => type)).toEqual(['endpoint.challenge', 'service.test', 'brief.issued']);
  expect(bodies.filter((body) => !recorder.sends(body))).toEqual([]);
  expect(bodies.map(({ type }) => recorder.sends({ type, timestamp: NOW, data: {} }))).toEqual([false, false, false]);
});

test('the operator', async () => {
  const as = { headers: bearer };
  const read = async (path: string): Promise<Record<string, string>> => ({ ...bearer, 'if-match': (await ask('GET', path, undefined, as)).headers.get('etag') ?? '' });
  const sites = { type: 'FeatureCollection', features: [launchFeature('north')] };
  const sheet = { id: 'hill', name: 'Hill', kind: 'launch', limits: { maxMeanMps: 7 } };
  for (const [path, body] of [[`${OPERATOR}/sites`, sites], [`${OPERATOR}/sheets/hill`, sheet]] as const) {
    const guarded = await read(path);
    await refusals('PUT', path, guarded);
    expect((await ask('PUT', path, body, as)).status).toBe(428);
    expect((await ask('PUT', path, body, { headers: guarded })).status).toBe(200);
    expect((await ask('PUT', path, body, { headers: { ...bearer, 'if-match': '"other"' } })).status).toBe(412);
  }
  const SECOND = 'another-token-for-tests-only-0123456789abcdef';
  const two = await house({ OPERATOR_SECOND_TOKEN_SHA256: await sha256Hex(SECOND) });
  const approval = `${OPERATOR}/sheets/hill/approval`;
  const held = { of: two, headers: { ...bearer, 'if-match': '"1"' } };
  const second = { of: two, headers: { authorization: `Bearer ${SECOND}`, 'if-match': '"1"' } };
  expect((await ask('PUT', `${OPERATOR}/sheets/hill`, sheet, held)).status).toBe(409);
  expect((await ask('POST', approval, sheet, second)).status).toBe(200);
  expect((await ask('POST', approval, sheet, { of: two, headers: { authorization: `Bearer ${SECOND}` } })).status).toBe(428);
  expect((await ask('POST', approval, sheet, { of: two, headers: { authorization: `Bearer ${SECOND}`, 'if-match': '"7"' } })).status).toBe(412);
  await refusals('POST', approval, second.headers, two);
  expect((await ask('GET', `${OPERATOR}/sheets/none`, undefined, as)).status).toBe(404);
  for (const path of ['sheets', 'published', 'bounce-secret']) expect((await ask('GET', `${OPERATOR}/${path}`, undefined, as)).status).toBe(200);
  expect((await ask('PUT', `${OPERATOR}/published`, [{ site: 'north', wing: 'EN A', sheet: 'hill' }], as)).status).toBe(200);
  expect((await ask('POST', `${OPERATOR}/forget`, { address: 'nobody@mail.example.org' }, as)).status).toBe(200);
  for (const [method, path] of [['PUT', 'published'], ['POST', 'forget']] as const) await refusals(method, `${OPERATOR}/${path}`, bearer);
  const all = recorder.promised().filter((named) => named.includes(OPERATOR) && named.endsWith(' 401'));
  for (const [index, named] of all.entries()) {
    const [method = '', path = ''] = named.split(' ');
    const stranger = { headers: { authorization: 'Bearer wrong', 'cf-connecting-ip': `198.51.100.${index}` } };
    for (const status of [401, 401, 401, 401, 401, 429]) expect((await ask(method, path.replace('{id}', 'hill'), method === 'GET' ? undefined : {}, stranger)).status).toBe(status);
  }
});

test('every answer that is promised was seen, and every answer that was seen is promised', () => {
  expect(recorder.wrong).toEqual([]);
  expect(recorder.promised().filter((named) => !recorder.seen.has(named))).toEqual([]);
});
