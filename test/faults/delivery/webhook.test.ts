// What becomes of a morning when receivers of webhooks fail (F69 to F74): a house whose messages go over loopback, each
// fault with the six oracles.
import { createServer } from 'node:https';
import type { AddressInfo } from 'node:net';
import { getCACertificates, setDefaultCACertificates } from 'node:tls';
import { convertV4MiniflareOptions, Miniflare } from 'miniflare';
import { Webhook } from 'standardwebhooks';
import { afterAll, afterEach, beforeAll, describe, expect, test, vi } from 'vitest';
import { webhookSecretText } from '../../../worker/channels/webhook.ts';
import { derivedKey } from '../../../worker/secrets.ts';
import { certificate, type Certificate } from '../../support/certificate.ts';
import { seeded } from '../../support/seeded.ts';
import { startWorld, WireHouse, type Answer, type Knock, type World } from '../../support/wire-house.ts';

const LINK_KEY = 'a-link-key-for-tests-only-0123456789';
const MINUTE_MS = 60_000;
let world: World;
// What the runtime says of connections that it refuses is of no interest to who reads the tests.
beforeAll(async () => { world = await startWorld(); vi.spyOn(console, 'error').mockImplementation(() => undefined); });
afterEach(() => { vi.useRealTimers(); });
afterAll(() => { vi.restoreAllMocks(); return world.close(); });

/** Ana's receiver answers as said, at each attempt in turn and then as at the last; everybody else's takes what comes. */
function ana(...answers: readonly Answer[]) {
  return ({ name, way, attempt }: Knock): Answer => (name === 'ana' && way === 'webhook' ? (answers[attempt - 1] ?? answers.at(-1) ?? { status: 204 }) : { status: 204 });
}

describe('a receiver', () => {
  test('F69: says 500 until the fourth attempt: the same id and body each time, under a new time that its library accepts', async () => {
    const house = new WireHouse(world, ana({ status: 500 }, { status: 500 }, { status: 500 }, { status: 204 }));
    await house.people({ ana: ['webhook'], ben: ['webhook'] });
    await house.minutes(12);
    const knocks = house.of('ana');
    expect([knocks.length, new Set(knocks.map(({ headers }) => headers['webhook-id'])).size, new Set(knocks.map(({ body }) => body)).size]).toEqual([4, 1, 1]);
    expect(new Set(knocks.map(({ headers }) => headers['webhook-timestamp'])).size).toBe(4);
    const receiver = new Webhook(webhookSecretText(await derivedKey(LINK_KEY, { purpose: 'webhook', id: 'ana-0', version: 1 })));
    for (const { headers, body, atMs } of knocks) {
      vi.useFakeTimers({ now: atMs, toFake: ['Date'] });
      expect(receiver.verify(body, headers)).toMatchObject({ type: 'brief.issued' });
    }
    vi.useRealTimers();
    expect(await house.oracles({ told: { ana: 10, ben: 0 }, books: { sent: 2 } })).toEqual([]);
  });

  test('F70: says 410: it is told no more, its owner is told by the next channel, and sees why', async () => {
    const house = new WireHouse(world, ana({ status: 410 }));
    await house.people({ ana: ['webhook', 'push'], ben: ['webhook'] });
    await house.minutes(3);
    expect(house.d1.ask(`SELECT id, reason FROM channel WHERE state = 'dead'`)).toEqual([{ id: 'ana-0', reason: 'the receiver answered 410, gone' }]);
    expect(await house.oracles({ told: { ana: 1, ben: 0 }, books: { dead: 1, sent: 2 }, seen: /1 messages could not be delivered/ })).toEqual([]);
    house.nowMs += 24 * 60 * MINUTE_MS;
    await house.minutes(2);
    expect([house.of('ana', 'webhook').length, house.of('ana', 'push').length]).toEqual([1, 2]);
  });

  test('F71: says 200 after fourteen seconds: that counts', async () => {
    const house = new WireHouse(world, ana({ status: 200, lateMs: 14_000 }));
    await house.people({ ana: ['webhook'], ben: ['push'] });
    await house.minutes(4);
    expect(house.of('ana')).toHaveLength(1);
    expect(await house.oracles({ told: { ana: 0, ben: 1 }, books: { sent: 2 } })).toEqual([]);
  });

  test('F71: says 200 after sixteen seconds: too late, it comes again under the same id', async () => {
    const house = new WireHouse(world, ana({ status: 200, lateMs: 16_000 }, { status: 200 }));
    await house.people({ ana: ['webhook'], ben: ['push'] });
    await house.minutes(4);
    expect(house.d1.ask(`SELECT attempts FROM outbox WHERE channel_id = 'ana-0'`)).toEqual([{ attempts: 2 }]);
    expect(await house.oracles({ told: { ana: 0, ben: 1 }, repeats: 1, books: { sent: 2 } })).toEqual([]);
  });

  test('F66: takes twenty a minute of a hundred that are told there: all of them are told, and nobody is given up', async () => {
    let [minute, tokens] = [0, 20];
    const house = new WireHouse(world, ({ atMs }) => {
      if (Math.floor(atMs / MINUTE_MS) !== minute) [minute, tokens] = [Math.floor(atMs / MINUTE_MS), 20];
      tokens -= 1;
      return tokens >= 0 ? { status: 201 } : { status: 429, headers: { 'retry-after': '60' } };
    }, { random: seeded(66), wireless: true });
    const names = Array.from({ length: 100 }, (_, index) => `s${index}`);
    await house.people(Object.fromEntries(names.map((name) => [name, ['webhook']])));
    await house.minutes(45);
    expect(await house.oracles({ told: Object.fromEntries(names.map((name) => [name, 45])), books: { sent: 100 } })).toEqual([]);
  });

  test('F72: ends the connection when it has read everything: tried again, and told apart by its id', async () => {
    const house = new WireHouse(world, ana('reset', 'reset', { status: 200 }));
    await house.people({ ana: ['webhook'], ben: ['webhook'] });
    await house.minutes(5);
    const seen = new Set(house.of('ana').map(({ headers }) => headers['webhook-id']));
    expect([house.of('ana').length, seen.size]).toEqual([3, 1]);
    expect(await house.oracles({ told: { ana: 0, ben: 0 }, repeats: 2, books: { sent: 2 } })).toEqual([]);
  });
});

describe('an address', () => {
  test('F73: a public name that by now is this machine: the connection is refused, whatever it was when it was signed up', async () => {
    // The network of the runtime as a machine of one's own sets it, to public addresses and nowhere else; and one without that.
    const runtime = new Miniflare(convertV4MiniflareOptions({
      modules: true, compatibilityDate: '2026-11-01', serviceBindings: { PUBLIC: { network: { allow: ['public'] } }, ANY: { network: { allow: ['public', 'private'] } } },
      script: `export default { fetch: ({ headers }, env) => env[headers.get('by')].fetch(headers.get('to'), { method: 'POST', body: '{"data":{"days":[],"title":"Cannot say"}}' }).then(({ status }) => new Response(null, { status }), () => new Response(null, { status: 599 })) }`,
    }));
    const name = 'https://hooks.club.example.org';
    // What the resolver says by now.
    const here = `${world.hooks.origin.replace('127.0.0.1', 'localhost')}/somebody`;
    const statusBy = (by: string): Promise<number> => runtime.dispatchFetch('http://runtime.test/', { headers: { to: here, by } }).then(({ status }) => status);
    const elsewhere = (url: string): Promise<Response> | null => (url.startsWith(name) ? statusBy('PUBLIC').then((status) => {
      if (status === 599) throw new TypeError('the network refuses');
      return new Response(null, { status });
    }) : null);
    const house = new WireHouse(world, undefined, { elsewhere });
    await house.people({ ana: [{ url: `${name}/ana` }, 'push'], ben: ['push'] });
    await house.minutes(100);
    expect(house.d1.ask(`SELECT state, attempts FROM outbox WHERE channel_id = 'ana-0'`)).toEqual([{ state: 'dead', attempts: 7 }]);
    expect(house.of('somebody')).toEqual([]);
    expect(await house.oracles({ told: { ana: 100, ben: 0 }, books: { dead: 1, sent: 2 }, seen: /1 messages could not be delivered/ })).toEqual([]);
    expect(await statusBy('ANY')).toBe(204);
    expect(house.of('somebody')).toHaveLength(1);
    await runtime.dispose();
  });

  const good = certificate({ host: 'localhost', until: 2049 });
  test.each<[string, Certificate, boolean, boolean]>([
    ['that holds', good, true, true],
    ['that has expired', certificate({ host: 'localhost', until: 2021 }), true, false],
    ['of another host', certificate({ host: 'hooks.club.example.org', until: 2049 }), true, false],
    ['that nobody vouches for', certificate({ host: 'localhost', until: 2049 }), false, false],
  ])('F74: with a certificate %s: taken only with one that is good, and nothing goes in the clear', async (_, { key, cert }, isTrusted, isTaken) => {
    let requests = 0;
    const refused: string[] = [];
    const server = createServer({ key, cert }, (request, response) => { requests += 1; request.resume(); response.writeHead(204).end(); });
    server.on('tlsClientError', ({ code = '' }: NodeJS.ErrnoException) => refused.push(code));
    await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
    const usual = getCACertificates();
    setDefaultCACertificates(isTrusted ? [...usual, cert] : usual);
    try {
      const url = `https://localhost:${(server.address() as AddressInfo).port}/ana`;
      const house = new WireHouse(world, undefined, { elsewhere: (to, init) => (to === url ? fetch(to, { ...init, signal: null }) : null) });
      await house.people({ ana: [{ url }, 'push'], ben: ['push'] });
      await house.minutes(100);
      expect(requests).toBe(isTaken ? 1 : 0);
      expect(refused).not.toContain('ERR_SSL_HTTP_REQUEST');
      expect(await house.oracles(isTaken ? { told: { ben: 0 }, books: { sent: 2 } } : { told: { ana: 100, ben: 0 }, books: { dead: 1, sent: 2 }, seen: /1 messages could not be delivered/ })).toEqual([]);
    } finally {
      setDefaultCACertificates(usual);
      server.closeAllConnections();
      server.close();
    }
  });
});
