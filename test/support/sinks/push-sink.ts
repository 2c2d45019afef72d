// A push service on loopback with browsers of its own: it keeps what it was sent, answers as told, and decrypts with a
// library that is not ours (http_ece).
import { createECDH, randomBytes, type ECDH } from 'node:crypto';
import { createServer, type IncomingHttpHeaders, type ServerResponse } from 'node:http';
import type { AddressInfo } from 'node:net';
import ece from 'http_ece';

export interface Pushed {
  readonly path: string;
  readonly headers: IncomingHttpHeaders;
  readonly body: Buffer;
  readonly atMs: number;
  /** Whether the answer was read to its end. */
  readonly isAnswerRead?: Promise<boolean>;
}

export type PushAnswer = 'silence' | 'reset' | { readonly status: number; readonly headers?: Record<string, string>; readonly afterMs?: number; readonly body?: string };

export interface Browser {
  /** As a row of `channel` holds it. */
  readonly target: { readonly endpoint: string; readonly p256dh: string; readonly auth: string };
}

export interface PushSink {
  readonly origin: string;
  readonly pushed: readonly Pushed[];
  newBrowser(): Browser;
  answer(as: (pushed: Pushed) => PushAnswer): void;
  /** What the browser reads. Throws when it cannot. */
  decrypt(pushed: Pushed): unknown;
  close(): Promise<void>;
}

export async function startPushSink(): Promise<PushSink> {
  const pushed: Pushed[] = [];
  const browsers = new Map<string, { readonly ecdh: ECDH; readonly auth: string }>();
  let behaviour: (one: Pushed) => PushAnswer = () => ({ status: 201 });
  const server = createServer((request, response) => {
    const chunks: Buffer[] = [];
    request.on('data', (chunk: Buffer) => chunks.push(chunk));
    request.on('end', () => {
      const isAnswerRead = new Promise<boolean>((resolve) => { response.once('close', () => resolve(response.writableFinished)); });
      const one = { path: request.url ?? '', headers: request.headers, body: Buffer.concat(chunks), atMs: Date.now(), isAnswerRead };
      pushed.push(one);
      reply(response, behaviour(one));
    });
  });
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  const origin = `http://127.0.0.1:${(server.address() as AddressInfo).port}`;
  return {
    origin,
    pushed,
    newBrowser() {
      const ecdh = createECDH('prime256v1');
      const auth = randomBytes(16).toString('base64url');
      const path = `/push/${browsers.size}`;
      const p256dh = ecdh.generateKeys().toString('base64url');
      browsers.set(path, { ecdh, auth });
      return { target: { endpoint: `${origin}${path}`, p256dh, auth } };
    },
    answer(as) { behaviour = as; },
    decrypt({ path, body }) {
      const browser = browsers.get(path);
      if (browser === undefined) throw new Error(`no browser at ${path}`);
      return JSON.parse(ece.decrypt(body, { version: 'aes128gcm', privateKey: browser.ecdh, authSecret: browser.auth }).toString('utf8')) as unknown;
    },
    async close() {
      server.closeAllConnections();
      await new Promise((resolve) => server.close(resolve));
    },
  };
}

function reply(response: ServerResponse, as: PushAnswer): void {
  if (as === 'silence') return;
  if (as === 'reset') {
    response.destroy();
    return;
  }
  setTimeout(() => response.writeHead(as.status, as.headers).end(as.body), as.afterMs ?? 0);
}
