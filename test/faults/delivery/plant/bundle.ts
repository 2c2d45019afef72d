// The worker as it runs on one machine, built once: /local/… lets the harness begin a morning.
import { mkdtempSync, readdirSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { wrangler } from '../../../../worker/local/wrangler.ts';

export interface Bundle {
  readonly folder: string;
  readonly script: string;
}

export async function buildBundle(): Promise<Bundle> {
  const folder = mkdtempSync(path.join(tmpdir(), 'dawnmargin-bundle-'));
  const run = wrangler(['deploy', 'worker/whole.ts', '--dry-run', '--outdir', folder], folder);
  if ((await run.ended) !== 0) throw new Error(`the worker could not be built:\n${run.output()}`);
  const script = readdirSync(folder).find((name) => name.endsWith('.js'));
  if (script === undefined) throw new Error('wrangler has written no script');
  return { folder, script: path.join(folder, script) };
}
