import { readFileSync } from 'node:fs';
import path from 'node:path';
import { loadConfig, type Config } from '../../lib/config/load.ts';
import type { Issue, Result } from '../../lib/result.ts';
import { root } from './wrangler.ts';

/** config/ as typed values, and the sites as they stand there, which is how the worker is handed them. */
export interface OwnConfig {
  readonly config: Config;
  /** Features by their ids. */
  readonly features: ReadonlyMap<string, unknown>;
  /** Sheets by their ids. */
  readonly sheets: ReadonlyMap<string, unknown>;
}

const FILES = {
  sites: 'sites.json', sheets: 'sheets.json', wingClasses: 'wing-classes.json', published: 'published.json',
  sources: 'sources.json', thresholds: 'thresholds.json', subscribers: 'subscribers.json', demo: 'demo.json', planDemo: 'plan-demo.json',
} as const;

export function readOwnConfig(nowMs: number): Result<OwnConfig, Issue[]> {
  const files = {} as Record<keyof typeof FILES, unknown>;
  const issues: Issue[] = [];
  for (const [name, file] of Object.entries(FILES)) {
    try {
      files[name as keyof typeof FILES] = JSON.parse(readFileSync(path.join(root, 'config', file), 'utf8')) as unknown;
    } catch (error) {
      issues.push({ path: `config/${file}`, value: '', problem: error instanceof Error ? error.message : String(error), allowed: 'JSON' });
    }
  }
  const config = issues.length > 0 ? { ok: false as const, error: issues } : loadConfig(files, { nowMs });
  if (!config.ok) return config;
  const { features } = files.sites as { readonly features: readonly unknown[] };
  return { ok: true, value: { config: config.value, features: byId(features), sheets: byId(files.sheets as readonly unknown[]) } };
}

export function byId(items: readonly unknown[]): ReadonlyMap<string, unknown> {
  return new Map(items.map((item) => [(item as { readonly id: string }).id, item]));
}
