// Runs a tool of node_modules on the Node that runs us (the pinned one), quiet and offline.
import { spawn } from 'node:child_process';
import { createRequire } from 'node:module';
import path from 'node:path';

const require = createRequire(import.meta.url);

export const root = path.resolve(import.meta.dirname, '../..');

/** The file that a package's command starts, so that no shell and no system Node comes between. */
export function toolEntry(packageName: string, command: string): string {
  const manifest = path.join(root, 'node_modules', packageName, 'package.json');
  const { bin } = require(manifest) as { bin: string | Record<string, string> };
  const file = typeof bin === 'string' ? bin : bin[command];
  if (file === undefined) throw new Error(`package "${packageName}" has no command "${command}"`);
  return path.join(path.dirname(manifest), file);
}

export const vitestEntry = toolEntry('vitest', 'vitest');

/** Runs a script with our own Node, its output shown as ours; resolves with the exit code. */
export function run(script: string, args: readonly string[]): Promise<number> {
  const child = spawn(process.execPath, [script, ...args], {
    cwd: root,
    stdio: 'inherit',
    env: {
      ...process.env,
      // Tools that look for `node` on the path find the pinned one.
      PATH: `${path.dirname(process.execPath)}${path.delimiter}${process.env['PATH'] ?? ''}`,
      WRANGLER_SEND_METRICS: 'false',
      WRANGLER_SEND_ERROR_REPORTS: 'false',
      WRANGLER_HIDE_BANNER: 'true',
      CLOUDFLARE_TELEMETRY_DISABLED: 'true',
      DO_NOT_TRACK: '1',
    },
  });
  return new Promise((resolve, reject) => {
    child.once('error', reject);
    child.once('exit', (code) => resolve(code ?? 1));
  });
}
