// A Dawnmargin in a process of its own that a test may kill and start again on the same folder.
import { spawn } from 'node:child_process';
import path from 'node:path';
import { createInterface } from 'node:readline';
import { root } from '../../../support/run-tool.ts';
import type { Bundle } from './bundle.ts';

const TOKEN = 'a-token-of-the-test-plant-0123456789abcdef';

export interface Plant {
  readonly origin: string;
  post(where: 'begin' | 'seed' | 'morning' | 'sweep', body?: unknown): Promise<void>;
  progress(): Promise<{ readonly work: { readonly fetch: number; readonly assess: number }; readonly outbox: Readonly<Record<string, number>> }>;
  /** Only where nothing is taken from the queues by itself: does all of a step's work, and says how many ms it took. */
  drive(step: 'fetch' | 'assess' | 'deliver', sideBySide?: number): Promise<number>;
  /** SIGKILL to it and to the runtime under it. */
  kill(): Promise<void>;
}

export interface PlantSetup {
  readonly bundle: Bundle;
  readonly stateDir: string;
  readonly port: number;
  readonly env?: Readonly<Record<string, string>>;
}

export async function startPlant({ bundle, stateDir, port, env = {} }: PlantSetup): Promise<Plant> {
  const child = spawn(path.join(root, 'node_modules/node/bin/node'), [path.join(import.meta.dirname, 'child.ts'), stateDir, bundle.script, String(port), TOKEN], {
    cwd: root, env: { ...process.env, ...env }, stdio: ['pipe', 'pipe', 'pipe'], detached: true,
  });
  let output = '';
  const ended = new Promise<void>((resolve) => { child.once('exit', () => resolve()); });
  await new Promise<void>((resolve, reject) => {
    const keep = (chunk: Buffer): void => {
      output = (output + chunk.toString('utf8')).slice(-5000);
      if (/^ready$/m.test(output)) resolve();
    };
    child.stdout.on('data', keep);
    child.stderr.on('data', keep);
    child.once('exit', () => reject(new Error(`the plant did not start:\n${output}`)));
  });
  const answers: ((line: string) => void)[] = [];
  createInterface({ input: child.stdout }).on('line', (line) => { if (/^(done|failed) /.test(line)) answers.shift()?.(line); });
  const origin = `http://127.0.0.1:${port}`;
  const headers = { authorization: `Bearer ${TOKEN}`, 'content-type': 'application/json' };
  return {
    origin,
    async post(where, body = {}) {
      const response = await fetch(`${origin}/local/${where}`, { method: 'POST', headers, body: JSON.stringify(body) });
      if (!response.ok) throw new Error(`${where} answered ${response.status}: ${(await response.text()).slice(0, 500)}`);
      await response.body?.cancel();
    },
    async progress() {
      const response = await fetch(`${origin}/local/progress`, { headers });
      return (await response.json()) as Awaited<ReturnType<Plant['progress']>>;
    },
    async drive(step, sideBySide = 1) {
      const answer = new Promise<string>((resolve) => { answers.push(resolve); });
      child.stdin.write(`${step} ${sideBySide}\n`);
      const line = await Promise.race([answer, ended.then(() => `failed: the plant has ended\n${output}`)]);
      const ms = /^done (\d+)$/.exec(line)?.[1];
      if (ms === undefined) throw new Error(`${step}: ${line}`);
      return Number(ms);
    },
    async kill() {
      try {
        if (child.pid !== undefined) process.kill(-child.pid, 'SIGKILL');
      } catch {
        // It is gone already.
      }
      await ended;
    },
  };
}

/** Sweeps until nothing is left to deliver. */
export async function settle(plant: Plant, withinMs: number): Promise<void> {
  for (const until = Date.now() + withinMs; ; ) {
    const { work, outbox } = await plant.progress();
    if (work.assess === 0 && (outbox['pending'] ?? 0) === 0) return;
    if (Date.now() > until) throw new Error(`still to do after ${withinMs} ms: ${JSON.stringify({ work, outbox })}`);
    await plant.post('sweep');
    await new Promise((resolve) => setTimeout(resolve, 50));
  }
}
