// F75-F77, with the six oracles: what becomes of a morning when the mail service takes a letter and it comes back, takes it and does not say so,
// or takes only so many. The house runs in this process; its letters go through the worker's own mailer in a real workerd
// to a mail service on loopback (smtp-server). And the alternative by configuration: the platform's binding MAIL.
import path from 'node:path';
import { build } from 'esbuild';
import { convertV4MiniflareOptions, Miniflare } from 'miniflare';
import { afterAll, afterEach, beforeAll, beforeEach, expect, test } from 'vitest';
import { bindingMailer } from '../../../worker/channels/mail-binding.ts';
import { mailChannel } from '../../../worker/channels/mail.ts';
import type { Letter, Mailer } from '../../../worker/security/mailer.ts';
import { base64, derivedKey, hmacSha256 } from '../../../worker/secrets.ts';
import type { SendOutcome } from '../../../worker/channels/channel.ts';
import { hook } from '../../support/fast-house.ts';
import { FastPostHouse, LINK_KEY } from '../../support/fast-post-house.ts';
import { health } from '../../../worker/routes/health.ts';
import { oraclesOf, toldByWebhook, verdictsIn, type Expected, type Told } from '../../support/oracles.ts';
import { root } from '../../support/run-tool.ts';
import { readMail, smtpError, startSmtpSink, type SmtpSink } from '../../support/sinks/smtp-sink.ts';

const EVENING = '2027-05-13T20:00:00Z';
const MORNING = '2027-05-14T04:00:00Z';
let runtime: Miniflare;
let sink: SmtpSink;
let house: FastPostHouse;
let letters = 0;
/** Of each letter that came since then: when, and whether it was taken. */
let fates: Pick<Told, 'atMs' | 'taken'>[] = [];

beforeAll(async () => {
  const bundled = await build({ stdin: { contents: `import { handOver } from './mail-worker.ts'; export default { fetch: handOver };`, resolveDir: path.join(root, 'test/support'), loader: 'ts' }, bundle: true, format: 'esm', write: false, external: ['cloudflare:sockets'], target: 'esnext' });
  runtime = new Miniflare(convertV4MiniflareOptions({ modules: true, script: bundled.outputFiles[0]?.text ?? '', compatibilityDate: '2026-11-01' }));
  sink = await startSmtpSink();
});

afterAll(() => Promise.all([runtime.dispose(), sink.close()]));

beforeEach(async () => {
  behaves({});
  letters = sink.received.length;
  house = await opened({ local: true, send });
});

afterEach(() => house.d1.close());

function behaves(as: Parameters<SmtpSink['behave']>[0]): void {
  sink.behave({
    ...as,
    data: () => {
      const answer = as.data?.() ?? null;
      fates.push({ atMs: house.nowMs, taken: answer === null || answer === 'drop' });
      return answer;
    },
  });
}

/** What each recipient got: by mail, and by the webhook that it falls back to. */
function gotten(): Told[] {
  const mails = sink.received.slice(letters).map(({ to, raw }, index): Told => {
    const { headers, parts } = readMail(raw);
    const subject = headers.get('subject') ?? '';
    return { name: (to[0] ?? '').split('@')[0] ?? '', id: /^<(.+)@/.exec(headers.get('message-id') ?? '')?.[1] ?? '', said: `${subject}\n${parts[0]?.text}`, verdicts: verdictsIn(subject), validUntilMs: Date.parse(headers.get('expires') ?? ''), ...(fates[index] ?? { atMs: NaN, taken: false }) };
  });
  const posts = house.posts.map((post) => toldByWebhook({ ...post, taken: true }, post.data));
  return [...mails, ...posts];
}

function oracles(expected: Omit<Expected, 'dueIso' | 'verdict'>): Promise<string[]> {
  return oraclesOf({ told: gotten(), health: async () => (await health(house.services())).json(), ask: <Row>(sql: string) => Promise.resolve(house.d1.ask<Row>(sql)) }, { dueIso: MORNING, verdict: 'within', ...expected });
}

async function send(letter: Letter): Promise<SendOutcome> {
  const response = await runtime.dispatchFetch('http://mail.test/', { method: 'POST', body: JSON.stringify({ url: `smtp://127.0.0.1:${sink.port}`, letter, timeoutMs: 3000 }) });
  return (await response.json()) as SendOutcome;
}

function opened(mailer: Mailer): Promise<FastPostHouse> {
  return FastPostHouse.open({
    nowIso: EVENING,
    instead: ({ settings, channels }) => ({
      mailer, settings: { ...settings, mailFrom: 'brief@dawnmargin.example.org' },
      channels: { ...channels, mail: mailChannel({ mailer, linkKey: LINK_KEY, publicUrl: settings.publicUrl, mailFrom: 'brief@dawnmargin.example.org' }) },
    }),
  });
}

/** Subscribers that have said yes, each with what it falls back to. */
async function told(addresses: readonly string[], fallback: readonly unknown[] = []): Promise<void> {
  for (const address of addresses) {
    const wish = { sites: [{ id: 'north', sheet: 'hill' }], deliver: { at: '06:00', timeZone: 'Europe/Vienna' }, channels: [{ kind: 'mail', address }, ...fallback] };
    await house.ask('POST', '/api/v1/subscriptions', wish);
    await house.answerAll();
    const confirm = new RegExp(`https?://[^/\\s]+(/confirm/\\S+)`).exec(readMail(sink.received.at(-1)?.raw ?? '').parts[0]?.text ?? '')?.[1] ?? '';
    expect((await house.form(confirm, { confirm: '1' })).status).toBe(303);
  }
  house.d1.ask(`UPDATE channel SET state = 'active'`);
  letters = sink.received.length;
  fates = [];
  house.nowMs = Date.parse(MORNING);
}

const arrived = () => sink.received.slice(letters).map(({ to, raw }) => ({ to: to[0], id: readMail(raw).headers.get('message-id') }));
const outbox = () => house.d1.ask<{ state: string; reason: string; attempts: number }>('SELECT state, reason, attempts FROM outbox ORDER BY created_at, channel_id');

async function bounced(messageId: string): Promise<void> {
  const body = JSON.stringify({ messageId, type: 'hard' });
  const at = String(Math.floor(house.nowMs / 1000));
  const key = await derivedKey(LINK_KEY, { purpose: 'bounce', id: 'mail', version: 1 });
  const signature = `v1,${base64(await hmacSha256(key, new TextEncoder().encode(`evt.${at}.${body}`)))}`;
  expect((await house.ask('POST', '/api/v1/bounces', body, { 'webhook-id': 'evt', 'webhook-timestamp': at, 'webhook-signature': signature })).status).toBe(200);
  await house.answerAll();
}

test('F75 taken, and then it comes back: the channel ends, the next in rank is told the same, nothing goes there again', async () => {
  await told(['ana@mail.example.org'], [{ kind: 'webhook', url: hook('next') }]);
  await house.minute();
  const [first] = arrived();
  await bounced(first?.id ?? '');
  expect(house.posts.map(({ type }) => type)).toEqual(['brief.issued']);
  expect(await oracles({ told: { ana: 0, next: 0 }, books: { sent: 2 }, seen: /"event":"bounced"/ })).toEqual([]);
  house.nowMs += 24 * 3_600_000;
  await house.minute();
  expect(arrived().length).toBe(1);
  expect(house.posts.length).toBe(2);
});

test('F75 with nothing to fall back to the subscription is paused, and its own page says so', async () => {
  await told(['ana@mail.example.org']);
  await house.minute();
  const manage = /https?:\/\/[^/\s]+(\/manage\/\S+)/.exec(readMail(sink.received.at(-1)?.raw ?? '').parts[0]?.text ?? '')?.[1] ?? '';
  await bounced(arrived()[0]?.id ?? '');
  expect(await (await house.ask('GET', `/api/v1${manage}`)).json()).toMatchObject({ state: 'paused', channels: [{ kind: 'mail', state: 'dead' }] });
  expect(await oracles({ told: { ana: 0 }, books: { sent: 1 }, seen: /"event":"bounced"/ })).toEqual([]);
});

test('F76 taken, and the connection is lost before the answer: sent again under the same Message-ID, and counted once', async () => {
  await told(['ana@mail.example.org']);
  let losses = 2;
  behaves({ data: () => ((losses -= 1) >= 0 ? 'drop' : null) });
  await house.minutes(6);
  const ids = arrived().map(({ id }) => id);
  expect(ids.length).toBe(3);
  expect(new Set(ids).size).toBe(1);
  expect(outbox()).toMatchObject([{ state: 'sent', attempts: 3 }]);
  expect(await oracles({ told: { ana: 0 }, repeats: 2, books: { sent: 1 } })).toEqual([]);
});

test('F77 a quota reached in the middle of a morning: the rest comes when it is open again, each once', async () => {
  const addresses = Array.from({ length: 6 }, (_, index) => `p${index}@mail.example.org`);
  await told(addresses);
  let left = 3;
  behaves({ rcpt: () => ((left -= 1) >= 0 ? null : smtpError(452, 'quota')) });
  await house.minutes(4);
  expect(arrived().length).toBe(3);
  expect(outbox().map(({ state }) => state).toSorted()).toEqual(['pending', 'pending', 'pending', 'sent', 'sent', 'sent']);
  behaves({});
  await house.minutes(30);
  expect(arrived().map(({ to = '' }) => to).toSorted((a, b) => a.localeCompare(b))).toEqual(addresses);
  expect(await oracles({ told: { p0: 30, p1: 30, p2: 30, p3: 30, p4: 30, p5: 30 }, books: { sent: 6 } })).toEqual([]);
});

test('F77 a quota that stays: the message ends with its reason, goes on by the next channel, is counted, and whoever runs the service is told', async () => {
  await told(['ana@mail.example.org']);
  house.nowMs = Date.parse(EVENING);
  await told(['ben@mail.example.org'], [{ kind: 'webhook', url: hook('next') }]);
  behaves({ rcpt: () => smtpError(452, 'quota') });
  for (let minute = 0; minute < 7 * 60; minute += 5) {
    await house.minute();
    house.nowMs += 5 * 60_000;
  }
  expect(arrived()).toEqual([]);
  for (const { reason } of outbox().filter(({ state }) => state === 'dead')) expect(reason).toBe('given up after 7 attempts; last: the mail service answered 452');
  expect(await (await house.ask('GET', '/healthz')).json()).toMatchObject({ status: 'needs a look', warnings: expect.arrayContaining(['2 messages could not be delivered']), outbox: { created: 3, dead: 2, pending: 0 } });
  expect(await oracles({ told: { next: 90 }, books: { dead: 2, sent: 1 }, seen: /2 messages could not be delivered/ })).toEqual([]);
});

test('the binding MAIL in place of SMTP: the same letters, and what its errors mean', async () => {
  const mails: Parameters<Parameters<typeof bindingMailer>[0]['send']>[0][] = [];
  let code = '';
  house.d1.close();
  house = await opened(bindingMailer({
    send: (mail) => {
      if (code !== '') return Promise.reject(Object.assign(new Error('no'), { code }));
      mails.push(mail);
      return Promise.resolve({ messageId: 'x' });
    },
  }, 'brief@dawnmargin.example.org'));
  await house.ask('POST', '/api/v1/subscriptions', { sites: [{ id: 'north', sheet: 'hill' }], deliver: { at: '06:00', timeZone: 'Europe/Vienna' }, channels: [{ kind: 'mail', address: 'ana@mail.example.org' }] });
  await house.answerAll();
  await house.form(/(\/confirm\/\S+)/.exec(mails.at(-1)?.text ?? '')?.[1] ?? '', { confirm: '1' });
  house.nowMs = Date.parse(MORNING);
  code = 'E_RATE_LIMIT_EXCEEDED';
  await house.minute();
  expect(outbox()).toMatchObject([{ state: 'pending', reason: 'the mail service answered E_RATE_LIMIT_EXCEEDED' }]);
  code = '';
  await house.minutes(3);
  expect(mails.at(-1)).toMatchObject({ from: 'brief@dawnmargin.example.org', to: 'ana@mail.example.org', headers: { 'List-Unsubscribe-Post': 'List-Unsubscribe=One-Click', 'Message-ID': expect.stringMatching(/^<msg_[0-9a-f]{32}@dawnmargin\.example\.org>$/) } });
  code = 'E_RECIPIENT_SUPPRESSED';
  house.nowMs += 24 * 3_600_000;
  await house.minute();
  expect(house.d1.ask('SELECT state FROM channel')).toEqual([{ state: 'dead' }]);
});
