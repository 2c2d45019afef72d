import { CLOSING } from '../../lib/brief/words/closing.ts';
import { base64, derivedKey, hmacSha256 } from '../secrets.ts';
import type { Address, Channel, Message, SendOutcome } from './channel.ts';
import { retryAfterMs } from './retry-after.ts';
import { isLoopback, webhookUrl } from './webhook-url.ts';

/**
 * A signed POST by Standard Webhooks 1.0. The secret is derived, never stored; while it is being changed two versions
 * sign side by side. Of the answer only its status counts: 2xx is delivered, 410 ends the channel, anything else is tried
 * again, redirects included.
 */
export interface WebhookOptions {
  readonly fetch: (url: string, init: RequestInit) => Promise<Response>;
  readonly linkKey: string | null;
  readonly local: boolean;
  readonly publicUrl: string;
}

export function webhookChannel(options: WebhookOptions): Channel {
  const rules = { local: options.local, ownHost: new URL(options.publicUrl).hostname };
  const addressOf = (address: Address): ReturnType<typeof webhookUrl> => {
    const target: unknown = JSON.parse(address.target);
    const url = typeof target === 'object' && target !== null && 'url' in target ? target.url : null;
    return typeof url === 'string' ? webhookUrl(url, rules) : { problem: 'no address' };
  };
  return {
    lane(address) {
      const to = addressOf(address);
      return 'url' in to ? new URL(to.url).host : address.id;
    },
    async send(message, address, { nowMs, timeoutMs }) {
      const to = addressOf(address);
      if ('problem' in to) return { state: 'gone', reason: `the webhook address is refused: ${to.problem}` };
      if (message.demo && !isLoopback(new URL(to.url))) return { state: 'refused', reason: 'invented weather stays on this machine' };
      if (options.linkKey === null) return { state: 'retry', reason: 'the setting LINK_KEY is missing', afterMs: null };
      const body = JSON.stringify(payload(message));
      const timestampS = Math.floor(nowMs / 1000);
      const secrets = await webhookSecrets(options.linkKey, address);
      const signatures = await Promise.all(secrets.map((key) => signature(key, `${message.id}.${timestampS}.${body}`)));
      try {
        const response = await options.fetch(to.url, {
          method: 'POST',
          headers: {
            'content-type': 'application/json',
            'user-agent': 'dawnmargin',
            'webhook-id': message.id,
            'webhook-timestamp': String(timestampS),
            'webhook-signature': signatures.join(' '),
          },
          body,
          redirect: 'manual',
          signal: AbortSignal.timeout(timeoutMs),
        });
        await response.body?.cancel().catch(() => undefined);
        return outcomeOf(response, nowMs);
      } catch (error) {
        const isLate = error instanceof Error && error.name === 'TimeoutError';
        return { state: 'retry', reason: isLate ? `no answer within ${timeoutMs / 1000} s` : 'the address could not be reached', afterMs: null };
      }
    },
  };
}

/** The keys whose signatures a message carries: the newest version, and the one before while it is still valid. */
export function webhookSecrets(linkKey: string, address: Pick<Address, 'id' | 'secretVersion' | 'oldestSecretVersion'>): Promise<Uint8Array[]> {
  const oldest = Math.max(address.oldestSecretVersion, address.secretVersion - 1, 1);
  const versions = oldest < address.secretVersion ? [address.secretVersion, oldest] : [address.secretVersion];
  return Promise.all(versions.map((version) => derivedKey(linkKey, { purpose: 'webhook', id: address.id, version })));
}

/** A secret as its receiver is given it. */
export function webhookSecretText(key: Uint8Array): string {
  return `whsec_${base64(key)}`;
}

async function signature(key: Uint8Array, content: string): Promise<string> {
  return `v1,${base64(await hmacSha256(key, new TextEncoder().encode(content)))}`;
}

function outcomeOf(response: Response, nowMs: number): SendOutcome {
  const { status } = response;
  if (status >= 200 && status < 300) return { state: 'sent' };
  if (status === 410) return { state: 'gone', reason: 'the receiver answered 410, gone' };
  const wait = status === 429 || status === 503 ? retryAfterMs(response.headers.get('retry-after'), nowMs) : null;
  const reason = status === 0 || (status >= 300 && status < 400) ? 'the receiver redirects' : `the receiver answered ${status}`;
  return { state: 'retry', reason, afterMs: wait };
}

function iso(epochMs: number): string {
  return new Date(epochMs).toISOString();
}

/** The body: the same bytes at every attempt. */
function payload(message: Message): unknown {
  return {
    type: message.kind === 'brief' ? 'brief.issued' : 'brief.missed',
    timestamp: iso(message.issuedAtMs),
    data: {
      id: message.id,
      title: message.title,
      text: message.text,
      issuedAt: iso(message.issuedAtMs),
      dataRunAt: message.dataRunAtMs === null ? null : iso(message.dataRunAtMs),
      validUntil: iso(message.validUntilMs),
      inventedWeather: message.demo,
      days: message.days,
      notice: CLOSING,
    },
  };
}
