// Certificates signed by themselves, for servers on loopback (DER by hand: Node makes keys but no certificates).
import { createSign, generateKeyPairSync } from 'node:crypto';

export interface Certificate {
  readonly key: string;
  readonly cert: string;
}

/** `until`: the last year in which it holds. */
export function certificate({ host, until }: { readonly host: string; readonly until: number }): Certificate {
  const { privateKey, publicKey } = generateKeyPairSync('rsa', { modulusLength: 2048 });
  const der = (tag: number, ...parts: Buffer[]): Buffer => {
    const body = Buffer.concat(parts);
    const length = body.length < 128 ? Buffer.from([body.length]) : Buffer.from([0x82, body.length >> 8, body.length & 255]);
    return Buffer.concat([Buffer.from([tag]), length, body]);
  };
  const sha256Rsa = der(0x30, Buffer.from('06092a864886f70d01010b0500', 'hex'));
  const name = der(0x30, der(0x31, der(0x30, Buffer.from('0603550403', 'hex'), der(0x0c, Buffer.from(host)))));
  const day = (text: string): Buffer => der(0x17, Buffer.from(text));
  const body = der(0x30, der(0x02, Buffer.from([1])), sha256Rsa, name, der(0x30, day('200101000000Z'), day(`${until % 100}1231235959Z`)), name, publicKey.export({ format: 'der', type: 'spki' }));
  const signature = createSign('sha256').update(body).sign(privateKey);
  const cert = der(0x30, body, sha256Rsa, der(0x03, Buffer.from([0]), signature)).toString('base64');
  return { key: privateKey.export({ format: 'pem', type: 'pkcs8' }).toString(), cert: `-----BEGIN CERTIFICATE-----\n${cert.match(/.{1,64}/g)?.join('\n')}\n-----END CERTIFICATE-----\n` };
}
