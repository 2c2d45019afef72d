// Requests at random against every door that takes one, in this process: right bodies with places in them spoilt, their text
// cut, doubled or mixed up, and sent with wrong methods and types. None may end in a fault of ours, and what is refused may
// leave no row behind; SQLite's own count of changed rows says so.
import { base64, derivedKey, hmacSha256 } from '../../worker/secrets.ts';
import { FastPostHouse, LINK_KEY, OPERATOR_TOKEN } from './fast-post-house.ts';
import { launchFeature } from '../worker/support/stand-ins.ts';
import { seeded } from './seeded.ts';

export interface FuzzReport {
  readonly requests: number;
  /** How many answers had each status. */
  readonly statuses: Readonly<Record<string, number>>;
  /** What went against the rules, with the seed of its case. */
  readonly violations: readonly string[];
}

const NOW = '2027-05-13T20:00:00Z';
const HOUSEFUL = 1000;

const JUNK: readonly unknown[] = [
  null, '', ' ', -1, 0, -0, 1e308, 5e-324, 2 ** 53, true, false, [], {}, [[]], [null], { a: {} }, 'x'.repeat(300), '\u202e', '\u0000', '\ud800', 'a\r\nBcc: x@y.org', '<script>', "' OR 1=1 --", '"', '\\', '../../etc/passwd',
  'constructor', 'toString', '1e999', 'NaN', '25', 'true', '2027-02-30', '9999-12-31', '2099-12-31', '0001-01-01', '24:00', 'Europe/Wein', 'https://127.0.0.1/', 'a@b', 'ana@mail.example.org', 'north', 'hill', 'https://hook.example.com/x',
];
const KEYS = ['__proto__', 'constructor', 'confirmed', 'id', 'role', 'sites', 'channels', 'x', ''] as const;

interface Door {
  readonly method: string;
  readonly path: string;
  readonly right: unknown;
  /** What stands besides in its requests, by what was answered to a GET of `reads`. */
  readonly headers?: (body: string, etag: string) => Readonly<Record<string, string>> | Promise<Readonly<Record<string, string>>>;
  readonly reads?: string;
}

const preferences = { sites: [{ id: 'north', sheet: 'hill' }], wing: { class: 'EN B', allUpMassKg: 95 }, deliver: { at: '06:00', timeZone: 'Europe/Vienna', days: ['mon', 'sat'] }, units: { speed: 'kt', height: 'ft' }, pauseUntil: null, language: 'en' };
const browser = { endpoint: 'https://fcm.googleapis.com/fcm/send/1', keys: { p256dh: 'BCVxsr7N_eNgVRqvHtD0zTZsEc6-VV-JvLexhqUzORcxaOzi6-AYWXvTBHm4bjyPjs7Vd8pZGH6SRpkNtoIAiw4', auth: 'BTBZMqHH6r4Tts7J_aSIgg' } };
const bearer = { authorization: `Bearer ${OPERATOR_TOKEN}` };
const guarded = (path: string) => ({ reads: path, headers: (_: string, etag: string) => ({ ...bearer, 'if-match': etag }) });

async function signed(body: string): Promise<Readonly<Record<string, string>>> {
  const at = String(Date.parse(NOW) / 1000);
  const key = await derivedKey(LINK_KEY, { purpose: 'bounce', id: 'mail', version: 1 });
  return { 'webhook-id': 'evt', 'webhook-timestamp': at, 'webhook-signature': `v1,${base64(await hmacSha256(key, new TextEncoder().encode(`evt.${at}.${body}`)))}` };
}
const hour = { validAt: '2027-05-14T10:00:00Z', gridElevationM: 900, wind10m: { speedMps: 3, fromDeg: 250 }, gustMps: 5 };

/** What people hand in. */
export const BODIES: readonly Door[] = [
  { method: 'POST', path: '/api/v1/subscriptions', right: { ...preferences, channels: [{ kind: 'mail', address: 'ana@mail.example.org', quiet: { from: '22:00', to: '06:00' } }, { kind: 'webhook', url: 'https://hook.example.com/x' }] } },
  { method: 'POST', path: '/api/v1/subscriptions', right: { ...preferences, channels: [{ kind: 'push', ...browser }] } },
  { method: 'POST', path: '/api/v1/subscriptions/confirm-push', right: { nonce: 'A'.repeat(32) } },
  { method: 'POST', path: '/api/v1/push/renew', right: { old: browser, fresh: { ...browser, expirationTime: null }, token: 'x' } },
  { method: 'PUT', path: 'manage', right: preferences },
  { method: 'POST', path: 'manage', right: { action: 'pause', until: '2027-06-01' } },
  { method: 'POST', path: '/api/v1/bounces', right: { messageId: `<msg_${'a'.repeat(32)}@dawnmargin.example.org>`, type: 'hard' }, headers: signed },
  { method: 'POST', path: '/api/v1/operator/forget', right: { address: 'nobody@mail.example.org', forGood: true }, headers: () => bearer },
  { method: 'POST', path: '/api/v1/assess', right: { site: launchFeature('north'), wing: { class: 'EN B' }, sheet: { id: 'hill', limits: { maxMeanMps: 6 } }, hours: [hour], declares: ['wind10m'] } },
];

/** What an operator hands in. */
export const CONFIGS: readonly Door[] = [
  { method: 'PUT', path: '/api/v1/operator/sites', right: { type: 'FeatureCollection', features: ['north', 'south'].map(launchFeature) }, ...guarded('/api/v1/operator/sites') },
  { method: 'PUT', path: '/api/v1/operator/sheets/hill', right: { id: 'hill', name: 'Hill', kind: 'launch', for: 'all', limits: { maxMeanMps: 6, maxGustMps: 8, minForwardMps: 2 }, closeBands: { gust: 1 }, basis: { maxMeanMps: 'ours' } }, ...guarded('/api/v1/operator/sheets/hill') },
  { method: 'PUT', path: '/api/v1/operator/published', right: [{ site: 'north', wing: 'EN A', sheet: 'hill' }, { site: 'south', wing: 'EN B', sheet: 'easy' }], headers: () => bearer },
];

/** A house, its doors, the link of somebody who is subscribed, and the ETags that were read. */
interface Tried {
  readonly house: FastPostHouse;
  readonly doors: ReturnType<FastPostHouse['doors']>;
  readonly etags: Map<string, string>;
  manage: string;
}

async function freshHouse(): Promise<Tried> {
  const house = await FastPostHouse.open({ nowIso: NOW });
  return { house, doors: house.doors(), etags: new Map(), manage: await subscribed(house) };
}

/** Tries so many, and says what it saw. */
export async function fuzz(doors: readonly Door[], { cases, seed }: { readonly cases: number; readonly seed: number }): Promise<FuzzReport> {
  const statuses: Record<string, number> = {};
  const violations: string[] = [];
  let tried = await freshHouse();
  for (let index = 0; index < cases; index += 1) {
    // A house that has taken thousands of sign-ups is slow to look through, and no other house.
    if (index % HOUSEFUL === HOUSEFUL - 1) {
      violations.push(...brokenRows(tried.house));
      tried.house.d1.close();
      tried = await freshHouse();
    }
    const { status, wrong } = await attempt(tried, doors, seeded(seed + index));
    statuses[status] = (statuses[status] ?? 0) + 1;
    violations.push(...wrong.map((what) => `case ${seed + index}: ${what}`));
  }
  violations.push(...brokenRows(tried.house));
  tried.house.d1.close();
  return { requests: cases, statuses, violations };
}

async function attempt(tried: Tried, all: readonly Door[], random: () => number): Promise<{ readonly status: string; readonly wrong: readonly string[] }> {
  const { house, doors, etags } = tried;
  const door = pick(random, all);
  const path = door.path === 'manage' ? `/api/v1${tried.manage}` : door.path;
  const method = random() < 0.02 ? pick(random, ['PATCH', 'DELETE', 'PUT', 'POST', 'OPTIONS']) : door.method;
  const type = random() < 0.03 ? pick(random, ['text/plain', '', 'application/json; charset=latin1', 'multipart/form-data; boundary=x', 'application/jsonx']) : 'application/json';
  const body = textOf(random, door.right);
  const { reads } = door;
  if (reads !== undefined && !etags.has(reads)) etags.set(reads, (await doors.request(reads, { headers: bearer })).headers.get('etag') ?? '');
  const headers = { 'content-type': type, ...(await door.headers?.(body, etags.get(reads ?? '') ?? '')) };
  const changes = (): number => house.d1.ask<{ n: number }>('SELECT total_changes() AS n')[0]?.n ?? NaN;
  const before = changes();
  const said = (what: string): string => `${method} ${door.path} ${what}: ${body.slice(0, 300)}`;
  let response: Response;
  let answer: string;
  try {
    response = await doors.request(path, { method, headers, body });
    answer = await response.text();
  } catch (error) {
    return { status: 'threw', wrong: [said(`threw ${error instanceof Error ? error.message : String(error)}`)] };
  }
  const { status } = response;
  if (status === 200 && reads !== undefined) etags.delete(reads);
  if (status === 200 && door.path === 'manage' && (await doors.request(path)).status !== 200) tried.manage = await subscribed(house);
  return {
    status: String(status),
    wrong: [
      ...(status >= 500 ? [said(`answered ${status}`)] : []),
      ...(status >= 400 && changes() !== before ? [said(`answered ${status} and changed ${changes() - before} rows`)] : []),
      ...(status === 400 && !/"problems":\[\{"path":"\$/.test(answer) ? [said('is refused without a reason')] : []),
    ],
  };
}

/** Rows that only half a request could have left. */
function brokenRows(house: FastPostHouse): string[] {
  const checks: readonly (readonly [string, string])[] = [
    ['a subscription without a site', 'SELECT id FROM subscription WHERE id NOT IN (SELECT subscription_id FROM subscription_site)'],
    ['a subscription without a channel', 'SELECT id FROM subscription WHERE id NOT IN (SELECT subscription_id FROM channel)'],
    ['a channel of nobody', 'SELECT id FROM channel WHERE subscription_id NOT IN (SELECT id FROM subscription)'],
    ['a site of nobody', 'SELECT site_id AS id FROM subscription_site WHERE subscription_id NOT IN (SELECT id FROM subscription)'],
    ['a wing that is missing', 'SELECT wing_key AS id FROM subscription_site WHERE wing_key NOT IN (SELECT key FROM wing)'],
    ['a sheet that is missing', 'SELECT sheet_id AS id FROM subscription_site WHERE sheet_id NOT IN (SELECT id FROM sheet)'],
    ['a version without its difference', 'SELECT id FROM sheet AS s WHERE version > 1 AND NOT EXISTS (SELECT 1 FROM sheet_change AS c WHERE c.sheet_id = s.id AND c.version = s.version)'],
  ];
  return checks.flatMap(([what, sql]) => house.d1.ask<{ id: string }>(sql).map(({ id }) => `${what}: ${id}`));
}

async function subscribed(house: FastPostHouse): Promise<string> {
  const address = `kept${house.letters.length}@mail.example.org`;
  await house.ask('POST', '/api/v1/subscriptions', { ...preferences, channels: [{ kind: 'mail', address }] });
  await house.answerAll();
  return (await house.form(house.pathIn('confirm', address), { confirm: '1' })).headers.get('location') ?? '';
}

function pick<T>(random: () => number, from: readonly T[]): T {
  const value = from[Math.floor(random() * from.length)];
  if (value === undefined) throw new Error('nothing to pick from');
  return value;
}

function textOf(random: () => number, right: unknown): string {
  const value = structuredClone(right);
  const edits = random() < 0.1 ? 0 : 1 + Math.floor(random() * 4);
  for (let edit = 0; edit < edits; edit += 1) spoil(random, value);
  const text = JSON.stringify(value) ?? '';
  const how = random();
  const at = Math.floor(random() * text.length);
  if (how < 0.05) return text.slice(0, at);
  if (how < 0.08) return text.slice(0, at) + pick(random, ['"', '{', '}', ',', '\u0000', '\\u0000', '1e999', '\uFEFF', '//', 'é', ']']) + text.slice(at);
  if (how < 0.1) return text + text;
  if (how < 0.11) return '['.repeat(5000);
  if (how < 0.12) return text.replace(/\{"(\w+)":/, '{"$1":0,"$1":');
  if (how < 0.125) return `"${'x'.repeat(300_000)}"`;
  return text;
}

/** One place of a value replaced, taken out, doubled or given a new key. */
function spoil(random: () => number, value: unknown): void {
  const places: (readonly [Record<string, unknown>, string])[] = [];
  const walk = (node: unknown): void => {
    if (typeof node !== 'object' || node === null) return;
    for (const key of Object.keys(node)) {
      places.push([node as Record<string, unknown>, key]);
      walk((node as Record<string, unknown>)[key]);
    }
  };
  walk(value);
  if (places.length === 0) return;
  const [node, key] = pick(random, places);
  const how = random();
  const junk = random() < 0.5 ? structuredClone(pick(random, JUNK)) : Math.floor(random() * 1000 - 300) / pick(random, [1, 3, 100]);
  if (how < 0.2) delete node[key];
  else if (how < 0.35) Object.defineProperty(node, pick(random, KEYS), { value: junk, enumerable: true, configurable: true, writable: true });
  else if (how < 0.45 && Array.isArray(node)) node.push(...Array.from({ length: 1 + Math.floor(random() * 60) }, () => structuredClone(node[0])));
  else node[key] = junk;
}
