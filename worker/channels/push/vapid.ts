import { base64Url, base64UrlBytes, keyIdOf } from '../../secrets.ts';

/**
 * Voluntary application server identification (RFC 8292): a token signed with ES256 for the origin of a push service.
 * Good for twelve hours of the twenty-four that are allowed, and signed once for each origin and hour.
 */
export interface VapidKeys {
  /** Base64url: the uncompressed point, and the private scalar. */
  readonly publicKey: string;
  readonly privateKey: string;
}

const HOUR_MS = 3_600_000;
const GOOD_FOR_MS = 12 * HOUR_MS;

const encoder = new TextEncoder();

/** The value of the header Authorization for requests to this origin. */
export interface Authorize {
  (origin: string, nowMs: number): Promise<string>;
  /** Of the public key. */
  readonly keyId?: string;
}

/** `subject`: where the operator can be reached, a mailto: or https: address. */
export function vapid(keys: VapidKeys, subject: string): Authorize {
  const signed = new Map<string, Promise<string>>();
  const authorize = (origin: string, nowMs: number): Promise<string> => {
    const hour = Math.floor(nowMs / HOUR_MS);
    const name = `${origin} ${hour}`;
    const token = signed.get(name) ?? sign(keys, { aud: origin, exp: Math.floor((hour * HOUR_MS + GOOD_FOR_MS) / 1000), sub: subject });
    if (signed.size > 100) signed.clear();
    signed.set(name, token);
    return token.then((jwt) => `vapid t=${jwt}, k=${keys.publicKey}`);
  };
  return Object.assign(authorize, { keyId: keyIdOf(keys) });
}

async function sign({ publicKey, privateKey }: VapidKeys, claims: { readonly aud: string; readonly exp: number; readonly sub: string }): Promise<string> {
  const point = base64UrlBytes(publicKey);
  const jwk = { kty: 'EC', crv: 'P-256', x: base64Url(point.subarray(1, 33)), y: base64Url(point.subarray(33)), d: privateKey };
  const key = await crypto.subtle.importKey('jwk', jwk, { name: 'ECDSA', namedCurve: 'P-256' }, false, ['sign']);
  const content = `${textPart({ typ: 'JWT', alg: 'ES256' })}.${textPart(claims)}`;
  const signature = await crypto.subtle.sign({ name: 'ECDSA', hash: 'SHA-256' }, key, encoder.encode(content));
  return `${content}.${base64Url(new Uint8Array(signature))}`;
}

function textPart(value: unknown): string {
  return base64Url(encoder.encode(JSON.stringify(value)));
}
