/** The channels of a subscription as they are asked for. What an address may be is for the worker to say: it is passed in. */
import * as z from 'zod/mini';
import type { Issue } from '../result.ts';
import { issue } from './check.ts';
import { fields, oneOf } from './fields.ts';
import { valueAt, type Path } from './path.ts';

/** One channel: what it needs to know, as JSON that only it reads. */
export interface ChannelRequest {
  readonly kind: 'mail' | 'webhook' | 'push';
  readonly target: string;
  /** Minutes of the subscriber's day; from is not to. */
  readonly quiet: { readonly from: number; readonly to: number } | null;
}

/** An address in its one spelling, or why it is refused. */
export type Checked = { readonly is: string } | { readonly problem: string };

export interface ChannelChecks {
  readonly mail: (address: string) => Checked;
  readonly webhook: (url: string) => Checked;
  readonly push: (subscription: { readonly endpoint: string; readonly p256dh: string; readonly auth: string }) => Checked;
}

const CLOCK_FORM = 'a local time "HH:MM" from 00:00 to 23:59';
const CHANNEL_FORM = 'an object whose kind is "mail", "webhook" or "push"';

export function clock(): z.ZodMiniString {
  const error = (): string => CLOCK_FORM;
  return z.string({ error }).check(z.regex(/^(?:[01]\d|2[0-3]):[0-5]\d$/, { error }));
}

export function minuteOf(time: string): number {
  return Number(time.slice(0, 2)) * 60 + Number(time.slice(3));
}

export function text(most: number, form: string): z.ZodMiniString {
  return z.string({ error: () => form }).check(z.maxLength(most, { error: () => form }));
}

/** Where a browser is reached, and its keys, as `PushSubscription.toJSON()` has them. */
export function pushFields() {
  return { endpoint: text(2048, 'the endpoint that the browser gave'), keys: fields({ p256dh: text(200, 'base64url'), auth: text(100, 'base64url') }) };
}

export function channelSchema() {
  const quiet = z.optional(fields({ from: clock(), to: clock() }));
  return z.discriminatedUnion('kind', [
    fields({ kind: oneOf(['mail']), address: text(254, 'a mail address, at most 254 characters'), quiet }),
    fields({ kind: oneOf(['webhook']), url: text(2048, 'an https address, at most 2048 characters'), quiet }),
    fields({ kind: oneOf(['push']), ...pushFields(), quiet }),
  ], { error: () => CHANNEL_FORM });
}

/** The channels in their one spelling, and what is wrong with the others. Types that are wrong are the schema's to report. */
export function channelIssues(given: unknown, checks: ChannelChecks): { readonly accepted: ChannelRequest[]; readonly issues: Issue[] } {
  const accepted: ChannelRequest[] = [];
  const issues: Issue[] = [];
  const seen = new Set<string>();
  const items: readonly unknown[] = Array.isArray(given) && given.length <= 4 ? given : [];
  for (const [index, item] of items.entries()) {
    const path: Path = ['channels', index];
    const found = targetOf(item, checks);
    if (found === null) continue;
    const { kind, at, checked, allowed } = found;
    if ('problem' in checked) issues.push(issue([...path, at], valueAt(item, [at]), { problem: checked.problem, allowed }));
    else if (seen.has(checked.is)) issues.push(issue([...path, at], valueAt(item, [at]), { problem: 'this channel is there already', allowed: 'each channel once' }));
    else accepted.push({ kind, target: checked.is, quiet: quietOf(item) });
    if ('is' in checked) seen.add(checked.is);
    const quiet = quietOf(item);
    if (quiet !== null && quiet.from === quiet.to) {
      issues.push(issue([...path, 'quiet', 'to'], valueAt(item, ['quiet', 'to']), { problem: 'quiet hours that begin when they end', allowed: 'another time than from' }));
    }
  }
  if (accepted.filter(({ kind }) => kind === 'mail').length > 1) {
    issues.push(issue(['channels'], given, { problem: 'more than one mail address', allowed: 'one mail address: each has a subscription of its own' }));
  }
  return { accepted, issues };
}

function quietOf(item: unknown): ChannelRequest['quiet'] {
  const [from, to] = ['from', 'to'].map((key) => valueAt(item, ['quiet', key]));
  return typeof from === 'string' && typeof to === 'string' ? { from: minuteOf(from), to: minuteOf(to) } : null;
}

interface Target {
  readonly kind: ChannelRequest['kind'];
  readonly at: string;
  readonly checked: Checked;
  readonly allowed: string;
}

function targetOf(item: unknown, checks: ChannelChecks): Target | null {
  const text = (path: Path): string | null => { const value = valueAt(item, path); return typeof value === 'string' ? value : null; };
  switch (valueAt(item, ['kind'])) {
    case 'mail': {
      const address = text(['address']);
      return address === null ? null : { kind: 'mail', at: 'address', checked: checks.mail(address), allowed: 'name@domain, plain, one' };
    }
    case 'webhook': {
      const url = text(['url']);
      return url === null ? null : { kind: 'webhook', at: 'url', checked: checks.webhook(url), allowed: 'https://name.of.a.public.host/path' };
    }
    case 'push': {
      const [endpoint, p256dh, auth] = [text(['endpoint']), text(['keys', 'p256dh']), text(['keys', 'auth'])];
      if (endpoint === null || p256dh === null || auth === null) return null;
      return { kind: 'push', at: 'endpoint', checked: checks.push({ endpoint, p256dh, auth }), allowed: 'a subscription as the browser gave it' };
    }
    default:
      return null;
  }
}
