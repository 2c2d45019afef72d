import { mkdtempSync, readdirSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { gzipSync } from 'node:zlib';
import { wrangler } from './wrangler.ts';

/** Prints how large each worker is and how long it takes to start, and fails above what was promised. */
const MOST_KB = 150;
const MOST_STARTUP_MS = 50;

interface Profile {
  readonly nodes: readonly { readonly id: number; readonly callFrame: { readonly functionName: string } }[];
  readonly samples: readonly number[];
  readonly timeDeltas: readonly number[];
}

async function tool(args: readonly string[], folder: string): Promise<void> {
  const run = wrangler(args, folder);
  if ((await run.ended) !== 0) throw new Error(`wrangler ${args.join(' ')}:\n${run.output()}`);
}

/** Milliseconds in which the isolate ran our code or tidied up after it; what it waited, and what its host did, is not ours. */
function busyMs(profile: Profile): number {
  const idle = new Set(profile.nodes.filter(({ callFrame }) => ['(idle)', '(program)'].includes(callFrame.functionName)).map(({ id }) => id));
  const busyUs = profile.samples.reduce((sum, node, index) => sum + (idle.has(node) ? 0 : (profile.timeDeltas[index] ?? 0)), 0);
  return busyUs / 1000;
}

async function startup(bundle: string, into: string): Promise<number> {
  const profileFile = path.join(into, 'startup.cpuprofile');
  await tool(['check', 'startup', '--worker', bundle, '--outfile', profileFile], into);
  return busyMs(JSON.parse(readFileSync(profileFile, 'utf8')) as Profile);
}

/** Weighs one worker; false when it is too heavy or too slow. */
async function weigh(name: string, config: string): Promise<boolean> {
  const folder = mkdtempSync(path.join(tmpdir(), 'dawnmargin-size-'));
  try {
    const bundle = path.join(folder, 'worker.bundle');
    await tool(['deploy', '--config', config, '--dry-run', '--outdir', folder, '--outfile', bundle], folder);
    const [script] = readdirSync(folder).filter((file) => file.endsWith('.js'));
    if (script === undefined) throw new Error(`no script was written to the folder; it holds ${readdirSync(folder).join(', ')}`);
    const code = readFileSync(path.join(folder, script));
    const gzipKb = gzipSync(code, { level: 9 }).length / 1000;
    const startupMs = Math.min(await startup(bundle, folder), await startup(bundle, folder), await startup(bundle, folder));
    console.log(`Worker of the ${name}: ${(code.length / 1000).toFixed(0)} kB, ${gzipKb.toFixed(1)} kB gzip (at most ${MOST_KB}).`);
    console.log(`Start-up: ${startupMs.toFixed(1)} ms, the least disturbed of three (at most ${MOST_STARTUP_MS}).`);
    return gzipKb <= MOST_KB && startupMs <= MOST_STARTUP_MS;
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}

const fits = [await weigh('morning', 'wrangler.toml'), await weigh('desk', 'worker/desk.toml'), await weigh('operator', 'worker/operator.toml')];
if (fits.includes(false)) process.exitCode = 1;
