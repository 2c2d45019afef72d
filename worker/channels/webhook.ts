import { CLOSING } from '../../lib/brief/words/closing.ts';
import { base64, derivedKey, hmacSha256 } from '../secrets.ts';
import { challengeBody, challengeOf, isEcho } from './challenge.ts';
import type { Address, Attempt, Channel, Message, SendOutcome } from './channel.ts';
import { retryAfterMs } from './retry-after.ts';
import { isLoopback, webhookUrl } from './webhook-url.ts';

const MOST_CHALLENGES = 3;

/**
 * A signed POST by Standard Webhooks 1.0. The secret is derived, never stored; while it is being changed two versions
 * sign side by side. Of the answer only its status counts: 2xx is delivered, 410 ends the channel, anything else is tried
 * again, redirects included. A receiver that has not echoed a challenge yet gets that first, and no brief before.
 */
export interface WebhookOptions {
  readonly fetch: (url: string, init: RequestInit) => Promise<Response>;
  readonly linkKey: string | null;
  /** While that key is being changed: the one before, which signs beside it. */
  readonly linkKeyBefore?: string | null;
  readonly local: boolean;
  readonly publicUrl: string;
}

export function webhookChannel(options: WebhookOptions): Channel {
  const rules = { local: options.local, ownHost: new URL(options.publicUrl).hostname };
  const addressOf = (address: Address): ReturnType<typeof webhookUrl> => {
    const url = urlIn(address.target);
    return url === null ? { problem: 'it cannot be read' } : webhookUrl(url, rules);
  };
  return {
    lane(address) {
      const to = addressOf(address);
      return 'url' in to ? new URL(to.url).host : address.id;
    },
    async send(message, address, attempt) {
      const to = addressOf(address);
      if ('problem' in to) return { state: 'gone', reason: `the webhook address is refused: ${to.problem}` };
      if (message.demo && !isLoopback(new URL(to.url))) return { state: 'refused', reason: 'invented weather stays on this machine' };
      if (options.linkKey === null) return { state: 'retry', reason: 'the setting LINK_KEY is missing', afterMs: null };
      const post = poster(options, { url: to.url, linkKey: options.linkKey, address, attempt });
      if (address.state === 'active') return outcomeOf(await post(message.id, payload(message)), attempt);
      const challenge = await challengeOf(options.linkKey, address);
      const answer = await post(`chl_${challenge}`, challengeBody(challenge, attempt.nowMs));
      if (answer instanceof Response && (await isEcho(answer, challenge))) {
        const outcome = await outcomeOf(await post(message.id, payload(message)), attempt);
        return outcome.state === 'sent' ? { ...outcome, verified: true } : outcome;
      }
      const reason = 'the receiver has not echoed the challenge';
      return attempt.number < MOST_CHALLENGES ? { state: 'retry', reason, afterMs: null } : { state: 'refused', reason };
    },
  };
}

function urlIn(target: string): string | null {
  try {
    const parsed = JSON.parse(target) as { readonly url?: unknown } | null;
    return typeof parsed?.url === 'string' ? parsed.url : null;
  } catch {
    return null;
  }
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

type Post = (id: string, body: unknown) => Promise<Response | 'too late' | 'unreachable'>;

function poster(
  { fetch, linkKeyBefore = null }: WebhookOptions,
  { url, linkKey, address, attempt }: { readonly url: string; readonly linkKey: string; readonly address: Address; readonly attempt: Attempt },
): Post {
  return async (id, value) => {
    const body = JSON.stringify(value);
    const timestampS = Math.floor(attempt.nowMs / 1000);
    const secrets = (await Promise.all([linkKey, ...(linkKeyBefore === null ? [] : [linkKeyBefore])].map((key) => webhookSecrets(key, address)))).flat();
    const signatures = await Promise.all(secrets.map((key) => signature(key, `${id}.${timestampS}.${body}`)));
    const headers = {
      'content-type': 'application/json', 'user-agent': 'dawnmargin',
      'webhook-id': id, 'webhook-timestamp': String(timestampS), 'webhook-signature': signatures.join(' '),
    };
    try {
      return await fetch(url, { method: 'POST', headers, body, redirect: 'manual', signal: AbortSignal.timeout(attempt.timeoutMs) });
    } catch (error) {
      return error instanceof Error && error.name === 'TimeoutError' ? 'too late' : 'unreachable';
    }
  };
}

async function outcomeOf(answer: Awaited<ReturnType<Post>>, { nowMs, timeoutMs }: Attempt): Promise<SendOutcome> {
  if (answer === 'too late') return { state: 'retry', reason: `no answer within ${timeoutMs / 1000} s`, afterMs: null };
  if (answer === 'unreachable') return { state: 'retry', reason: 'the address could not be reached', afterMs: null };
  await answer.body?.cancel().catch(() => undefined);
  const { status } = answer;
  if (status >= 200 && status < 300) return { state: 'sent' };
  if (status === 410) return { state: 'gone', reason: 'the receiver answered 410, gone' };
  const wait = status === 429 || status === 503 ? retryAfterMs(answer.headers.get('retry-after'), nowMs) : null;
  const reason = status === 0 || (status >= 300 && status < 400) ? 'the receiver redirects' : `the receiver answered ${status}`;
  return { state: 'retry', reason, afterMs: wait };
}

function iso(epochMs: number): string {
  return new Date(epochMs).toISOString();
}

const TYPES: Readonly<Record<Message['kind'], string>> = { brief: 'brief.issued', change: 'brief.changed', missed: 'brief.missed', plan: 'plan.turned', test: 'service.test' };

/** The body: the same bytes at every attempt. */
function payload(message: Message): unknown {
  return {
    type: TYPES[message.kind],
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
