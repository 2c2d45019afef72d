// Push: encrypting, and sending to a service on loopback, against the npm library web-push in the same runtime: in Node, whose
// WebCrypto hands each small step to another thread, and in workerd, where both run when it counts.
import { builtinModules } from 'node:module';
import path from 'node:path';
import { build } from 'esbuild';
import { convertV4MiniflareOptions, Miniflare } from 'miniflare';
import webPush from 'web-push';
import type { Message } from '../../worker/channels/channel.ts';
import { browserKeyOf, encrypt, fresh } from '../../worker/channels/push/encrypt.ts';
import { pushChannel } from '../../worker/channels/push/push.ts';
import { vapid } from '../../worker/channels/push/vapid.ts';
import { base64UrlBytes } from '../../worker/secrets.ts';
import { startPushSink } from '../support/sinks/push-sink.ts';
import { inTurns, say, type Measured } from './turns.ts';

const AT_ONCE = 20;
const keys = webPush.generateVAPIDKeys();
const sink = await startPushSink();
const targets = Array.from({ length: AT_ONCE }, () => sink.newBrowser().target);
const text = 'At 13 h a gust leaves 1.2 m/s forward; the sheet asks 2.5. '.repeat(20);
const plain = new TextEncoder().encode(text);

say(await inTurns({
  name: `${AT_ONCE} messages encrypted`, yardstick: `web-push, ${AT_ONCE} encrypted`,
  own: () => Promise.all(targets.map(async ({ p256dh, auth }) => {
    const to = { p256dh: base64UrlBytes(p256dh), auth: base64UrlBytes(auth) };
    return encrypt(plain, to, await fresh(), (await browserKeyOf(to)) ?? undefined);
  })),
  yard: () => targets.map(({ p256dh, auth }) => webPush.encrypt(p256dh, auth, text, 'aes128gcm')),
}));

/** web-push asks for its modules of Node by their bare names, which workerd knows by their full ones. */
const nodeModules = {
  name: 'node modules',
  setup(bundle: Parameters<NonNullable<NonNullable<Parameters<typeof build>[0]['plugins']>[number]['setup']>>[0]): void {
    bundle.onResolve({ filter: /^[a-z_/]+$/ }, ({ path: name }) => (builtinModules.includes(name) ? { path: `node:${name}`, namespace: 'node-module' } : undefined));
    bundle.onLoad({ filter: /./, namespace: 'node-module' }, ({ path: name }) => ({ contents: `import * as whole from '${name}'; module.exports = whole.default ?? whole;`, loader: 'js' }));
  },
};
const built = await build({
  entryPoints: [path.join(import.meta.dirname, 'push-worker.ts')], bundle: true, format: 'esm', write: false, target: 'es2024', platform: 'neutral', mainFields: ['module', 'main'],
  external: ['node:*'], plugins: [nodeModules], banner: { js: `import { Buffer } from 'node:buffer'; globalThis.Buffer = Buffer;` },
});
const miniflare = new Miniflare(convertV4MiniflareOptions({
  modules: [{ type: 'ESModule', path: 'index.js', contents: built.outputFiles[0]?.text ?? '' }], compatibilityDate: '2026-11-01', compatibilityFlags: ['nodejs_compat'],
}));
const answer = await fetch(await miniflare.ready, { method: 'POST', body: JSON.stringify({ targets, text }) });
say((await answer.json()) as Measured);
await miniflare.dispose();

const authorize = vapid(keys, 'mailto:bench@example.org');
const channel = pushChannel({ fetch: (url, init) => fetch(url, init), authorize, local: true, publicUrl: 'https://dawnmargin.example', quarrels: { untilMs: () => Promise.resolve(null), begin: () => Promise.resolve() } });
const nowMs = Date.now();
const message: Message = { id: 'msg_bench', kind: 'brief', title: 'Beyond a limit', text, issuedAtMs: nowMs, dataRunAtMs: nowMs, validUntilMs: nowMs + 3_600_000, urgent: false, demo: false, days: [] };
say(await inTurns({
  name: `${AT_ONCE} messages delivered to loopback`, yardstick: `web-push, ${AT_ONCE} delivered`, warmUp: 10, rounds: 40,
  own: async () => {
    const outcomes = await Promise.all(targets.map((target, index) => channel.send(message, { id: `c${index}`, target: JSON.stringify(target), state: 'active', secretVersion: 1, oldestSecretVersion: 1 }, { number: 1, nowMs, timeoutMs: 10_000, untilMs: message.validUntilMs })));
    const failed = outcomes.find(({ state }) => state !== 'sent');
    if (failed !== undefined) throw new Error(JSON.stringify(failed));
    return outcomes;
  },
  yard: () => Promise.all(targets.map(async ({ endpoint, p256dh, auth }) => {
    const details = webPush.generateRequestDetails({ endpoint, keys: { p256dh, auth } }, text, { vapidDetails: { subject: 'mailto:bench@example.org', ...keys }, contentEncoding: 'aes128gcm', TTL: 3600 });
    const response = await fetch(details.endpoint, { method: details.method, headers: Object.fromEntries(Object.entries(details.headers).map(([name, value]) => [name, String(value)])), body: new Uint8Array(details.body ?? []) });
    await response.body?.cancel();
    return response.status;
  })),
}));
await sink.close();
