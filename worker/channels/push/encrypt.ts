/**
 * Message encryption for Web Push: RFC 8291, with the content coding aes128gcm of RFC 8188, in one record. Section and
 * step names are those of RFC 8291. WebCrypto only.
 */
const RECORD_SIZE = 4096;
/** Header: salt 16, record size 4, key id length 1, key id 65. A record carries one delimiter octet and the tag of 16. */
const HEADER_BYTES = 86;
const OVERHEAD_BYTES = 17;

/** Bytes of text that fit into one record; RFC 8291, section 4, asks services to take 4096 in all. */
export const MOST_PLAIN_BYTES = RECORD_SIZE - HEADER_BYTES - OVERHEAD_BYTES;

export interface PushKeys {
  /** The browser's public key: an uncompressed P-256 point, 65 bytes. */
  readonly p256dh: Uint8Array;
  /** Its authentication secret, 16 bytes. */
  readonly auth: Uint8Array;
}

/** What is fresh for each message; given from outside only to redo the example of the RFC. */
export interface Fresh {
  readonly salt: Uint8Array;
  readonly keys: CryptoKeyPair;
}

const encoder = new TextEncoder();
const P256 = { name: 'ECDH', namedCurve: 'P-256' } as const;
const KEY_INFO = encoder.encode('WebPush: info\0');
const CIPHER_INFO = encoder.encode('Content-Encoding: aes128gcm\0');
const NONCE_INFO = encoder.encode('Content-Encoding: nonce\0');
const DELIMITER = new Uint8Array([2]);
/** Record size in four bytes, then the length of a point. */
const SIZES = new Uint8Array([0, 0, RECORD_SIZE >> 8, RECORD_SIZE & 255, 65]);

export async function fresh(): Promise<Fresh> {
  const keys = (await crypto.subtle.generateKey(P256, true, ['deriveBits'])) as CryptoKeyPair;
  return { salt: crypto.getRandomValues(new Uint8Array(16)), keys };
}

/** Throws where the keys are none: a point off the curve, a wrong length. Check them with `areKeys` when they come in. */
export async function encrypt(plain: Uint8Array, to: PushKeys, { salt, keys }: Fresh, imported?: CryptoKey): Promise<Uint8Array> {
  if (plain.length > MOST_PLAIN_BYTES) throw new Error(`a push message holds at most ${MOST_PLAIN_BYTES} bytes, not ${plain.length}`);
  const browserKey = imported ?? (await crypto.subtle.importKey('raw', to.p256dh, P256, false, []));
  // Section 3.1: the shared secret. The runtime's name for the peer's key differs from that of its type definitions.
  const peer = { name: 'ECDH', public: browserKey } as unknown as SubtleCryptoDeriveKeyAlgorithm;
  const [shared, own] = await Promise.all([crypto.subtle.deriveBits(peer, keys.privateKey, 256), crypto.subtle.exportKey('raw', keys.publicKey)]);
  const ownPublic = new Uint8Array(own as ArrayBuffer);
  // Section 3.3 and 3.4: from it and the authentication secret the input key, from that and the salt the key and nonce.
  const secret = await hkdfKey(shared);
  const ikm = await hkdfKey(await crypto.subtle.deriveBits(hkdf(to.auth, joined(KEY_INFO, to.p256dh, ownPublic)), secret, 256));
  const [cipher, nonce] = await Promise.all([
    crypto.subtle.deriveKey(hkdf(salt, CIPHER_INFO), ikm, { name: 'AES-GCM', length: 128 }, false, ['encrypt']),
    crypto.subtle.deriveBits(hkdf(salt, NONCE_INFO), ikm, 96),
  ]);
  // RFC 8188, section 2: the last record ends in a delimiter of 2, without padding here.
  const record = await crypto.subtle.encrypt({ name: 'AES-GCM', iv: nonce }, cipher, joined(plain, DELIMITER));
  return joined(salt, SIZES, ownPublic, new Uint8Array(record));
}

/** Whether these can be encrypted to: the right lengths, and a point of the curve. */
export async function areKeys(keys: PushKeys): Promise<boolean> {
  return (await browserKeyOf(keys)) !== null;
}

/** The browser's public key as the runtime takes it; null where the keys are none. */
export async function browserKeyOf(keys: PushKeys): Promise<CryptoKey | null> {
  if (keys.p256dh.length !== 65 || keys.p256dh[0] !== 4 || keys.auth.length !== 16) return null;
  try {
    return await crypto.subtle.importKey('raw', keys.p256dh, P256, false, []);
  } catch {
    return null;
  }
}

function hkdf(salt: Uint8Array, info: Uint8Array): SubtleCryptoDeriveKeyAlgorithm {
  return { name: 'HKDF', hash: 'SHA-256', salt, info };
}

function hkdfKey(secret: ArrayBuffer): Promise<CryptoKey> {
  return crypto.subtle.importKey('raw', secret, 'HKDF', false, ['deriveBits', 'deriveKey']);
}

export function joined(...parts: readonly Uint8Array[]): Uint8Array {
  const whole = new Uint8Array(parts.reduce((sum, part) => sum + part.length, 0));
  let at = 0;
  for (const part of parts) {
    whole.set(part, at);
    at += part.length;
  }
  return whole;
}
