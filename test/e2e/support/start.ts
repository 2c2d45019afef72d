// npm start in a child process, as a user runs it, on a port and a STATE_DIR of its own.
import { spawn, type ChildProcess } from 'node:child_process';
import { globSync, mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { createServer, type AddressInfo } from 'node:net';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { root } from '../../support/run-tool.ts';

export interface Started {
  readonly child: ChildProcess;
  readonly origin: string;
  readonly output: () => string;
  readonly errors: () => string;
  readonly ended: Promise<number | null>;
  /** Resolves when the output holds the text. */
  says(text: string, withinMs?: number): Promise<void>;
}

export function newStateDir(): string {
  return mkdtempSync(path.join(tmpdir(), 'dawnmargin-e2e-'));
}

export function forget(stateDir: string): void {
  rmSync(stateDir, { recursive: true, force: true, maxRetries: 5 });
}

export async function freePort(): Promise<number> {
  const server = createServer();
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  const { port } = server.address() as AddressInfo;
  await new Promise((resolve) => server.close(resolve));
  return port;
}

export interface StartSetup {
  readonly stateDir: string;
  readonly port: number;
  readonly env?: Readonly<Record<string, string>>;
}

export function start(args: readonly string[], { stateDir, port, env = {} }: StartSetup): Started {
  const node = path.join(root, 'node_modules/node/bin/node');
  const child = spawn(node, [path.join(root, 'worker/local/start.ts'), ...args], {
    cwd: root,
    env: { ...process.env, STATE_DIR: stateDir, PORT: String(port), ...env },
    stdio: ['ignore', 'pipe', 'pipe'],
  });
  let output = '';
  let errors = '';
  child.stdout.on('data', (chunk: Buffer) => { output += chunk.toString('utf8'); });
  child.stderr.on('data', (chunk: Buffer) => { errors += chunk.toString('utf8'); });
  const ended = new Promise<number | null>((resolve) => child.once('exit', (code) => resolve(code)));
  return {
    child,
    origin: `http://127.0.0.1:${port}`,
    output: () => output,
    errors: () => errors,
    ended,
    async says(text, withinMs = 60_000) {
      for (const until = Date.now() + withinMs; !output.includes(text); ) {
        if (Date.now() > until || child.exitCode !== null) throw new Error(`"${text}" was not said. Said was:\n${output}\n${errors}`);
        await new Promise((resolve) => setTimeout(resolve, 20));
      }
    },
  };
}

/** Live processes whose command line or environment names the folder: whoever that start has left behind. */
export function processesOf(stateDir: string): number[] {
  return globSync('/proc/[0-9]*').flatMap((folder) => {
    try {
      const isDead = /^State:\s+[ZX]/m.test(readFileSync(`${folder}/status`, 'utf8'));
      const traces = readFileSync(`${folder}/cmdline`, 'utf8') + readFileSync(`${folder}/environ`, 'utf8');
      const pid = Number(path.basename(folder));
      return !isDead && pid !== process.pid && traces.includes(stateDir) ? [pid] : [];
    } catch {
      return [];
    }
  });
}

export async function nobodyLeft(stateDir: string, withinMs = 8000): Promise<void> {
  for (const until = Date.now() + withinMs; processesOf(stateDir).length > 0; ) {
    if (Date.now() > until) throw new Error(`processes ${processesOf(stateDir).join(', ')} are still there`);
    await new Promise((resolve) => setTimeout(resolve, 50));
  }
}

/** The token of the running start, for what only a test on this machine may ask. */
export function localToken(stateDir: string): string {
  const found = /^LOCAL_TOKEN="([^"]+)"$/m.exec(readFileSync(path.join(stateDir, 'worker.env'), 'utf8'))?.[1];
  if (found === undefined) throw new Error('the worker has no LOCAL_TOKEN');
  return found;
}
