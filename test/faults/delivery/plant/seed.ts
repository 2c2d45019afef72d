// Subscribers for a plant: each with one webhook or push address at a sink, all with the brief of one demo site.
import { readFileSync } from 'node:fs';
import path from 'node:path';
import { root } from '../../../support/run-tool.ts';

function config(file: string): unknown {
  return JSON.parse(readFileSync(path.join(root, 'config', file), 'utf8')) as unknown;
}

export interface SeedSubscriber {
  readonly id: string;
  readonly channels: readonly { readonly kind: string; readonly target: unknown }[];
}

export function seedOf(subscribers: readonly SeedSubscriber[]): unknown {
  const [site] = (config('sites.json') as { features: { id: string }[] }).features;
  if (site === undefined) throw new Error('config/sites.json has no site');
  const sheets = (config('sheets.json') as { id: string; version: number }[]).filter(({ id }) => id === 'descent-new');
  return {
    sites: [{ id: site.id, feature: JSON.stringify(site), demo: true }],
    sheets: sheets.map((sheet) => ({ id: sheet.id, version: sheet.version, body: JSON.stringify(sheet) })),
    wings: [{ key: 'EN B', name: 'EN B', body: '{"class":"EN B"}' }],
    published: [],
    subscriptions: subscribers.map(({ id, channels }) => ({
      id, timeZone: 'Europe/Vienna', deliverMinute: 360, pairs: [{ siteId: site.id, wingKey: 'EN B', sheetId: 'descent-new' }],
      channels: channels.map(({ kind, target }, rank) => ({ id: `${id}-${rank}`, rank, kind, target: JSON.stringify(target) })),
    })),
  };
}
