// The bare loop that throughput is held against: the same encryption, signature and POST in the same runtime, and nothing
// else. Six connections, as one invocation has.
import { encrypt, fresh } from '../../../worker/channels/push/encrypt.ts';
import { vapid } from '../../../worker/channels/push/vapid.ts';
import { base64UrlBytes } from '../../../worker/secrets.ts';

interface Work {
  readonly targets: readonly { readonly endpoint: string; readonly p256dh: string; readonly auth: string }[];
  readonly keys: { readonly publicKey: string; readonly privateKey: string };
  readonly bytes: number;
}

// oxlint-disable-next-line import/no-default-export -- a worker is its default export
export default {
  async fetch(request: Request): Promise<Response> {
    const { targets, keys, bytes } = await request.json<Work>();
    const authorize = vapid(keys, 'mailto:bench@example.org');
    const text = new Uint8Array(bytes).fill(120);
    const left = [...targets];
    await Promise.all(Array.from({ length: 6 }, async () => {
      for (let target = left.pop(); target !== undefined; target = left.pop()) {
        const body = await encrypt(text, { p256dh: base64UrlBytes(target.p256dh), auth: base64UrlBytes(target.auth) }, await fresh());
        const authorization = await authorize(new URL(target.endpoint).origin, Date.now());
        const headers = { authorization, 'content-type': 'application/octet-stream', 'content-encoding': 'aes128gcm', ttl: '60', topic: 'a-topic-of-thirty-two-characters', urgency: 'normal' };
        const response = await fetch(target.endpoint, { method: 'POST', body, headers, redirect: 'manual', signal: AbortSignal.timeout(15_000) });
        await response.body?.cancel();
      }
    }));
    return new Response('done');
  },
};
