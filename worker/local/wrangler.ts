import { spawn, type ChildProcess } from 'node:child_process';
import { writeFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import path from 'node:path';
import { pathToFileURL } from 'node:url';

/** The local platform: wrangler on the Node that runs us, offline and quiet, in a process group of its own. */
const require = createRequire(import.meta.url);
export const root = path.resolve(import.meta.dirname, '../..');

function quiet(folder: string): NodeJS.ProcessEnv {
  return {
    ...process.env,
    PATH: `${path.dirname(process.execPath)}${path.delimiter}${process.env['PATH'] ?? ''}`,
    WRANGLER_SEND_METRICS: 'false',
    WRANGLER_SEND_ERROR_REPORTS: 'false',
    WRANGLER_HIDE_BANNER: 'true',
    WRANGLER_LOG_PATH: path.join(folder, 'logs'),
    CLOUDFLARE_CF_FETCH_ENABLED: 'false',
    CLOUDFLARE_TELEMETRY_DISABLED: 'true',
    DO_NOT_TRACK: '1',
    NO_COLOR: '1',
    CI: '1',
  };
}

export interface Running {
  readonly process: ChildProcess;
  /** What it has written so far, for when something goes wrong. */
  readonly output: () => string;
  /** Resolves when it has ended, with its exit code. */
  readonly ended: Promise<number>;
}

/** cli.js, not the package's command: that would put one more process between us and it. */
export function wrangler(args: readonly string[], folder: string): Running {
  return guarded([path.join(path.dirname(require.resolve('wrangler/package.json')), 'wrangler-dist/cli.js'), ...args], folder);
}

/** A script of ours or wrangler's in a process group of its own, which ends when we do. */
function guarded(scriptAndArguments: readonly string[], folder: string): Running {
  const guard = pathToFileURL(path.join(import.meta.dirname, 'guard.ts')).href;
  const child = spawn(process.execPath, ['--no-warnings', '--import', guard, ...scriptAndArguments], {
    cwd: root,
    env: { ...quiet(folder), DAWNMARGIN_GUARDED_BY: String(process.pid) },
    stdio: ['ignore', 'pipe', 'pipe'],
    detached: true,
  });
  let output = '';
  const keep = (chunk: Buffer): void => { output = (output + chunk.toString('utf8')).slice(-20_000); };
  child.stdout.on('data', keep);
  child.stderr.on('data', keep);
  const ended = new Promise<number>((resolve) => {
    child.once('error', () => resolve(1));
    child.once('exit', (code) => resolve(code ?? 1));
  });
  return { process: child, output: () => output, ended };
}

/** Brings the tables of the local database up to date. Throws with the runtime's own words when that fails. */
export async function migrate(folder: string): Promise<void> {
  const run = guarded([path.join(import.meta.dirname, 'tables.ts'), folder], folder);
  if ((await run.ended) !== 0) throw new Error(`the local database could not be set up:\n${run.output()}`);
}

export interface DevOptions {
  readonly folder: string;
  readonly port: number;
  readonly variables: Readonly<Record<string, string>>;
}

/** Starts the one worker that is both. Variables travel in a file that only its owner can read, never on a command line. */
export function dev({ folder, port, variables }: DevOptions): Running {
  const file = path.join(folder, 'worker.env');
  const lines = Object.entries(variables).map(([name, value]) => `${name}=${JSON.stringify(value)}`);
  writeFileSync(file, `${lines.join('\n')}\n`, { mode: 0o600 });
  return wrangler(
    ['dev', 'worker/whole.ts', '--local', '--ip', '127.0.0.1', '--port', String(port), '--inspector-port', '0', '--persist-to', folder, '--env-file', file,
      '--log-level', 'warn', '--show-interactive-dev-session', 'false'],
    folder,
  );
}

/** Ends it and everything it has started; what does not listen is killed. */
export async function stop(run: Running): Promise<void> {
  const { pid } = run.process;
  if (pid === undefined || run.process.exitCode !== null) return;
  // Asked alone, wrangler ends its children itself and leaves nothing behind, not even an entry in the process table.
  run.process.kill('SIGTERM');
  const timer = setTimeout(() => signalGroup(pid, 'SIGKILL'), 3000);
  await run.ended;
  clearTimeout(timer);
  // Its children are in its group and may outlive it by a moment.
  signalGroup(pid, 'SIGKILL');
}

function signalGroup(pid: number, signal: NodeJS.Signals): void {
  try {
    process.kill(-pid, signal);
  } catch {
    // Nobody is left in it.
  }
}
