import { spawn } from 'node:child_process';
import { createServer } from 'node:net';
import path from 'node:path';

/** A demo beside any other: own port, own state, stopped by whoever started it. For pictures and for tests in a browser. */
const START_WITHIN_MS = 90_000;

export interface OwnDemo {
  /** Resolves with the address once the pages are served. */
  readonly origin: Promise<string>;
  stop(): Promise<void>;
}

/** A port that nobody uses at this moment. */
export function freePort(): Promise<number> {
  return new Promise((resolve, reject) => {
    const server = createServer();
    server.once('error', reject);
    server.listen(0, '127.0.0.1', () => {
      const address = server.address();
      server.close(() => (address === null || typeof address === 'string' ? reject(new Error('no port')) : resolve(address.port)));
    });
  });
}

/** A demo of our own on a state of our own; resolves with its address once it serves. */
export function startDemo(port: number, folder: string): OwnDemo {
  const child = spawn(process.execPath, [path.join(import.meta.dirname, 'start.ts')], {
    env: { ...process.env, PORT: String(port), STATE_DIR: path.join(folder, 'state') }, stdio: ['ignore', 'pipe', 'inherit'],
  });
  const origin = new Promise<string>((resolve, reject) => {
    let said = '';
    const late = setTimeout(() => reject(new Error(`the demo did not serve within ${START_WITHIN_MS / 1000} s`)), START_WITHIN_MS);
    child.stdout.on('data', (chunk: Buffer) => {
      said += chunk.toString('utf8');
      const found = /Pages at (\S+?)\/ until/.exec(said);
      if (found?.[1] === undefined) return;
      clearTimeout(late);
      resolve(found[1]);
    });
    child.once('exit', (code) => { clearTimeout(late); reject(new Error(`the demo ended with ${code}`)); });
  });
  return {
    origin,
    async stop() {
      const ended = new Promise((resolve) => child.once('exit', resolve));
      if (child.exitCode === null && child.kill('SIGTERM')) await ended;
    },
  };
}
