// Inside the runtime: encrypting for browsers by our own code and by web-push, in turns.
import webPush from 'web-push';
import { browserKeyOf, encrypt, fresh } from '../../worker/channels/push/encrypt.ts';
import { base64UrlBytes } from '../../worker/secrets.ts';
import { inTurns } from './turns.ts';

/** The clock of the local runtime counts whole milliseconds: so many handfuls are one measure. */
const HANDFULS = 10;

// oxlint-disable-next-line import/no-default-export -- a worker is its default export
export default {
  async fetch(request: Request): Promise<Response> {
    const { targets, text } = await request.json<{ targets: { p256dh: string; auth: string }[]; text: string }>();
    const plain = new TextEncoder().encode(text);
    const ours = (): Promise<unknown> => Promise.all(targets.map(async ({ p256dh, auth }) => {
      const to = { p256dh: base64UrlBytes(p256dh), auth: base64UrlBytes(auth) };
      return encrypt(plain, to, await fresh(), (await browserKeyOf(to)) ?? undefined);
    }));
    return Response.json(await inTurns({
      name: `${targets.length} messages encrypted in workerd`, yardstick: `web-push, ${targets.length} encrypted in workerd`, warmUp: 5, rounds: 20,
      own: async () => { for (let index = 0; index < HANDFULS; index += 1) await ours(); return HANDFULS; },
      yard: () => { for (let index = 0; index < HANDFULS; index += 1) targets.map(({ p256dh, auth }) => webPush.encrypt(p256dh, auth, text, 'aes128gcm')); return HANDFULS; },
    }));
  },
};
