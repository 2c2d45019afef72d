// The pages on a loopback port, over HTTP as a browser meets them: a router for what the worker writes, files for the rest.
import { createServer, type Server } from 'node:http';
import { existsSync, readFileSync } from 'node:fs';
import path from 'node:path';
import type { Hono } from 'hono';

const assets = path.resolve(import.meta.dirname, '../../../worker/assets');
const TYPES: Readonly<Record<string, string>> = { '.css': 'text/css', '.js': 'text/javascript', '.svg': 'image/svg+xml', '.webmanifest': 'application/manifest+json', '.html': 'text/html', '.png': 'image/png' };

export interface Served {
  readonly origin: string;
  close(): Promise<void>;
}

/** Headers of a browser that pages go by. */
const PASSED = ['content-type', 'accept', 'cookie', 'origin', 'authorization', 'sec-fetch-site', 'if-match', 'cf-connecting-ip'] as const;

/** `after`: what is to happen once an answer was given. */
export async function serve(app: Pick<Hono, 'request'>, { port = 0, after }: { readonly port?: number; readonly after?: () => Promise<void> } = {}): Promise<Served> {
  const server: Server = createServer((request, response) => {
    void (async () => {
      const url = new URL(request.url ?? '/', 'http://127.0.0.1');
      const file = path.join(assets, path.normalize(url.pathname));
      if (path.extname(file) in TYPES && file.startsWith(assets) && existsSync(file)) {
        response.writeHead(200, { 'content-type': TYPES[path.extname(file)] ?? 'text/plain' }).end(readFileSync(file));
        return;
      }
      const chunks: Buffer[] = [];
      for await (const chunk of request) chunks.push(chunk as Buffer);
      const body = chunks.length === 0 ? null : new Uint8Array(Buffer.concat(chunks));
      const headers = Object.fromEntries(PASSED.flatMap((name) => { const value = request.headers[name]; return typeof value === 'string' ? [[name, value]] : []; }));
      const answer = await app.request(url.pathname + url.search, { method: request.method ?? 'GET', headers, body });
      response.writeHead(answer.status, Object.fromEntries(answer.headers)).end(await answer.text());
      await after?.();
    })();
  });
  await new Promise<void>((resolve) => server.listen(port, '127.0.0.1', resolve));
  const address = server.address();
  if (address === null || typeof address === 'string') throw new Error('the server has no port');
  return { origin: `http://127.0.0.1:${address.port}`, close: () => new Promise((resolve) => { server.closeAllConnections(); server.close(() => resolve()); }) };
}
