import { createHash, generateKeyPairSync, randomBytes } from 'node:crypto';
import { existsSync, mkdirSync, readFileSync, renameSync, rmSync, writeFileSync } from 'node:fs';
import path from 'node:path';

/** What a local Dawnmargin keeps on disk: its database, its secrets, and a note of who is using them. Demo and live never share a folder. */
export interface State {
  readonly folder: string;
  readonly secrets: Secrets;
  /** Printed once, when it is made; only its hash is kept. */
  readonly newOperatorToken: string | null;
}

interface Secrets {
  readonly LINK_KEY: string;
  readonly VAPID_PUBLIC_KEY: string;
  readonly VAPID_PRIVATE_KEY: string;
  readonly OPERATOR_TOKEN_SHA256: string;
  /** While keys are changed; empty where one is given up, so that it is taken away from the workers too. */
  readonly VAPID_PUBLIC_KEY_BEFORE?: string;
  readonly VAPID_PRIVATE_KEY_BEFORE?: string;
  readonly LINK_KEY_BEFORE?: string;
}

export type StateProblem = { readonly problem: string };

export function openState(folder: string, kind: 'demo' | 'live'): State | StateProblem {
  const holder = holderOf(folder);
  if (holder !== null) return { problem: `STATE_DIR "${folder}" is in use by process ${holder}: stop that one, or choose another STATE_DIR` };
  const kindFile = path.join(folder, 'kind');
  const found = existsSync(kindFile) ? readFileSync(kindFile, 'utf8').trim() : kind;
  if (found !== kind) return { problem: `STATE_DIR "${folder}" belongs to a ${found} run: demo and live never share one` };
  try {
    mkdirSync(folder, { recursive: true });
    writeFileSync(kindFile, `${kind}\n`);
    writeFileSync(lockFile(folder), `${process.pid}\n`);
  } catch (error) {
    return { problem: `STATE_DIR "${folder}" cannot be written: ${error instanceof Error ? error.message : String(error)}` };
  }
  return { folder, ...secretsIn(folder) };
}

export function closeState(state: State): void {
  rmSync(lockFile(state.folder), { force: true });
}

function lockFile(folder: string): string {
  return path.join(folder, 'in-use-by');
}

/** The process that uses the folder, if it is still there. */
function holderOf(folder: string): number | null {
  if (!existsSync(lockFile(folder))) return null;
  const pid = Number(readFileSync(lockFile(folder), 'utf8'));
  return Number.isInteger(pid) && pid > 0 && pid !== process.pid && isAlive(pid) ? pid : null;
}

export function isAlive(pid: number): boolean {
  try {
    process.kill(pid, 0);
    return true;
  } catch {
    return false;
  }
}

export function secretsIn(folder: string): { readonly secrets: Secrets; readonly newOperatorToken: string | null } {
  const file = path.join(folder, 'secrets.json');
  if (existsSync(file)) return { secrets: JSON.parse(readFileSync(file, 'utf8')) as Secrets, newOperatorToken: null };
  const token = randomBytes(32).toString('base64url');
  const secrets = { ...newLinkKey(), ...newPushKey(), OPERATOR_TOKEN_SHA256: createHash('sha256').update(token).digest('hex') };
  keep(secrets, file);
  return { secrets, newOperatorToken: token };
}

const BEFORE = ['VAPID_PUBLIC_KEY_BEFORE', 'VAPID_PRIVATE_KEY_BEFORE', 'LINK_KEY_BEFORE'] as const;

/**
 * Other keys from now on; those before stay beside them, for whatever was made under them, until they are given up. Only two
 * live at once: null, or what stands against it.
 */
export function changeKeys(folder: string, change: 'push' | 'link' | 'give-up'): string | null {
  const { secrets } = secretsIn(folder);
  const { LINK_KEY, VAPID_PUBLIC_KEY, VAPID_PRIVATE_KEY } = secrets;
  const standing = BEFORE.filter((name) => (secrets[name] ?? '') !== '');
  if (change !== 'give-up' && standing.length > 0) return `${standing.join(', ')}: a change of keys is under way; --give-up-keys ends it`;
  const changed = change === 'push' ? { ...newPushKey(), VAPID_PUBLIC_KEY_BEFORE: VAPID_PUBLIC_KEY, VAPID_PRIVATE_KEY_BEFORE: VAPID_PRIVATE_KEY }
    : change === 'link' ? { ...newLinkKey(), LINK_KEY_BEFORE: LINK_KEY } : Object.fromEntries(standing.map((name) => [name, '']));
  keep({ ...secrets, ...changed }, path.join(folder, 'secrets.json'));
  return null;
}

function newLinkKey(): Pick<Secrets, 'LINK_KEY'> {
  return { LINK_KEY: randomBytes(32).toString('base64url') };
}

function newPushKey(): Pick<Secrets, 'VAPID_PUBLIC_KEY' | 'VAPID_PRIVATE_KEY'> {
  const keys = generateKeyPairSync('ec', { namedCurve: 'P-256' }).privateKey.export({ format: 'jwk' });
  const point = Buffer.concat([Buffer.from([4]), Buffer.from(keys.x ?? '', 'base64url'), Buffer.from(keys.y ?? '', 'base64url')]);
  return { VAPID_PUBLIC_KEY: point.toString('base64url'), VAPID_PRIVATE_KEY: keys.d ?? '' };
}

/** Whole or not at all: a half-written file of secrets would end every link ever printed. */
function keep(secrets: Secrets, file: string): void {
  writeFileSync(`${file}.new`, `${JSON.stringify(secrets, null, 2)}\n`, { mode: 0o600 });
  renameSync(`${file}.new`, file);
}
