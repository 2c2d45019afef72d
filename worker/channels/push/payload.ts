import type { Message } from '../channel.ts';

/** Push services must take 4096 bytes; two thousand are as much as a notification can show several times over. */
export const MOST_BYTES = 2000;

const encoder = new TextEncoder();

/**
 * What the service worker shows. The text is cut to fit: it says the most restrictive first, so whatever is lost at its
 * end was only a permission. `minimal` leaves it out where a service refuses the size.
 */
export function pushPayload(message: Message, { origin, minimal = false }: { readonly origin: string; readonly minimal?: boolean }): Uint8Array {
  const [only] = message.days;
  const path = message.days.length === 1 && only !== undefined ? `/sites/${encodeURIComponent(only.siteId)}` : '/';
  const fixed = {
    id: message.id, thread: message.thread, kind: message.nonce === undefined ? message.kind : 'confirm', nonce: message.nonce, title: message.title, url: `${origin}${path}`,
    issuedAt: new Date(message.issuedAtMs).toISOString(), validUntil: new Date(message.validUntilMs).toISOString(), inventedWeather: message.demo,
  };
  if (minimal) return encoder.encode(JSON.stringify({ id: fixed.id, thread: fixed.thread, kind: fixed.kind, nonce: fixed.nonce, title: cut(fixed.title, 120), url: fixed.url, issuedAt: fixed.issuedAt, validUntil: fixed.validUntil }));
  const bytesOf = (body: string): Uint8Array => encoder.encode(JSON.stringify({ ...fixed, title: cut(fixed.title, 400), body }));
  const whole = bytesOf(message.text);
  return whole.length <= MOST_BYTES ? whole : bytesOf(cut(message.text, lengthWithout(message.text, whole.length - MOST_BYTES)));
}

/** How much of a text is left when at least so many bytes of its JSON are taken from its end. */
function lengthWithout(text: string, bytes: number): number {
  let length = text.length;
  for (let left = bytes; left > 0 && length > 0; left -= jsonBytes(text.charCodeAt(length))) length -= 1;
  return length;
}

/** Of one UTF-16 unit, and never more than it takes: half a character counts as half of it. */
function jsonBytes(code: number): number {
  if (code < 0x20 || code === 0x22 || code === 0x5c) return 2;
  if (code < 0x80) return 1;
  return code < 0x800 || (code >= 0xd800 && code < 0xe000) ? 2 : 3;
}

/** At most so many UTF-16 units, never half a character. */
function cut(text: string, length: number): string {
  const end = /[\uD800-\uDBFF]/.test(text.charAt(length - 1)) ? length - 1 : length;
  return text.slice(0, end);
}
