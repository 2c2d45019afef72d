import { spawn, type ChildProcess } from 'node:child_process';
import { existsSync } from 'node:fs';
import path from 'node:path';
import { root } from './wrangler.ts';

/** Stand-ins of the forecast services, as a process of their own on this machine. They end with whoever started them. */
export interface StandIns {
  /** What the worker is told, in place of whatever the environment says: nothing in a rehearsal leaves this machine. */
  readonly variables: Readonly<Record<string, string>>;
  readonly stop: () => void;
}

const SERVER = path.join(root, 'test/support/forecast-server/main.ts');
const READY_WITHIN_MS = 20_000;

export const REHEARSAL_NOTICE = 'REHEARSAL. The weather is invented by stand-ins of the forecast services on this machine: it says nothing about any real place or day.';

/** Starts them on a free port and waits until they say where they are. */
export async function startStandIns(): Promise<StandIns> {
  if (!existsSync(SERVER)) throw new Error(`--rehearse needs ${path.relative(root, SERVER)}, which is not there: it comes with the repository`);
  const child = spawn(process.execPath, ['--no-warnings', SERVER, '--port', '0', '--until-stdin-ends'], { cwd: root, stdio: ['pipe', 'pipe', 'pipe'] });
  const origin = await originOf(child);
  return {
    variables: {
      REHEARSAL: '1', OPEN_METEO_URL: origin, OPEN_METEO_ENSEMBLE_URL: origin, MET_NORWAY_URL: origin, NWS_URL: origin, CONTACT: 'rehearsal@dawnmargin.invalid',
    },
    stop: () => { child.kill('SIGTERM'); },
  };
}

function originOf(child: ChildProcess): Promise<string> {
  return new Promise((resolve, reject) => {
    let output = '';
    const giveUp = (): void => reject(new Error(`the stand-ins of the forecast services did not come up:\n${output}`));
    const timer = setTimeout(giveUp, READY_WITHIN_MS);
    const read = (chunk: Buffer): void => {
      output += chunk.toString('utf8');
      const [origin] = /http:\/\/127\.0\.0\.1:\d+/.exec(output) ?? [];
      if (origin === undefined) return;
      clearTimeout(timer);
      resolve(origin);
    };
    child.stdout?.on('data', read);
    child.stderr?.on('data', read);
    child.once('exit', giveUp);
  });
}
