/** What is done, in which order, to bring the workers of this version into an account. Pure: the commands as words. */

export interface Step {
  /** For people, in the imperative. */
  readonly does: string;
  /** Arguments of wrangler. */
  readonly args: readonly string[];
  /** What its answer may say and still be well: it was there before. */
  readonly unless?: RegExp;
}

export const WORKERS = { morning: 'wrangler.toml', desk: 'worker/desk.toml', operator: 'worker/operator.toml' } as const;

const QUEUES = ['fetch', 'assess', 'deliver', 'dead'];
/** The id that stands in their files until an account has given its own. */
export const NO_DATABASE = '00000000-0000-0000-0000-000000000000';

/** Weighs them; needs no account. */
export function rehearsalSteps(): Step[] {
  return Object.entries(WORKERS).map(([name, config]) => ({ does: `build the worker of the ${name}, without sending it`, args: ['deploy', '--config', config, '--dry-run'] }));
}

/**
 * The tables come before the code that reads them, and the desks before the worker that is bound to them. Every step may be
 * done again: what is there already is left as it is.
 */
export function deploySteps(secretsFile: string): Step[] {
  return [
    ...QUEUES.map((name) => ({ does: `make the queue "${name}"`, args: ['queues', 'create', name], unless: /already (exists|taken)|is already/i })),
    { does: 'bring the tables up to date', args: ['d1', 'migrations', 'apply', 'DB', '--remote', '--config', WORKERS.morning] },
    { does: 'send the desk', args: ['deploy', '--config', WORKERS.desk] },
    { does: 'give the desk its secrets', args: ['secret', 'bulk', secretsFile, '--config', WORKERS.desk] },
    { does: 'send the worker of the operator', args: ['deploy', '--config', WORKERS.operator] },
    { does: 'give the worker of the operator its secrets', args: ['secret', 'bulk', secretsFile, '--config', WORKERS.operator] },
    { does: 'send the worker of the morning', args: ['deploy', '--config', WORKERS.morning] },
    { does: 'give the worker of the morning its secrets', args: ['secret', 'bulk', secretsFile, '--config', WORKERS.morning] },
  ];
}

export const makeDatabase: Step = { does: 'make the database', args: ['d1', 'create', 'dawnmargin'], unless: /already exists/i };
export const listDatabases: Step = { does: 'read the id of the database', args: ['d1', 'list', '--json'] };

/** The id of the database "dawnmargin" in what `d1 list --json` prints, which may begin with a line or two of talk. */
export function databaseIdIn(output: string): string | null {
  const list = /\[[\s\S]*\]/.exec(output)?.[0];
  if (list === undefined) return null;
  const found = (JSON.parse(list) as readonly { readonly name?: unknown; readonly uuid?: unknown }[]).find(({ name }) => name === 'dawnmargin');
  return typeof found?.uuid === 'string' ? found.uuid : null;
}
