// Faults of push services and receivers on the wire, against the channels themselves. F-numbers are those of the fault
// catalogue; what the outbox makes of each outcome over time is tested in test/worker.
import { createHash, generateKeyPairSync, verify, createPublicKey } from 'node:crypto';
import { createServer as createTlsServer } from 'node:https';
import type { AddressInfo } from 'node:net';
import { Webhook } from 'standardwebhooks';
import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest';
import type { Address, Attempt, Message } from '../../../worker/channels/channel.ts';
import { pushChannel, type Quarrels } from '../../../worker/channels/push/push.ts';
import { vapid } from '../../../worker/channels/push/vapid.ts';
import { webhookChannel, webhookSecretText } from '../../../worker/channels/webhook.ts';
import { derivedKey } from '../../../worker/secrets.ts';
import { certificate } from '../../support/certificate.ts';
import { startPushSink, type PushAnswer, type PushSink } from '../../support/sinks/push-sink.ts';
import { startWebhookSink, type WebhookSink } from '../../support/sinks/webhook-sink.ts';

const LINK_KEY = 'a-link-key-for-tests-only-0123456789';
const publicUrl = 'https://brief.example.org';

const message: Message = {
  id: 'msg_0123456789abcdef', kind: 'brief', title: 'Beyond a limit at 1 site', text: 'Site north: beyond a limit all day. '.repeat(60),
  issuedAtMs: Date.parse('2027-05-14T04:00:00Z'), dataRunAtMs: null, validUntilMs: Date.now() + 20 * 3_600_000, urgent: false, demo: false,
  days: [{ siteId: 'north', localDate: '2027-05-14', verdict: 'beyond', windows: [] }],
};

function attempt(timeoutMs = 2000): Attempt {
  const nowMs = Date.now();
  return { number: 1, nowMs, timeoutMs, untilMs: nowMs + 3_600_000 };
}

function addressOf(target: unknown): Address {
  return { id: 'c1', target: JSON.stringify(target), state: 'active', secretVersion: 1, oldestSecretVersion: 1 } as Address;
}

const realFetch = (url: string, init: RequestInit): Promise<Response> => fetch(url, init);

describe('Web Push', () => {
  let sink: PushSink;
  let quarrels: { readonly begun: Map<string, number> } & Quarrels;
  const keys = generateKeyPairSync('ec', { namedCurve: 'P-256' });
  const jwk = keys.privateKey.export({ format: 'jwk' });
  const publicKey = Buffer.concat([Buffer.from([4]), Buffer.from(jwk.x!, 'base64url'), Buffer.from(jwk.y!, 'base64url')]).toString('base64url');
  const channel = () => pushChannel({ fetch: realFetch, authorize: vapid({ publicKey, privateKey: jwk.d! }, 'mailto:ops@example.org'), local: true, publicUrl, quarrels });

  beforeAll(async () => { sink = await startPushSink(); });
  afterAll(() => sink.close());
  beforeEach(() => {
    sink.answer(() => ({ status: 201 }));
    const begun = new Map<string, number>();
    quarrels = { begun, untilMs: async (origin) => begun.get(origin) ?? null, begin: async (origin, untilMs) => { begun.set(origin, untilMs); } };
  });

  const send = (as?: (n: number) => PushAnswer, timeoutMs?: number) => {
    let n = 0;
    if (as !== undefined) sink.answer(() => as(n++));
    return channel().send(message, addressOf(sink.newBrowser().target), attempt(timeoutMs));
  };

  test('F57: 201 is sent; a browser reads it with a library that is not ours, and the service knows who we are', async () => {
    expect(await send()).toMatchObject({ state: 'sent' });
    const pushed = sink.pushed.at(-1)!;
    expect(sink.decrypt(pushed)).toMatchObject({ id: message.id, title: message.title, url: `${publicUrl}/sites/north`, inventedWeather: false });
    expect(message.text.startsWith((sink.decrypt(pushed) as { body: string }).body)).toBe(true);
    expect(pushed.headers).toMatchObject({ 'content-encoding': 'aes128gcm', urgency: 'normal', 'content-type': 'application/octet-stream' });
    expect(Number(pushed.headers['ttl'])).toBeGreaterThan(3590);
    expect(Number(pushed.headers['ttl'])).toBeLessThanOrEqual(3600);
    expect(pushed.headers['topic']).toBe(createHash('sha256').update(message.id).digest('base64url').slice(0, 32));
    const [, token] = /^vapid t=([\w.-]+), k=/.exec(pushed.headers.authorization!)!;
    const [head, claims, signature] = token!.split('.');
    const key = createPublicKey({ key: jwk, format: 'jwk' });
    expect(verify('sha256', Buffer.from(`${head}.${claims}`), { key, dsaEncoding: 'ieee-p1363' }, Buffer.from(signature!, 'base64url'))).toBe(true);
    expect(JSON.parse(Buffer.from(claims!, 'base64url').toString())).toMatchObject({ aud: sink.origin, sub: 'mailto:ops@example.org' });
  });

  test('what is worse than was said before is urgent', async () => {
    await channel().send({ ...message, urgent: true }, addressOf(sink.newBrowser().target), attempt());
    expect(sink.pushed.at(-1)!.headers['urgency']).toBe('high');
  });

  test.each([404, 410])('F58: %i ends the subscription', async (status) => {
    expect(await send(() => ({ status }))).toMatchObject({ state: 'gone' });
  });

  test.each([
    ['60', 60_000], ['86400', 86_400_000], [new Date(Date.now() + 120_000).toUTCString(), 119_000], ['soon', 0], ['-5', 0], ['', 0],
  ])('F59: 429 with Retry-After %j waits as long as it says', async (header, atLeastMs) => {
    const outcome = await send(() => ({ status: 429, headers: { 'retry-after': header } }));
    expect(outcome).toMatchObject({ state: 'retry', busy: true });
    if (outcome.state !== 'retry') return;
    expect(outcome.afterMs! >= atLeastMs - 1500 && outcome.afterMs! <= atLeastMs + 1500).toBe(true);
  });

  test.each([500, 502, 503])('F60: %i is tried again, the subscription stays', async (status) => {
    expect(await send(() => ({ status }))).toMatchObject({ state: 'retry' });
  });

  test('F61: 413 gets the smallest form at once, and is refused when that is too large as well', async () => {
    const before = sink.pushed.length;
    expect(await send((n) => ({ status: n === 0 ? 413 : 201 }))).toMatchObject({ state: 'sent' });
    const [full, small] = sink.pushed.slice(before);
    expect(small!.body.length).toBeLessThan(full!.body.length);
    expect(sink.decrypt(small!)).not.toHaveProperty('body');
    expect(await send(() => ({ status: 413 }))).toMatchObject({ state: 'refused' });
  });

  test.each([400, 401, 403])('T34 F62: %i is a quarrel with the whole service: nobody is ended, and it is left alone for a while', async (status) => {
    const before = sink.pushed.length;
    expect(await send(() => ({ status }))).toMatchObject({ state: 'retry', afterMs: 600_000 });
    expect(quarrels.begun.has(sink.origin)).toBe(true);
    expect(await send(() => ({ status: 201 }))).toMatchObject({ state: 'retry', reason: 'the push service refuses this sender' });
    expect(sink.pushed.length - before).toBe(1);
  });

  test('F63: a huge answer is not read', async () => {
    expect(await send(() => ({ status: 201, headers: { location: '/message/1' }, body: 'x'.repeat(20_000_000) }))).toMatchObject({ state: 'sent' });
  });

  test('F64: no answer, or one that comes too late, is tried again under the same topic', async () => {
    expect(await send(() => 'silence', 300)).toMatchObject({ state: 'retry', reason: 'no answer within 0.3 s' });
    expect(await send(() => ({ status: 201, afterMs: 600 }), 300)).toMatchObject({ state: 'retry' });
    const [one, two] = sink.pushed.slice(-2);
    expect(one!.headers['topic']).toBe(two!.headers['topic']);
  });

  test.each([[200, 'sent'], [202, 'sent'], [301, 'retry'], [302, 'retry'], [307, 'retry'], [308, 'retry']])('F65: %i is %s, and no redirect is followed', async (status, state) => {
    const before = sink.pushed.length;
    expect(await send(() => ({ status, headers: { location: `${sink.origin}/elsewhere` } }))).toMatchObject({ state });
    expect(sink.pushed.length - before).toBe(1);
  });

  test('a connection that breaks or is refused is tried again', async () => {
    expect(await send(() => 'reset')).toMatchObject({ state: 'retry', reason: 'the push service could not be reached' });
    const { target } = sink.newBrowser();
    expect(await channel().send(message, addressOf({ ...target, endpoint: 'http://127.0.0.1:1/x' }), attempt())).toMatchObject({ state: 'retry' });
  });

  test('keys that are none end the subscription, and break nothing', async () => {
    const { target } = sink.newBrowser();
    for (const p256dh of ['A'.repeat(87), target.p256dh.slice(0, -2), `${target.p256dh.slice(0, -1)}A`.replace(/^B/, 'C')]) {
      expect(await channel().send(message, addressOf({ ...target, p256dh }), attempt())).toMatchObject({ state: 'gone' });
    }
  });

  test('invented weather leaves this machine in no case', async () => {
    const { target } = sink.newBrowser();
    const away = addressOf({ ...target, endpoint: 'https://fcm.googleapis.com/fcm/send/x' });
    expect(await channel().send({ ...message, demo: true }, away, attempt())).toMatchObject({ state: 'refused' });
  });
});

describe('a webhook', () => {
  let sink: WebhookSink;
  const channel = webhookChannel({ fetch: realFetch, linkKey: LINK_KEY, local: true, publicUrl });
  beforeAll(async () => { sink = await startWebhookSink(); });
  afterAll(() => sink.close());
  const send = (timeoutMs?: number) => channel.send(message, addressOf({ url: `${sink.origin}/hook` }), attempt(timeoutMs));

  test('F69: 500 until the fourth attempt: the same id and body, a new time and signature that their library accepts', async () => {
    let left = 3;
    sink.behave(() => ((left -= 1) >= 0 ? 500 : 200));
    const outcomes = [];
    for (let n = 0; n < 4; n += 1) outcomes.push((await send()).state);
    expect(outcomes).toEqual(['retry', 'retry', 'retry', 'sent']);
    const received = sink.received.slice(-4);
    expect(new Set(received.map(({ id }) => id))).toEqual(new Set([message.id]));
    expect(new Set(received.map(({ body }) => body)).size).toBe(1);
    const receiver = new Webhook(webhookSecretText(await derivedKey(LINK_KEY, { purpose: 'webhook', id: 'c1', version: 1 })));
    for (const { headers, body } of received) expect(receiver.verify(body, headers as Record<string, string>)).toMatchObject({ data: { id: message.id } });
  });

  test('F70: 410 ends the channel', async () => {
    sink.behave(() => 410);
    expect(await send()).toMatchObject({ state: 'gone' });
  });

  test('F71: an answer just in time counts, one just too late does not', async () => {
    sink.behave(() => ({ status: 200, afterMs: 300 }));
    expect(await send(900)).toEqual({ state: 'sent' });
    expect(await send(150)).toMatchObject({ state: 'retry', reason: 'no answer within 0.15 s' });
  });

  test('F72, F76: a connection that ends after the request was read is tried again under the same id', async () => {
    sink.behave(() => 'reset');
    expect(await send()).toMatchObject({ state: 'retry' });
    sink.behave(() => 200);
    expect(await send()).toEqual({ state: 'sent' });
    const [one, two] = sink.received.slice(-2);
    expect(one!.id).toBe(two!.id);
  });

  test.each(['http://localhost.:9/x', 'https://127.0.0.1.nip.example/x', 'https://localhost/x', 'https://router/x', 'https://169.254.169.254/latest'])('F73: %s is refused before anything is sent', async (url) => {
    const away = webhookChannel({ fetch: () => { throw new Error('it was called'); }, linkKey: LINK_KEY, local: false, publicUrl });
    expect(await away.send(message, addressOf({ url }), attempt())).toMatchObject({ state: 'gone' });
  });

  test('F74: a certificate that nobody vouches for is a failure, and no reason to do without one', async () => {
    const { key, cert } = certificate({ host: 'nobody', until: 2049 });
    const server = createTlsServer({ key, cert }, (_, response) => { response.end(); });
    await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
    const url = `https://127.0.0.1:${(server.address() as AddressInfo).port}/hook`;
    expect(await channel.send(message, addressOf({ url }), attempt())).toMatchObject({ state: 'retry', reason: 'the address could not be reached' });
    server.close();
  });

  test.each([301, 302, 307, 308])('%i is a failure: nothing is followed', async (status) => {
    const before = sink.received.length;
    sink.behave(() => ({ status, headers: { location: `${sink.origin}/elsewhere` } }));
    expect(await send()).toMatchObject({ state: 'retry', reason: 'the receiver redirects' });
    expect(sink.received.length - before).toBe(1);
  });

  test('429 waits as long as it says', async () => {
    sink.behave(() => ({ status: 429, headers: { 'retry-after': '77' } }));
    expect(await send()).toMatchObject({ state: 'retry', afterMs: 77_000 });
  });
});
