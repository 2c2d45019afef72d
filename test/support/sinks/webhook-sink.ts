// A receiver of webhooks on loopback that keeps what it was sent and answers as it is told.
import { createServer, type IncomingHttpHeaders, type ServerResponse } from 'node:http';
import type { AddressInfo } from 'node:net';

export interface Received {
  readonly path: string;
  readonly id: string;
  readonly headers: IncomingHttpHeaders;
  readonly body: string;
  readonly atMs: number;
}

/** What happens to a message: a status, or nothing at all, or the end of the connection after it was read. */
export type Behaviour = number | 'silence' | 'reset' | { readonly status: number; readonly headers?: Record<string, string>; readonly body?: string; readonly afterMs?: number };

export interface WebhookSink {
  readonly origin: string;
  readonly received: readonly Received[];
  behave(as: (received: Received) => Behaviour): void;
  /** Resolves when so many have come. */
  has(count: number, withinMs?: number): Promise<void>;
  close(): Promise<void>;
}

export async function startWebhookSink(): Promise<WebhookSink> {
  const received: Received[] = [];
  let behaviour: (received: Received) => Behaviour = () => 204;
  const server = createServer((request, response) => {
    let body = '';
    request.setEncoding('utf8');
    request.on('data', (chunk: string) => { body += chunk; });
    request.on('end', () => {
      const one = { path: request.url ?? '', id: String(request.headers['webhook-id'] ?? ''), headers: request.headers, body, atMs: Date.now() };
      received.push(one);
      answer(response, behaviour(one));
    });
  });
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  const { port } = server.address() as AddressInfo;
  return {
    origin: `http://127.0.0.1:${port}`,
    received,
    behave(as) { behaviour = as; },
    async has(count, withinMs = 30_000) {
      for (const until = Date.now() + withinMs; received.length < count; ) {
        if (Date.now() > until) throw new Error(`${received.length} messages came within ${withinMs} ms, ${count} were awaited`);
        await new Promise((resolve) => setTimeout(resolve, 20));
      }
    },
    async close() {
      server.closeAllConnections();
      await new Promise((resolve) => server.close(resolve));
    },
  };
}

function answer(response: ServerResponse, as: Behaviour): void {
  if (as === 'silence') return;
  if (as === 'reset') {
    response.destroy();
    return;
  }
  const { status, headers = {}, body = '', afterMs = 0 } = typeof as === 'number' ? { status: as } : as;
  setTimeout(() => response.writeHead(status, headers).end(body), afterMs);
}
