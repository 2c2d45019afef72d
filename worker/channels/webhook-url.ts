/**
 * Where a webhook may point: https on the standard port of a public name. Judged on what the URL parser makes of the
 * text, since `0x7f.1`, `2130706433` and full-width digits are all 127.0.0.1 by then.
 */
const NOT_PUBLIC = ['local', 'internal', 'localhost', 'home.arpa', 'onion', 'test', 'invalid', 'example', 'arpa'];
const LOOPBACK = new Set(['127.0.0.1', '[::1]', 'localhost']);

export interface WebhookRules {
  /** LOCAL=1: plain http to this machine is allowed, on any port. */
  readonly local: boolean;
  /** This service's own host, which must not be asked to call itself. */
  readonly ownHost: string;
}

/** The address as it will be called, or what is wrong with it. */
export function webhookUrl(text: string, rules: WebhookRules): { readonly url: string } | { readonly problem: string } {
  if (text.length > 2048) return { problem: 'longer than 2048 characters' };
  if (/[\s\\]|[^\x21-\x7e]/u.test(text)) return { problem: 'holds a space, a backslash or a character outside ASCII' };
  if (!URL.canParse(text)) return { problem: 'not an address' };
  const url = new URL(text);
  url.hash = '';
  if (rules.local && isLoopback(url) && (url.protocol === 'http:' || url.protocol === 'https:')) return { url: url.href };
  if (url.protocol !== 'https:') return { problem: 'not https' };
  if (url.username !== '' || url.password !== '') return { problem: 'holds a user name or password' };
  if (url.port !== '') return { problem: 'names a port other than 443' };
  const host = url.hostname.replace(/\.$/, '').toLowerCase();
  if (host.startsWith('[') || /^[\d.]+$/.test(host)) return { problem: 'an IP address instead of a name' };
  if (!host.includes('.')) return { problem: 'a name without a domain' };
  if (NOT_PUBLIC.some((suffix) => host === suffix || host.endsWith(`.${suffix}`))) return { problem: 'a name that is not public' };
  // Every name that the platform gives to an account ends in the account's own.
  const own = /[^.]+\.workers\.dev$/.exec(rules.ownHost)?.[0] ?? rules.ownHost;
  if (host === own || host.endsWith(`.${own}`)) return { problem: 'an address of this service itself' };
  url.hostname = host;
  return { url: url.href };
}

export function isLoopback(url: URL): boolean {
  return LOOPBACK.has(url.hostname);
}
