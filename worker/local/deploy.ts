// npm run deploy [-- --for-real [--new-push-key | --new-link-key | --give-up-keys]]: the three workers into the account that wrangler is logged in to. Without --for-real nothing is
// sent: both are built, and what would be done is said. Exit 2 when a setting is missing, 1 when a step fails.
import { mkdirSync, readFileSync, writeFileSync } from 'node:fs';
import path from 'node:path';
import { parseArgs } from 'node:util';
import { readSettings } from '../settings.ts';
import { databaseIdIn, deploySteps, listDatabases, makeDatabase, NO_DATABASE, rehearsalSteps, WORKERS, type Step } from './deploy/steps.ts';
import { issueLines } from './report.ts';
import { changeKeys, secretsIn } from './state.ts';
import { root, wrangler } from './wrangler.ts';

const SETTINGS = ['PUBLIC_URL', 'CONTACT', 'SMTP_URL', 'MAIL_FROM', 'HEARTBEAT_URL', 'OPEN_METEO_KEY', 'CALLS_AN_INVOCATION'] as const;
const NEEDED = ['PUBLIC_URL', 'CONTACT'] as const;

class Stop extends Error {
  readonly code: number;
  constructor(message: string, code: number) {
    super(message);
    this.code = code;
  }
}

async function take({ does, args, unless }: Step): Promise<string> {
  const run = wrangler(args, folder);
  const code = await run.ended;
  const isThere = code !== 0 && unless?.test(run.output()) === true;
  if (code !== 0 && !isThere) throw new Stop(`could not ${does}:\n${run.output()}`, 1);
  console.log(`${isThere ? 'There already' : 'Done'}: ${does}.`);
  return run.output();
}

/** The account's database, its id written into the configurations, where it stays. */
async function database(): Promise<void> {
  const files = Object.values(WORKERS).map((name) => path.join(root, name));
  if (files.every((file) => !readFileSync(file, 'utf8').includes(NO_DATABASE))) return;
  await take(makeDatabase);
  const id = databaseIdIn(await take(listDatabases));
  if (id === null) throw new Stop('the account lists no database of the name dawnmargin', 1);
  for (const file of files) writeFileSync(file, readFileSync(file, 'utf8').replaceAll(NO_DATABASE, id));
  console.log(`The id of the database, ${id}, now stands in ${Object.values(WORKERS).join(' and ')}: keep that change.`);
}

const folder = path.join(root, '.data/deploy');
const { values } = parseArgs({ options: { 'for-real': { type: 'boolean', default: false }, 'new-push-key': { type: 'boolean', default: false }, 'new-link-key': { type: 'boolean', default: false }, 'give-up-keys': { type: 'boolean', default: false } } });

try {
  mkdirSync(folder, { recursive: true });
  const given = Object.fromEntries(SETTINGS.flatMap((name) => (process.env[name] ? [[name, process.env[name]]] : [])));
  const settings = readSettings(given);
  if (!settings.ok) throw new Stop(issueLines(settings.error), 2);
  const missing = NEEDED.filter((name) => given[name] === undefined);
  if (values['for-real'] && missing.length > 0) throw new Stop(`  ${missing.join(' and ')}: missing; the address people reach this at, and how a weather service reaches you`, 2);
  const secretsFile = path.join(folder, 'settings.json');
  if (values['for-real']) {
    const { newOperatorToken } = secretsIn(folder);
    for (const change of [...(values['give-up-keys'] ? ['give-up' as const] : []), ...(values['new-push-key'] ? ['push' as const] : []), ...(values['new-link-key'] ? ['link' as const] : [])]) {
      const problem = changeKeys(folder, change);
      if (problem !== null) throw new Stop(`  ${problem}`, 2);
    }
    const { secrets } = secretsIn(folder);
    writeFileSync(secretsFile, JSON.stringify({ ...secrets, ...given }, (_, value: unknown) => (value === '' ? null : value), 2), { mode: 0o600 });
    if (newOperatorToken !== null) console.log(`Operator token, shown this once: ${newOperatorToken}\n`);
    await database();
    for (const step of deploySteps(secretsFile)) await take(step);
    console.log(`\nNow open ${given['PUBLIC_URL'] ?? ''}/healthz: "needs a look" until the first tick, a minute from now.`);
  } else {
    for (const step of rehearsalSteps()) await take(step);
    const steps = [makeDatabase, listDatabases, ...deploySteps('.data/deploy/settings.json')];
    console.log(`\nNothing was sent. With --for-real this is done:\n${steps.map(({ does, args }) => `  ${does}\n    wrangler ${args.join(' ')}`).join('\n')}`);
    if (missing.length > 0) console.log(`\nIt would stop at once: ${missing.join(' and ')} not set.`);
  }
} catch (error) {
  if (!(error instanceof Stop)) throw error;
  console.error(`Not deployed:\n${error.message}`);
  process.exitCode = error.code;
}
