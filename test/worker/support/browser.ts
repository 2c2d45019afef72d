// A browser that is told by push: a key pair, and RFC 8291 read from the other end. test/faults/delivery decrypts the same
// pushes with a library that is not ours (http_ece), which Node has and workerd has not.
import { joined } from '../../../worker/channels/push/encrypt.ts';
import { base64Url } from '../../../worker/secrets.ts';

export interface TestBrowser {
  /** As `PushSubscription.toJSON()` has it, without its expiry. */
  readonly subscription: { readonly endpoint: string; readonly keys: { readonly p256dh: string; readonly auth: string } };
  /** Throws for what was not encrypted for this browser. */
  read(body: Uint8Array): Promise<unknown>;
}

const P256 = { name: 'ECDH', namedCurve: 'P-256' } as const;
const text = (value: string): Uint8Array => new TextEncoder().encode(value);
let count = 0;

export async function newBrowser(endpoint = `https://fcm.googleapis.com/fcm/send/${(count += 1)}`): Promise<TestBrowser> {
  const pair = (await crypto.subtle.generateKey(P256, true, ['deriveBits'])) as CryptoKeyPair;
  const own = new Uint8Array((await crypto.subtle.exportKey('raw', pair.publicKey)) as ArrayBuffer);
  const auth = crypto.getRandomValues(new Uint8Array(16));
  return {
    subscription: { endpoint, keys: { p256dh: base64Url(own), auth: base64Url(auth) } },
    async read(body) {
      const [salt, sender, record] = [body.subarray(0, 16), body.subarray(21, 86), body.subarray(86)];
      const key = await crypto.subtle.importKey('raw', sender, P256, false, []);
      const shared = new Uint8Array(await crypto.subtle.deriveBits({ name: 'ECDH', public: key } as unknown as SubtleCryptoDeriveKeyAlgorithm, pair.privateKey, 256));
      const ikm = await hkdf(auth, shared, joined(text('WebPush: info\0'), own, sender), 32);
      const cipher = await crypto.subtle.importKey('raw', await hkdf(salt, ikm, text('Content-Encoding: aes128gcm\0'), 16), 'AES-GCM', false, ['decrypt']);
      const plain = new Uint8Array(await crypto.subtle.decrypt({ name: 'AES-GCM', iv: await hkdf(salt, ikm, text('Content-Encoding: nonce\0'), 12) }, cipher, record));
      return JSON.parse(new TextDecoder().decode(plain.subarray(0, plain.lastIndexOf(2)))) as unknown;
    },
  };
}

async function hkdf(salt: Uint8Array, ikm: Uint8Array, info: Uint8Array, bytes: number): Promise<Uint8Array> {
  const key = await crypto.subtle.importKey('raw', ikm, 'HKDF', false, ['deriveBits']);
  return new Uint8Array(await crypto.subtle.deriveBits({ name: 'HKDF', hash: 'SHA-256', salt, info }, key, bytes * 8));
}
