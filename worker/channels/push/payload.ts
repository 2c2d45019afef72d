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
  let length = message.text.length;
  for (;;) {
    const bytes = encoder.encode(JSON.stringify({ ...fixed, title: cut(fixed.title, 400), body: cut(message.text, length) }));
    if (bytes.length <= MOST_BYTES || length === 0) return bytes;
    length = Math.max(0, length - Math.max(1, Math.ceil((bytes.length - MOST_BYTES) / 4)));
  }
}

/** At most so many UTF-16 units, never half a character. */
export function cut(text: string, length: number): string {
  const end = /[\uD800-\uDBFF]/.test(text.charAt(length - 1)) ? length - 1 : length;
  return text.slice(0, end);
}
