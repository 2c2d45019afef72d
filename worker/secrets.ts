/**
 * Secrets that must be printable again in every message are not stored but derived from LINK_KEY:
 * HMAC-SHA256(LINK_KEY, purpose|id|version). Only the version is kept; raising it revokes what was printed before.
 */
export type Purpose = 'webhook' | 'challenge' | 'manage' | 'unsubscribe' | 'feed' | 'bounce' | 'plan' | 'approval';

export interface Derivation {
  readonly purpose: Purpose;
  readonly id: string;
  readonly version: number;
}

const encoder = new TextEncoder();

export async function hmacSha256(key: Uint8Array, data: Uint8Array): Promise<Uint8Array> {
  const imported = await crypto.subtle.importKey('raw', key, { name: 'HMAC', hash: 'SHA-256' }, false, ['sign']);
  return new Uint8Array(await crypto.subtle.sign('HMAC', imported, data));
}

export function derivedKey(linkKey: string, { purpose, id, version }: Derivation): Promise<Uint8Array> {
  return hmacSha256(encoder.encode(linkKey), encoder.encode(`${purpose}|${id}|${version}`));
}

/** The secret as a link carries it: id.version.mac, 192 bits of it. */
export async function linkToken(linkKey: string, derivation: Derivation): Promise<string> {
  const mac = await derivedKey(linkKey, derivation);
  return `${derivation.id}.${derivation.version}.${base64Url(mac.subarray(0, 24))}`;
}

/** The id and version that a token names, when its mac is ours. Whether the version still counts is for the caller to look up. */
export async function readLinkToken(linkKey: string, purpose: Purpose, token: string): Promise<{ readonly id: string; readonly version: number } | null> {
  const found = /^([A-Za-z0-9_-]{1,64})\.([1-9]\d{0,6})\.([A-Za-z0-9_-]{32})$/.exec(token);
  const [, id, digits] = found ?? [];
  if (id === undefined || digits === undefined) return null;
  const version = Number(digits);
  return (await sameText(token, await linkToken(linkKey, { purpose, id, version }))) ? { id, version } : null;
}

/** Tells one public key from another, where it is written down beside what was made under it. */
export function keyIdOf({ publicKey }: { readonly publicKey: string }): string {
  return publicKey.slice(1, 13);
}

/** Whether two texts are the same, in a time that does not tell where they differ. */
export async function sameText(a: string, b: string): Promise<boolean> {
  const [left, right] = await Promise.all([sha256(a), sha256(b)]);
  let difference = 0;
  for (const [index, byte] of left.entries()) difference |= byte ^ (right[index] ?? 0);
  return difference === 0;
}

export async function sha256(text: string): Promise<Uint8Array> {
  return new Uint8Array(await crypto.subtle.digest('SHA-256', encoder.encode(text)));
}

export async function sha256Hex(text: string): Promise<string> {
  return [...(await sha256(text))].map((byte) => byte.toString(16).padStart(2, '0')).join('');
}

export function base64(bytes: Uint8Array): string {
  return btoa(String.fromCharCode(...bytes));
}

export function base64Url(bytes: Uint8Array): string {
  return base64(bytes).replaceAll('+', '-').replaceAll('/', '_').replaceAll('=', '');
}

/** Padding is allowed, and not needed. Throws for what is not base64url. */
export function base64UrlBytes(text: string): Uint8Array {
  const binary = atob(text.replaceAll('-', '+').replaceAll('_', '/').replace(/=+$/, ''));
  const bytes = new Uint8Array(binary.length);
  // Through an iterator it takes twice as long, and each push message has two keys to read.
  for (let index = 0; index < binary.length; index += 1) bytes[index] = binary.charCodeAt(index);
  return bytes;
}
