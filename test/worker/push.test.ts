import { describe, expect, test } from 'vitest';
import type { Message } from '../../worker/channels/channel.ts';
import { areKeys, encrypt, fresh, MOST_PLAIN_BYTES } from '../../worker/channels/push/encrypt.ts';
import { endpointProblem, readTarget } from '../../worker/channels/push/endpoint.ts';
import { MOST_BYTES, pushPayload } from '../../worker/channels/push/payload.ts';
import { pushChannel } from '../../worker/channels/push/push.ts';
import { vapid } from '../../worker/channels/push/vapid.ts';
import { base64Url, base64UrlBytes } from '../../worker/secrets.ts';

// RFC 8291, appendix A: the intermediate values and the result of its example.
const example = {
  plaintext: 'When I grow up, I want to be a watermelon',
  senderPublic: 'BP4z9KsN6nGRTbVYI_c7VJSPQTBtkgcy27mlmlMoZIIgDll6e3vCYLocInmYWAmS6TlzAC8wEqKK6PBru3jl7A8',
  senderPrivate: 'yfWPiYE-n46HLnH0KqZOF1fJJU3MYrct3AELtAQ-oRw',
  browserPublic: 'BCVxsr7N_eNgVRqvHtD0zTZsEc6-VV-JvLexhqUzORcxaOzi6-AYWXvTBHm4bjyPjs7Vd8pZGH6SRpkNtoIAiw4',
  salt: 'DGv6ra1nlYgDCS1FRnbzlw',
  auth: 'BTBZMqHH6r4Tts7J_aSIgg',
  result:
    'DGv6ra1nlYgDCS1FRnbzlwAAEABBBP4z9KsN6nGRTbVYI_c7VJSPQTBtkgcy27mlmlMoZIIgDll6e3vCYLocInmYWAmS6TlzAC8wEqKK6PBru3jl7A_yl95bQpu6cVPTpK4Mqgkf1CXztLVBSt2Ks3oZwbuwXPXLWyouBWLVWGNWQexSgSxsj_Qulcy4a-fN',
};

function jwk(publicKey: string, d?: string): JsonWebKey {
  const point = base64UrlBytes(publicKey);
  return { kty: 'EC', crv: 'P-256', x: base64Url(point.subarray(1, 33)), y: base64Url(point.subarray(33)), ...(d === undefined ? {} : { d }) };
}

async function exampleSender(): Promise<CryptoKeyPair> {
  const curve = { name: 'ECDH', namedCurve: 'P-256' };
  return {
    privateKey: await crypto.subtle.importKey('jwk', jwk(example.senderPublic, example.senderPrivate), curve, true, ['deriveBits']),
    publicKey: await crypto.subtle.importKey('jwk', jwk(example.senderPublic), curve, true, []),
  };
}

const browser = { p256dh: base64UrlBytes(example.browserPublic), auth: base64UrlBytes(example.auth) };

describe('encryption', () => {
  test('is that of RFC 8291, appendix A, byte for byte', async () => {
    const body = await encrypt(new TextEncoder().encode(example.plaintext), browser, { salt: base64UrlBytes(example.salt), keys: await exampleSender() });
    expect(base64Url(body)).toBe(example.result);
  });

  test('is fresh each time, and as large as RFC 8291, section 4, allows', async () => {
    const text = new Uint8Array(MOST_PLAIN_BYTES);
    const [one, two] = [await encrypt(text, browser, await fresh()), await encrypt(text, browser, await fresh())];
    expect(one.length).toBe(4096);
    expect(base64Url(one)).not.toBe(base64Url(two));
    await expect(encrypt(new Uint8Array(MOST_PLAIN_BYTES + 1), browser, await fresh())).rejects.toThrow('at most 3993 bytes');
  });

  test.each([
    ['64 bytes', browser.p256dh.subarray(0, 64), browser.auth], ['a point off the curve', Uint8Array.from(browser.p256dh, (byte, index) => (index === 64 ? byte ^ 1 : byte)), browser.auth],
    ['all zero', new Uint8Array(65), browser.auth], ['infinity', Uint8Array.from({ length: 65 }, (_, index) => (index === 0 ? 4 : 0)), browser.auth], ['a compressed point', Uint8Array.from([2, ...browser.p256dh.subarray(1, 33)]), browser.auth],
    ['15 bytes of secret', browser.p256dh, browser.auth.subarray(0, 15)], ['no secret', browser.p256dh, new Uint8Array()],
  ])('keys that are none are told: %s', async (_, p256dh, auth) => {
    expect(await areKeys({ p256dh, auth })).toBe(false);
    expect(await areKeys(browser)).toBe(true);
  });
});

describe('VAPID', () => {
  test('signs for one origin, with a contact, for twelve hours, once an hour', async () => {
    const pair = (await crypto.subtle.generateKey({ name: 'ECDSA', namedCurve: 'P-256' }, true, ['sign', 'verify'])) as CryptoKeyPair;
    const publicKey = base64Url(new Uint8Array((await crypto.subtle.exportKey('raw', pair.publicKey)) as ArrayBuffer));
    const { d } = (await crypto.subtle.exportKey('jwk', pair.privateKey)) as JsonWebKey;
    const authorize = vapid({ publicKey, privateKey: d! }, 'mailto:ops@example.org');
    const nowMs = Date.parse('2027-05-14T04:10:00Z');
    const header = await authorize('https://push.example.net', nowMs);
    const [, token, key] = /^vapid t=([\w.-]+), k=([\w-]+)$/.exec(header)!;
    expect(key).toBe(publicKey);
    const [head, claims, signature] = token!.split('.');
    const text = (part: string): unknown => JSON.parse(new TextDecoder().decode(base64UrlBytes(part)));
    expect(text(head!)).toEqual({ typ: 'JWT', alg: 'ES256' });
    expect(text(claims!)).toEqual({ aud: 'https://push.example.net', exp: Date.parse('2027-05-14T16:00:00Z') / 1000, sub: 'mailto:ops@example.org' });
    const isSigned = await crypto.subtle.verify({ name: 'ECDSA', hash: 'SHA-256' }, pair.publicKey, base64UrlBytes(signature!), new TextEncoder().encode(`${head}.${claims}`));
    expect(isSigned).toBe(true);
    expect(await authorize('https://push.example.net', nowMs + 49 * 60_000)).toBe(header);
    expect(await authorize('https://push.example.net', nowMs + 51 * 60_000)).not.toBe(header);
    expect(await authorize('https://other.example.net', nowMs)).not.toBe(header);
  });
});

describe('T21 where a push may go', () => {
  test.each([
    'https://fcm.googleapis.com/fcm/send/abc', 'https://updates.push.services.mozilla.com/wpush/v2/abc', 'https://wns2-par02p.notify.windows.com/w/?token=abc',
    'https://web.push.apple.com/abc', 'https://fcm.googleapis.com:443/x', 'HTTPS://FCM.GOOGLEAPIS.COM/x',
  ])('%s', (endpoint) => { expect(endpointProblem(endpoint, { local: false })).toBeNull(); });

  test.each([
    'http://fcm.googleapis.com/x', 'https://fcm.googleapis.com:8443/x', 'https://fcm.googleapis.com.evil.example/x', 'https://evil.example/fcm.googleapis.com',
    'https://evil.example/?fcm.googleapis.com', 'https://fcm.googleapis.com@evil.example/', 'https://evil.example#fcm.googleapis.com', 'https://xfcm.googleapis.com/x',
    'https://127.0.0.1/x', 'https://fcm.googleapis.com\\@evil.example/', 'https://evil.example\t/fcm.googleapis.com', '', 'fcm.googleapis.com', 'https://user@fcm.googleapis.com/x',
  ])('not %j', (endpoint) => { expect(endpointProblem(endpoint, { local: false })).not.toBeNull(); });

  test('this machine with LOCAL=1 only', () => {
    expect(endpointProblem('http://127.0.0.1:9/x', { local: true })).toBeNull();
    expect(endpointProblem('http://127.0.0.1:9/x', { local: false })).not.toBeNull();
  });

  test('a stored target that is broken is a problem, not a crash', () => {
    for (const text of ['', '{', 'null', '[]', '{"endpoint":1}', JSON.stringify({ endpoint: 'https://fcm.googleapis.com/x', p256dh: 'short', auth: example.auth })]) {
      expect(readTarget(text, { local: false })).toHaveProperty('problem');
    }
    expect(readTarget(JSON.stringify({ endpoint: 'https://fcm.googleapis.com/x', p256dh: `${example.browserPublic}=`, auth: `${example.auth}==` }), { local: false })).toHaveProperty('endpoint');
  });
});

describe('the payload', () => {
  const message: Message = {
    id: 'msg_1', kind: 'brief', title: 'Beyond a limit at 2 sites', text: 'Käfer Edge 🪁: beyond a limit. '.repeat(300), issuedAtMs: 0, dataRunAtMs: null, validUntilMs: 3_600_000,
    urgent: false, demo: false, days: [],
  };

  test('is JSON of at most two thousand bytes whatever the text, cut at its end and never through a character', () => {
    for (const length of [0, 1, 10, 900, 1700, 1800, 1900, 2500, 9000]) {
      for (const filling of ['a', 'ä', '€', '🪁', '"', '\n', '\u0001', '\ud83e', '€a\u0001🪁']) {
        const text = filling.repeat(Math.floor(length / filling.length));
        const bytes = pushPayload({ ...message, text }, { origin: 'https://brief.example.org' });
        expect(bytes.length).toBeLessThanOrEqual(MOST_BYTES);
        const { body } = JSON.parse(new TextDecoder('utf-8', { fatal: true, ignoreBOM: false }).decode(bytes)) as { body: string };
        expect(text.startsWith(body)).toBe(true);
        if (length < 250) expect(body).toBe(text);
      }
    }
  });

  test('tells the service worker what it needs to replace what came before and to end', () => {
    const longest = { ...message, thread: `${'s'.repeat(64)}|2027-05-14`, title: '"'.repeat(5000), days: [{ siteId: 'ü'.repeat(60), localDate: '2027-05-14', verdict: 'beyond' as const, windows: [] }] };
    const bytes = pushPayload(longest, { origin: 'https://brief.example.org' });
    expect(bytes.length).toBeLessThanOrEqual(MOST_BYTES);
    expect(JSON.parse(new TextDecoder().decode(bytes))).toMatchObject({ thread: longest.thread, issuedAt: '1970-01-01T00:00:00.000Z', validUntil: '1970-01-01T01:00:00.000Z' });
    const small = JSON.parse(new TextDecoder().decode(pushPayload(longest, { origin: 'https://brief.example.org', minimal: true }))) as object;
    expect(small).toMatchObject({ thread: longest.thread, issuedAt: '1970-01-01T00:00:00.000Z', validUntil: '1970-01-01T01:00:00.000Z' });
  });

  test('has a small form', () => {
    expect(pushPayload({ ...message, title: 'x'.repeat(5000) }, { origin: 'https://brief.example.org', minimal: true }).length).toBeLessThan(500);
  });
});

test('T24: nothing goes to an endpoint whose browser has not shown that it asked', async () => {
  let asked = 0;
  const channel = pushChannel({
    fetch: () => { asked += 1; return Promise.resolve(new Response(null, { status: 201 })); },
    local: true, publicUrl: 'http://127.0.0.1:8787', authorize: () => Promise.resolve('vapid t=x, k=y'),
    quarrels: { untilMs: () => Promise.resolve(null), begin: () => Promise.resolve() },
  } as unknown as Parameters<typeof pushChannel>[0]);
  const address = { id: 'someone', target: '{}', state: 'unverified' as const, secretVersion: 1, oldestSecretVersion: 1 };
  const sent = (number: number) => channel.send({} as Message, address, { number, nowMs: 0, timeoutMs: 1000, untilMs: 1000 });
  const reason = 'this browser has not confirmed that it wants to be told';
  // It may be about to: one that has just moved answers within seconds.
  for (const number of [1, 2, 3]) expect(await sent(number)).toEqual({ state: 'retry', reason, afterMs: null });
  for (const number of [4, 5]) expect(await sent(number)).toEqual({ state: 'refused', reason });
  expect(asked).toBe(0);
});
