import { randomBytes } from 'node:crypto';
import path from 'node:path';
import { readSettings } from '../settings.ts';
import { readArguments, USAGE } from './arguments.ts';
import { clientOf, type Client } from './client.ts';
import { runMorning } from './morning.ts';
import { readOwnConfig } from './own-config.ts';
import { planRun } from './plan.ts';
import { isFree, readPort } from './port.ts';
import { REHEARSAL_NOTICE, startStandIns, type StandIns } from './rehearsal.ts';
import { isJudged, issueLines, morningText } from './report.ts';
import { keepServing } from './serve.ts';
import { closeState, openState } from './state.ts';
import { dev, migrate, stop, type Running } from './wrangler.ts';

/** npm start: this morning on this machine. Ends with 0, with 1 when nothing could be judged, with 2 when it was asked for something that cannot be. */
const SETTINGS = ['PUBLIC_URL', 'OPEN_METEO_URL', 'OPEN_METEO_ENSEMBLE_URL', 'MET_NORWAY_URL', 'NWS_URL', 'OPEN_METEO_KEY', 'CONTACT', 'SMTP_URL', 'MAIL_FROM', 'HEARTBEAT_URL'] as const;

const READY_WITHIN_MS = 30_000;

class Refusal extends Error {}

async function main(): Promise<number> {
  const options = readArguments(process.argv.slice(2));
  if ('problems' in options) throw new Refusal(`${options.problems.map((problem) => `  ${problem}`).join('\n')}\n\n${USAGE}`);
  const nowMs = Date.now();
  const port = readPort(process.env['PORT']);
  if (typeof port !== 'number') throw new Refusal(`  ${port.problem}`);
  const own = readOwnConfig(nowMs);
  if (!own.ok) throw new Refusal(issueLines(own.error));
  const plan = planRun(options, own.value, nowMs);
  if (!plan.ok) throw new Refusal(issueLines(plan.error));
  const given = options.rehearse ? {} : Object.fromEntries(SETTINGS.flatMap((name) => { const value = process.env[name]; return value === undefined || value === '' ? [] : [[name, value]]; }));
  const settings = readSettings({ ...given, LOCAL: '1' });
  if (!settings.ok) throw new Refusal(issueLines(settings.error));
  if (!(await isFree(port))) throw new Refusal(`  port ${port} of 127.0.0.1 is taken: stop what is using it, or set PORT to another`);
  const kind = options.live ? 'live' : 'demo';
  const folder = options.rehearse ? 'rehearsal' : kind;
  const state = openState(path.resolve(process.env['STATE_DIR'] || `.data/${folder}`), kind);
  if ('problem' in state) throw new Refusal(`  ${state.problem}`);

  const origin = `http://127.0.0.1:${port}`;
  const localToken = randomBytes(32).toString('base64url');
  let worker: Running | null = null;
  let standIns: StandIns | null = null;
  const shutDown = async (): Promise<void> => {
    if (worker !== null) await stop(worker);
    standIns?.stop();
    closeState(state);
  };
  const ending = endOfUse();
  try {
    if (state.newOperatorToken !== null) console.log(`Operator token, shown this once: ${state.newOperatorToken}\n`);
    await migrate(state.folder);
    if (options.rehearse) standIns = await startStandIns();
    worker = dev({ folder: state.folder, port, variables: { PUBLIC_URL: origin, ...given, ...standIns?.variables, ...state.secrets, LOCAL: '1', LOCAL_TOKEN: localToken } });
    const client = clientOf(origin, localToken);
    await ready(client, worker);
    await client.begin();
    const issues = await client.seed(plan.value.seed);
    if (issues.length > 0) throw new Refusal(issueLines(issues));
    const lines = { seen: Math.max(0, ...(await client.terminalAfter(0)).map(({ line }) => line)) };
    const begunMs = Date.now();
    const days = await Promise.race([runMorning(client, plan.value), ending.then(() => null)]);
    if (days === null) return 0;
    if (options.rehearse) console.log(`${REHEARSAL_NOTICE}\n`);
    console.log(morningText(days));
    if (options.rehearse) console.log(`${REHEARSAL_NOTICE}\n`);
    console.log(`This morning took ${((Date.now() - begunMs) / 1000).toFixed(1)} s.`);
    for (const message of await client.terminalAfter(lines.seen)) {
      lines.seen = message.line;
      console.log(`Delivered to this terminal: message ${message.messageId}.`);
    }
    if (options.once) return isJudged(days) ? 0 : 1;
    console.log(`Pages at ${origin}/ until you stop this with Ctrl+C.`);
    await Promise.race([keepServing(client, lines.seen), ending, worker.ended]);
    return 0;
  } finally {
    await shutDown();
  }
}

async function ready(client: Client, worker: Running): Promise<void> {
  let isOver = false;
  void worker.ended.then(() => { isOver = true; });
  for (const startedMs = Date.now(); Date.now() - startedMs < READY_WITHIN_MS && !isOver; ) {
    if (await client.isUp()) return;
    await new Promise((resolve) => setTimeout(resolve, 50));
  }
  throw new Error(`the worker did not come up:\n${worker.output()}`);
}

/** A signal, or the end of whoever started us: npm's shell passes no signal on, so that is seen by its process going away. */
function endOfUse(): Promise<void> {
  const parent = process.ppid;
  return new Promise((resolve) => {
    for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP'] as const) process.on(signal, () => resolve());
    setInterval(() => { if (process.ppid !== parent) resolve(); }, 250).unref();
  });
}

try {
  process.exitCode = await main();
} catch (error) {
  if (error instanceof Refusal) console.error(`Dawnmargin was not started:\n${error.message}`);
  else console.error(error instanceof Error ? error.message : String(error));
  process.exitCode = error instanceof Refusal ? 2 : 3;
}
// A request that is still under way must not keep us.
process.exit();
