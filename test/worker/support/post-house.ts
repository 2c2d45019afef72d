// A house with a mailbox: what would go out by mail is kept, and fails as the test says.
import { applyD1Migrations, reset } from 'cloudflare:test';
import { env } from 'cloudflare:workers';
import type { Hono } from 'hono';
import type { SendOutcome } from '../../../worker/channels/channel.ts';
import { mailChannel } from '../../../worker/channels/mail.ts';
import type { Letter } from '../../../worker/security/mailer.ts';
import { app } from '../../../worker/routes/app.ts';
import type { Services } from '../../../worker/service-set.ts';
import { House, LINK_KEY, type HouseOptions } from './house.ts';

export const OPERATOR_TOKEN = 'operator-token-for-tests-only-0123456789abc';

export class PostHouse extends House {
  letters: Letter[] = [];
  mailOutcome: (letter: Letter) => SendOutcome = () => ({ state: 'sent' });
  isLocal = true;
  operatorHash: string | null = null;

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
    const settings = { ...services.settings, local: this.isLocal, mailFrom: 'brief@dawnmargin.example.org', operatorTokenSha256: this.operatorHash };
    return { ...services, settings, mailer, channels: { ...services.channels, mail: mailChannel({ mailer, linkKey: LINK_KEY, publicUrl: settings.publicUrl, mailFrom: settings.mailFrom }) } };
  }

  hono(): Hono {
    return app(this.services());
  }

  async ask(method: string, path: string, body?: unknown, headers: Record<string, string> = {}): Promise<Response> {
    const json = body === undefined ? {} : { body: typeof body === 'string' ? body : JSON.stringify(body) };
    return this.hono().request(path, { method, ...json, headers: { ...(body === undefined ? {} : { 'content-type': 'application/json' }), ...headers } });
  }

  form(path: string, fields: Readonly<Record<string, string>>, headers: Record<string, string> = {}): Promise<Response> {
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
