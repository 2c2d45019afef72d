import { base64Url, sha256 } from '../../secrets.ts';
import type { Address, Attempt, Channel, Message, SendOutcome } from '../channel.ts';
import { retryAfterMs } from '../retry-after.ts';
import { browserKeyOf, encrypt, fresh } from './encrypt.ts';
import { isLoopbackEndpoint, readTarget, type PushTarget } from './endpoint.ts';
import { pushPayload } from './payload.ts';
import type { Authorize } from './vapid.ts';

/**
 * Web Push (RFC 8030): one POST to the endpoint that a browser gave us, encrypted for that browser. What the service's
 * answer means for the subscription is decided by its status alone.
 */
export interface PushOptions {
  readonly fetch: (url: string, init: RequestInit) => Promise<Response>;
  /** null where this service has no VAPID keys. */
  readonly authorize: Authorize | null;
  /** While keys are being changed: the one before. A push service takes for a browser only the key that it signed up under. */
  readonly before?: Authorize | null;
  readonly local: boolean;
  readonly publicUrl: string;
  readonly quarrels: Quarrels;
}

/** Origins that refuse us as a sender, whoever the receiver is: nothing is sent there until then. */
export interface Quarrels {
  untilMs(origin: string): Promise<number | null>;
  begin(origin: string, untilMs: number, nowMs: number): Promise<void>;
}

const QUARREL_MS = 10 * 60_000;

/** A browser that has just moved answers within seconds: a brief waits a few minutes for it. */
const MOST_WAITS = 4;

export function pushChannel(options: PushOptions): Channel {
  const targetOf = (address: Address): PushTarget | { readonly problem: string } => readTarget(address.target, { local: options.local });
  return {
    // A push service is one host for thousands of browsers, and takes them side by side.
    lane: (address) => address.id,
    host(address) {
      const target = targetOf(address);
      return 'problem' in target ? address.id : new URL(target.endpoint).origin;
    },
    async send(message, address, attempt) {
      // Anyone can send us someone's endpoint; nothing goes there before that browser has shown that it asked.
      if (address.state !== 'active' && message.nonce === undefined) {
        const reason = 'this browser has not confirmed that it wants to be told';
        return attempt.number < MOST_WAITS ? { state: 'retry', reason, afterMs: null } : { state: 'refused', reason };
      }
      const target = targetOf(address);
      if ('problem' in target) return { state: 'gone', reason: `the push subscription is refused: ${target.problem}` };
      if (message.demo && !isLoopbackEndpoint(target.endpoint)) return { state: 'refused', reason: 'invented weather stays on this machine' };
      if (options.authorize === null) return { state: 'retry', reason: 'the settings VAPID_PUBLIC_KEY and VAPID_PRIVATE_KEY are missing', afterMs: null };
      const browserKey = await browserKeyOf(target.keys);
      if (browserKey === null) return { state: 'gone', reason: 'the push subscription is refused: its keys are none' };
      const { origin } = new URL(target.endpoint);
      const quarrelMs = await options.quarrels.untilMs(origin);
      if (quarrelMs !== null && quarrelMs > attempt.nowMs) return { state: 'retry', reason: 'the push service refuses this sender', afterMs: quarrelMs - attempt.nowMs };
      const keys = keysFor(address, options.authorize, options.before ?? null);
      if (keys.length === 0) return { state: 'refused', reason: 'this browser signed up under a key that is given up: it signs up again at its next visit' };
      let outcome: Answer = 'quarrel';
      for (const authorize of keys) {
        outcome = await postToFit(message, target, attempt, { ...options, authorize, browserKey });
        if (outcome === 'quarrel') continue;
        if (typeof outcome === 'object' && outcome.state === 'sent' && authorize.keyId !== undefined && authorize.keyId !== address.pushKey) outcome = { ...outcome, pushKey: authorize.keyId };
        break;
      }
      if (outcome === 'too-large') return { state: 'refused', reason: 'the push service answered 413 to the smallest message' };
      if (outcome === 'quarrel') {
        // Anyone can sign up with an address that is refused: only of one that has shown that it asked is it our own keys.
        if (message.nonce === undefined) await options.quarrels.begin(origin, attempt.nowMs + QUARREL_MS, attempt.nowMs);
        return { state: 'retry', reason: 'the push service refuses this sender', afterMs: QUARREL_MS };
      }
      return outcome;
    },
  };
}

type Answer = SendOutcome | 'too-large' | 'quarrel';

/** The keys to try, the likeliest first: a browser may have signed up under the one before while we wrote down the new one. */
function keysFor({ pushKey = null }: Address, newest: Authorize, before: Authorize | null): Authorize[] {
  if (before === null) return pushKey === null || newest.keyId === undefined || pushKey === newest.keyId ? [newest] : [];
  return pushKey === newest.keyId ? [newest, before] : pushKey === null || pushKey === before.keyId ? [before, newest] : [];
}

/** Where all is too large for a service, what fits is the call to look. */
async function postToFit(message: Message, target: PushTarget, attempt: Attempt, posting: Omit<Posting, 'minimal'>): Promise<Answer> {
  const full = await post(message, target, attempt, { ...posting, minimal: false });
  return full === 'too-large' ? post(message, target, attempt, { ...posting, minimal: true }) : full;
}

interface Posting extends Pick<PushOptions, 'fetch' | 'publicUrl'> {
  readonly authorize: Authorize;
  readonly browserKey: CryptoKey;
  readonly minimal: boolean;
}

async function post(message: Message, target: PushTarget, { nowMs, timeoutMs, untilMs }: Attempt, posting: Posting): Promise<Answer> {
  const body = await encrypt(pushPayload(message, { origin: posting.publicUrl, minimal: posting.minimal }), target.keys, await fresh(), posting.browserKey);
  try {
    const response = await posting.fetch(target.endpoint, {
      method: 'POST',
      headers: {
        authorization: await posting.authorize(new URL(target.endpoint).origin, nowMs),
        'content-type': 'application/octet-stream',
        'content-encoding': 'aes128gcm',
        ttl: String(Math.max(0, Math.floor((untilMs - nowMs) / 1000))),
        topic: await topicOf(message),
        urgency: message.urgent ? 'high' : 'normal',
      },
      body,
      redirect: 'manual',
      signal: AbortSignal.timeout(timeoutMs),
    });
    await response.body?.cancel().catch(() => undefined);
    return outcomeOf(response, nowMs);
  } catch (error) {
    const isLate = error instanceof Error && error.name === 'TimeoutError';
    return { state: 'retry', reason: isLate ? `no answer within ${timeoutMs / 1000} s` : 'the push service could not be reached', afterMs: null };
  }
}

/** At most 32 characters (RFC 8030, 5.4): a repeat takes the place of the first, in the service and on the screen. */
async function topicOf(message: Message): Promise<string> {
  return base64Url(await sha256(message.thread ?? message.id)).slice(0, 32);
}

function outcomeOf(response: Response, nowMs: number): Answer {
  const { status } = response;
  if (status >= 200 && status < 300) return { state: 'sent' };
  if (status === 404 || status === 410) return { state: 'gone', reason: `the push service answered ${status}: the subscription has ended` };
  if (status === 413) return 'too-large';
  if (status === 400 || status === 401 || status === 403) return 'quarrel';
  // Of a service that has too many, only time ends the attempts.
  if (status === 429) return { state: 'retry', reason: 'the push service answered 429', afterMs: retryAfterMs(response.headers.get('retry-after'), nowMs) ?? 0, busy: true };
  const wait = status === 503 ? retryAfterMs(response.headers.get('retry-after'), nowMs) : null;
  const reason = status === 0 || (status >= 300 && status < 400) ? 'the push service redirects' : `the push service answered ${status}`;
  return { state: 'retry', reason, afterMs: wait };
}
