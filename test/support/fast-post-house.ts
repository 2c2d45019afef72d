// A whole Dawnmargin in this process with its doors and a mailbox: subscribers ask over HTTP, letters and posts are kept.
import { FastHouse, type FastOptions } from './fast-house.ts';
import type { SendOutcome } from '../../worker/channels/channel.ts';
import { mailChannel } from '../../worker/channels/mail.ts';
import { app } from '../../worker/routes/app.ts';
import { sha256Hex } from '../../worker/secrets.ts';
import type { Letter } from '../../worker/security/mailer.ts';
import { pushChannel } from '../../worker/channels/push/push.ts';

export const OPERATOR_TOKEN = 'operator-token-for-tests-only-0123456789abc';
export const LINK_KEY = 'a-link-key-for-tests-only-0123456789';
const MAIL_FROM = 'brief@dawnmargin.example.org';

export class FastPostHouse extends FastHouse {
  letters: (Letter & { readonly atMs: number })[] = [];
  pushes: { readonly url: string; readonly body: Uint8Array }[] = [];
  mailOutcome: (letter: Letter) => SendOutcome = () => ({ state: 'sent' });

  constructor(options: FastOptions) {
    super({
      ...options,
      instead: (services) => {
        const mailer = { local: true, send: (letter: Letter): Promise<SendOutcome> => this.#take(letter) };
        const push = pushChannel({
          fetch: (url, init) => { this.pushes.push({ url, body: init.body as Uint8Array }); return Promise.resolve(new Response(null, { status: 201 })); },
          authorize: () => Promise.resolve('vapid t=x, k=y'), local: true, publicUrl: services.settings.publicUrl, quarrels: { untilMs: () => Promise.resolve(null), begin: () => Promise.resolve() },
        });
        const mail = mailChannel({ mailer, linkKey: LINK_KEY, publicUrl: services.settings.publicUrl, mailFrom: MAIL_FROM });
        const settings = { ...services.settings, mailFrom: MAIL_FROM, vapid: { publicKey: 'x', privateKey: 'y' } };
        return { mailer, sendsMail: true, settings, channels: { ...services.channels, mail, push }, ...options.instead?.(services) };
      },
    });
  }

  static async open(options: FastOptions, siteIds: readonly string[] = ['north', 'south']): Promise<FastPostHouse> {
    const house = new FastPostHouse({ ...options, env: { OPERATOR_TOKEN_SHA256: await sha256Hex(OPERATOR_TOKEN), ...options.env } });
    await house.seed([], siteIds);
    const { stores } = house.services();
    const sheets = [{ id: 'rope', name: 'Rope', kind: 'strip', limits: { maxMeanMps: 6 } }, { id: 'easy', name: 'Easy', kind: 'launch', limits: { maxMeanMps: 4 } }];
    await stores.db.together([stores.sheet.put(sheets.map((sheet) => ({ id: sheet.id, version: 1, body: JSON.stringify(sheet) })), house.nowMs)]);
    return house;
  }

  /** All its doors, as one worker has them. */
  doors() {
    return app(this.services());
  }

  async ask(method: string, path: string, body?: unknown, headers: Readonly<Record<string, string>> = {}): Promise<Response> {
    const json = body === undefined ? {} : { body: typeof body === 'string' ? body : JSON.stringify(body) };
    return this.doors().request(path, { method, ...json, headers: { ...(body === undefined ? {} : { 'content-type': 'application/json' }), ...headers } });
  }

  async form(path: string, fields: Readonly<Record<string, string>>): Promise<Response> {
    return this.doors().request(path, { method: 'POST', body: new URLSearchParams(fields).toString(), headers: { 'content-type': 'application/x-www-form-urlencoded' } });
  }

  /** The secret path of a kind in the newest letter to an address. */
  pathIn(kind: 'confirm' | 'manage' | 'unsubscribe', to?: string): string {
    const letter = this.letters.findLast((one) => to === undefined || one.to === to);
    const found = new RegExp(`https?://[^/\\s]+(/${kind}/\\S+)`).exec(letter?.text ?? '')?.[1];
    if (found === undefined) throw new Error(`no ${kind} link in ${JSON.stringify(letter)}`);
    return found;
  }

  /** Every row of every table as text. */
  everyRow(): string {
    const tables = this.d1.ask<{ name: string }>(`SELECT name FROM sqlite_master WHERE type = 'table' AND name NOT LIKE 'sqlite%' ORDER BY name`);
    return tables.map(({ name }) => `${name}: ${JSON.stringify(this.d1.ask(`SELECT * FROM "${name}"`))}`).join('\n');
  }

  async #take(letter: Letter): Promise<SendOutcome> {
    const outcome = this.mailOutcome(letter);
    if (outcome.state === 'sent') this.letters.push({ ...letter, atMs: this.nowMs });
    return outcome;
  }
}
