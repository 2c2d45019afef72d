import { base64Url, derivedKey } from '../secrets.ts';

/**
 * Before the first brief the receiver has to show that it wants to be one: it echoes a nonce out of a signed request as
 * `{"challenge": "…"}`. Without that, anybody could point us at somebody else.
 */
const MOST_ANSWER_BYTES = 1024;

export async function challengeOf(linkKey: string, address: { readonly id: string; readonly secretVersion: number }): Promise<string> {
  return base64Url((await derivedKey(linkKey, { purpose: 'challenge', id: address.id, version: address.secretVersion })).subarray(0, 24));
}

export function challengeBody(challenge: string, nowMs: number): unknown {
  return { type: 'endpoint.challenge', timestamp: new Date(nowMs).toISOString(), data: { challenge } };
}

/** Whether the answer is the echo. Nothing else of it is kept or shown. */
export async function isEcho(response: Response, challenge: string): Promise<boolean> {
  if (response.status !== 200) {
    await response.body?.cancel().catch(() => undefined);
    return false;
  }
  try {
    const answer = JSON.parse(await beginning(response)) as unknown;
    return typeof answer === 'object' && answer !== null && 'challenge' in answer && answer.challenge === challenge;
  } catch {
    return false;
  }
}

async function beginning(response: Response): Promise<string> {
  let text = '';
  const decoder = new TextDecoder();
  for await (const chunk of response.body ?? []) {
    text += decoder.decode(chunk as Uint8Array, { stream: true });
    if (text.length > MOST_ANSWER_BYTES) return '';
  }
  return text;
}
