import { base64UrlBytes } from '../../secrets.ts';
import type { PushKeys } from './encrypt.ts';

/**
 * Where a push message may go: the services that browsers use, told by the host that the URL parser finds, and nothing
 * else; a subscription can name any address at all.
 */
const SERVICES = ['fcm.googleapis.com', 'push.services.mozilla.com', 'notify.windows.com', 'push.apple.com'] as const;
const LOOPBACK = new Set(['127.0.0.1', '[::1]', 'localhost']);

export interface PushTarget {
  readonly endpoint: string;
  readonly keys: PushKeys;
}

/** The target as it is stored, `{"endpoint", "p256dh", "auth"}`, or what is wrong with it. */
export function readTarget(text: string, rules: { readonly local: boolean }): PushTarget | { readonly problem: string } {
  let stored: { readonly endpoint?: unknown; readonly p256dh?: unknown; readonly auth?: unknown } | null;
  try {
    stored = JSON.parse(text) as typeof stored;
  } catch {
    return { problem: 'it cannot be read' };
  }
  const { endpoint, p256dh, auth } = stored ?? {};
  if (typeof endpoint !== 'string' || typeof p256dh !== 'string' || typeof auth !== 'string') return { problem: 'a part of it is missing' };
  const problem = endpointProblem(endpoint, rules);
  if (problem !== null) return { problem };
  if (!/^[A-Za-z0-9_-]{87}=?$/.test(p256dh) || !/^[A-Za-z0-9_-]{22}={0,2}$/.test(auth)) return { problem: 'its keys have the wrong length' };
  return { endpoint: new URL(endpoint).href, keys: { p256dh: base64UrlBytes(p256dh), auth: base64UrlBytes(auth) } };
}

export function endpointProblem(endpoint: string, rules: { readonly local: boolean }): string | null {
  if (endpoint.length > 2048 || /[\s\\]/.test(endpoint) || !URL.canParse(endpoint)) return 'its endpoint is no address';
  const url = new URL(endpoint);
  if (rules.local && LOOPBACK.has(url.hostname)) return null;
  if (url.protocol !== 'https:' || url.port !== '' || url.username !== '' || url.password !== '') return 'its endpoint is not plain https';
  const host = url.hostname.replace(/\.$/, '');
  return SERVICES.some((service) => host === service || host.endsWith(`.${service}`)) ? null : 'its endpoint is no push service that is known here';
}

export function isLoopbackEndpoint(endpoint: string): boolean {
  return LOOPBACK.has(new URL(endpoint).hostname);
}
