// A sender's key pair as its settings hold it.
import { generateKeyPairSync } from 'node:crypto';

export function vapidKeys(): { readonly publicKey: string; readonly privateKey: string } {
  const jwk = generateKeyPairSync('ec', { namedCurve: 'P-256' }).privateKey.export({ format: 'jwk' });
  const point = Buffer.concat([Buffer.from([4]), Buffer.from(jwk.x ?? '', 'base64url'), Buffer.from(jwk.y ?? '', 'base64url')]);
  return { publicKey: point.toString('base64url'), privateKey: jwk.d ?? '' };
}
