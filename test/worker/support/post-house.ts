// A house with a mailbox: what would go out by mail is kept, and fails as the test says.
import { applyD1Migrations, reset } from 'cloudflare:test';
import { env } from 'cloudflare:workers';
import type { Hono } from 'hono';
import type { SendOutcome } from '../../../worker/channels/channel.ts';
import { addressesOf } from '../../../worker/channels/addresses.ts';
import { pushChannel } from '../../../worker/channels/push/push.ts';
import { storedQuarrels } from '../../../worker/channels/push/quarrels.ts';
import { vapid } from '../../../worker/channels/push/vapid.ts';
import { mailChannel } from '../../../worker/channels/mail.ts';
import type { Letter } from '../../../worker/security/mailer.ts';
import { base64Url } from '../../../worker/secrets.ts';
import { app } from '../../../worker/routes/app.ts';
import type { Services } from '../../../worker/service-set.ts';
import { House, LINK_KEY, type HouseOptions } from './house.ts';

export const OPERATOR_TOKEN = 'operator-token-for-tests-only-0123456789abc';

export class PostHouse extends House {
  letters: Letter[] = [];
  mailOutcome: (letter: Letter) => SendOutcome = () => ({ state: 'sent' });
  isLocal = true;
  publicUrl = 'http://127.0.0.1:8787';
  operatorHash: string | null = null;
  secondHash: string | null = null;
  vapid: { readonly publicKey: string; readonly privateKey: string } | null = null;
  pushes: { readonly url: string; readonly body: Uint8Array; readonly headers: Headers }[] = [];
  /** The pair before, while the keys are being changed. */
  vapidBefore: PostHouse['vapid'] = null;
  /** What the push service answers. */
  pushAnswer: (push: PostHouse['pushes'][number]) => number = () => this.pushStatus;
  pushStatus = 201;

  /** From now on this house sends pushes: their bytes are kept. */
  async withPush(): Promise<void> {
    const pair = (await crypto.subtle.generateKey({ name: 'ECDSA', namedCurve: 'P-256' }, true, ['sign', 'verify'])) as CryptoKeyPair;
    const { d = '' } = (await crypto.subtle.exportKey('jwk', pair.privateKey)) as JsonWebKey;
    this.vapid = { publicKey: base64Url(new Uint8Array((await crypto.subtle.exportKey('raw', pair.publicKey)) as ArrayBuffer)), privateKey: d };
  }

  override services(): Services {
    const services = super.services();
    const mailer = {
      local: true,
      send: (letter: Letter): Promise<SendOutcome> => {
        const outcome = this.mailOutcome(letter);
        if (outcome.state === 'sent') this.letters.push(letter);
        return Promise.resolve(outcome);
      },
    };
    const settings = { ...services.settings, local: this.isLocal, publicUrl: this.publicUrl, vapid: this.vapid, vapidBefore: this.vapidBefore, mailFrom: 'brief@dawnmargin.example.org', operatorTokenSha256: this.operatorHash, secondTokenSha256: this.secondHash };
    const push = pushChannel({
      fetch: (url, init) => {
        const sent = { url, body: init.body as Uint8Array, headers: new Headers(init.headers) };
        this.pushes.push(sent);
        return Promise.resolve(new Response(null, { status: this.pushAnswer(sent) }));
      },
      authorize: this.vapid === null ? null : vapid(this.vapid, 'mailto:ops@example.org'),
      before: this.vapidBefore === null ? null : vapid(this.vapidBefore, 'mailto:ops@example.org'), local: this.isLocal, publicUrl: settings.publicUrl, quarrels: storedQuarrels(services.stores),
    });
    return { ...services, settings, mailer, sendsMail: true, addresses: addressesOf(settings), channels: { ...services.channels, push, mail: mailChannel({ mailer, linkKey: LINK_KEY, publicUrl: settings.publicUrl, mailFrom: settings.mailFrom }) } };
  }

  hono(): Hono {
    return app(this.services());
  }

  async ask(method: string, path: string, body?: unknown, headers: Record<string, string> = {}): Promise<Response> {
    const json = body === undefined ? {} : { body: typeof body === 'string' ? body : JSON.stringify(body) };
    return this.hono().request(path, { method, ...json, headers: { ...(body === undefined ? {} : { 'content-type': 'application/json' }), ...headers } });
  }

  form(path: string, fields: Readonly<Record<string, string>> | string[][], headers: Record<string, string> = {}): Promise<Response> {
    return Promise.resolve(this.hono().request(path, { method: 'POST', body: new URLSearchParams(fields).toString(), headers: { 'content-type': 'application/x-www-form-urlencoded', ...headers } }));
  }

  /** The secret path of a kind in the newest letter to an address. */
  pathIn(kind: 'confirm' | 'manage' | 'unsubscribe', to?: string): string {
    const letter = this.letters.findLast((one) => to === undefined || one.to === to);
    const found = new RegExp(`https?://[^/\\s]+(/${kind}/\\S+)`).exec(letter?.text ?? '')?.[1];
    if (found === undefined) throw new Error(`no ${kind} link in ${JSON.stringify(letter)}`);
    return found;
  }
}

export async function newPostHouse(options: HouseOptions): Promise<PostHouse> {
  await reset();
  await applyD1Migrations(env.DB, env.TEST_MIGRATIONS);
  const house = new PostHouse(options);
  await house.seed([], ['north', 'south']);
  const { stores } = house.services();
  const strip = { id: 'rope', name: 'Rope', kind: 'strip', limits: { maxMeanMps: 6 } };
  const easy = { id: 'easy', name: 'Easy', kind: 'launch', limits: { maxMeanMps: 4 } };
  await stores.db.together([stores.sheet.put([strip, easy].map((sheet) => ({ id: sheet.id, version: 1, body: JSON.stringify(sheet) })), house.nowMs)]);
  return house;
}

export async function everyRow(): Promise<string> {
  const tables = await env.DB.prepare(`SELECT name FROM sqlite_master WHERE type = 'table' AND name NOT LIKE '%\\_cf\\_%' ESCAPE '\\' AND name NOT LIKE 'sqlite%'`).all<{ name: string }>();
  const rows = await Promise.all(tables.results.map(async ({ name }) => `${name}: ${JSON.stringify((await env.DB.prepare(`SELECT * FROM "${name}"`).all()).results)}`));
  return rows.join('\n');
}

export function wish(over: Readonly<Record<string, unknown>> = {}): Record<string, unknown> {
  return {
    sites: [{ id: 'north', sheet: 'hill' }], wing: { class: 'EN B' }, deliver: { at: '06:00', timeZone: 'Europe/Vienna' },
    channels: [{ kind: 'mail', address: 'ana@mail.example.org' }], ...over,
  };
}
