// http_ece ships no types. It is the oracle that decrypts our push messages (RFC 8291, content coding aes128gcm).
declare module 'http_ece' {
  import type { ECDH } from 'node:crypto';

  interface Parameters {
    readonly version: 'aes128gcm';
    readonly privateKey: ECDH;
    readonly authSecret?: string | Buffer;
    readonly dh?: string | Buffer;
    readonly salt?: string | Buffer;
  }

  const ece: {
    decrypt(body: Buffer, parameters: Parameters): Buffer;
    encrypt(body: Buffer, parameters: Parameters): Buffer;
  };
  export default ece;
}
