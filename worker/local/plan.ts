import { existsSync, readFileSync } from 'node:fs';
import path from 'node:path';
import { parseJsonStrict } from '../../lib/config/json.ts';
import { publishedPairs } from '../../lib/config/published.ts';
import { parseSheet } from '../../lib/config/sheet.ts';
import { parseSites } from '../../lib/config/sites.ts';
import { WING_CLASSES } from '../../lib/config/wing.ts';
import type { LimitSheet } from '../../lib/margin/sheet.ts';
import { failure, success, type Issue, type Result } from '../../lib/result.ts';
import type { Site } from '../../lib/site.ts';
import type { Seed, SeedSubscription } from '../routes/seed.ts';
import type { Pair } from '../store/published.ts';
import type { StartOptions } from './arguments.ts';
import { byId, type OwnConfig } from './own-config.ts';
import { root } from './wrangler.ts';

/** What a run is about, worked out before anything is started or stored. */
export interface Plan {
  readonly sites: readonly Site[];
  /** One a site: what is printed. */
  readonly pairs: readonly Pair[];
  readonly seed: Seed;
}

/** A place for each of the services. */
const REHEARSAL_SITES = path.join(root, 'config/rehearsal.json');

const BOUNDS = { maxBytes: 16 * 1024 * 1024, maxDepth: 12 };

export function planRun(options: StartOptions, own: OwnConfig, nowMs: number): Result<Plan, Issue[]> {
  const chosen = chooseSites(options, own, nowMs);
  const sheet = chooseSheet(options.sheet, own);
  const wing = chooseWing(options.wing);
  const issues = [chosen, sheet, wing].flatMap((result) => (result.ok ? [] : result.error));
  if (!chosen.ok || !sheet.ok || !wing.ok) return failure(issues);
  const { sites, features } = chosen.value;
  const kind = sheet.value?.sheet.kind;
  if (kind !== undefined && !sites.some((site) => site.kind === kind)) {
    return failure([{ path: '--sheet', value: options.sheet ?? '', problem: `this sheet is for a ${kind}, and none of the sites is one`, allowed: `a sheet for a ${sites[0]?.kind ?? 'launch'}` }]);
  }
  const pairsOf = (site: Site): Pair[] =>
    publishedPairs(own.config.published, site).map((pair) => ({
      siteId: site.id,
      wingKey: wing.value ?? pair.wing,
      sheetId: sheet.value !== null && sheet.value.sheet.kind === site.kind ? sheet.value.sheet.id : pair.sheet,
    }));
  const pairs = sites.flatMap((site) => pairsOf(site).slice(0, 1));
  const sheets = new Map([...own.sheets, ...(sheet.value === null ? [] : [[sheet.value.sheet.id, sheet.value.body] as const])]);
  const versions = new Map([...own.config.sheets, ...(sheet.value === null ? [] : [sheet.value.sheet])].map(({ id, version }) => [id, version]));
  return success({
    sites,
    pairs,
    seed: {
      sites: sites.map((site) => ({ id: site.id, feature: JSON.stringify(features.get(site.id)), demo: !options.live })),
      sheets: [...sheets].map(([id, body]) => ({ id, version: versions.get(id) ?? 1, body: JSON.stringify(body) })),
      wings: WING_CLASSES.map((key) => ({ key, name: key, body: JSON.stringify({ class: key }) })),
      published: sites.flatMap(pairsOf),
      subscriptions: subscriptionsOf(own, pairs, options.rehearse),
    },
  });
}

/** Where nobody is enabled in config/subscribers.json, this terminal still is told. */
function subscriptionsOf(own: OwnConfig, pairs: readonly Pair[], isRehearsal: boolean): SeedSubscription[] {
  const known = new Set(pairs.map((pair) => pair.siteId));
  return own.config.subscribers.map(({ id, timeZone, deliverMinute, sites, channels }) => {
    const ownPairs = pairs.filter((pair) => sites.includes(pair.siteId));
    // Sites of a file are none of those that a subscriber could have named.
    const isForAll = sites.every((site) => !known.has(site));
    return {
      id, timeZone, deliverMinute,
      pairs: isForAll ? pairs : ownPairs,
      // A rehearsal is nobody's business but this terminal's.
      channels: channels.filter((channel) => !isRehearsal || channel.kind === 'terminal').map((channel, rank) => ({ id: `${id}-${rank}`, rank, kind: channel.kind, target: JSON.stringify(channel.kind === 'webhook' ? { url: channel.url } : {}) })),
    };
  });
}

interface ChosenSites {
  readonly sites: readonly Site[];
  readonly features: ReadonlyMap<string, unknown>;
}

function chooseSites(options: StartOptions, own: OwnConfig, nowMs: number): Result<ChosenSites, Issue[]> {
  const file = options.sitesFile ?? (options.rehearse ? REHEARSAL_SITES : null);
  if (file !== null) {
    const json = readJsonFile(file, '--sites');
    if (!json.ok) return json;
    const sites = parseSites(json.value, { nowMs });
    if (!sites.ok) return failure(sites.error.map((issue) => ({ ...issue, path: `${file}: ${issue.path}` })));
    return success({ sites: sites.value, features: byId((json.value as { readonly features: readonly unknown[] }).features) });
  }
  const invented = new Set(own.config.demo.sites.map(({ site }) => site));
  const sites = own.config.sites.filter((site) => invented.has(site.id) !== options.live);
  if (sites.length > 0) return success({ sites, features: own.features });
  return failure([{
    path: '--live', value: 'config/sites.json', problem: 'there are only the sites of the demo, which are invented places: there is no real weather for them',
    allowed: '--live --sites FILE, a GeoJSON FeatureCollection of your sites, or your sites in config/sites.json',
  }]);
}

function chooseSheet(asked: string | null, own: OwnConfig): Result<{ readonly sheet: LimitSheet; readonly body: unknown } | null, Issue[]> {
  if (asked === null) return success(null);
  const known = own.config.sheets.find((sheet) => sheet.id === asked);
  if (known !== undefined) return success({ sheet: known, body: own.sheets.get(asked) });
  if (!existsSync(asked)) {
    const ids = own.config.sheets.map((sheet) => sheet.id).join(', ');
    return failure([{ path: '--sheet', value: asked, problem: 'neither the id of a sheet nor a file', allowed: `one of ${ids}, or a file` }]);
  }
  const json = readJsonFile(asked, '--sheet');
  if (!json.ok) return json;
  const sheet = parseSheet(json.value, { basis: 'optional' });
  return sheet.ok ? success({ sheet: sheet.value, body: json.value }) : failure(sheet.error.map((issue) => ({ ...issue, path: `${asked}: ${issue.path}` })));
}

function chooseWing(asked: string | null): Result<string | null, Issue[]> {
  if (asked === null) return success(null);
  const found = WING_CLASSES.find((name) => name.toLowerCase() === asked.toLowerCase());
  return found === undefined ? failure([{ path: '--wing', value: asked, problem: 'no wing class', allowed: WING_CLASSES.join(', ') }]) : success(found);
}

function readJsonFile(file: string, argument: string): Result<unknown, Issue[]> {
  let text: string;
  try {
    text = readFileSync(file, 'utf8');
  } catch (error) {
    const isMissing = error instanceof Error && 'code' in error && error.code === 'ENOENT';
    return failure([{ path: argument, value: file, problem: isMissing ? 'there is no such file' : 'this file cannot be read', allowed: 'a file of JSON' }]);
  }
  const json = parseJsonStrict(text, BOUNDS);
  return json.ok ? json : failure(json.error.map((issue) => ({ ...issue, path: `${file}: ${issue.path}` })));
}
