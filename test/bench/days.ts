// What the benches judge and what they are held against: days of the demo sites, and a payload of 150 kB like a service's.
import { readFileSync } from 'node:fs';
import path from 'node:path';
import type { DayInput } from '../../lib/brief/day-input.ts';
import { loadConfig } from '../../lib/config/load.ts';
import { inventedForecast } from '../../lib/forecast/invented/forecast.ts';

const file = (name: string): unknown => JSON.parse(readFileSync(path.join(import.meta.dirname, '../../config', `${name}.json`), 'utf8'));
const NOW = '2027-05-14T04:00:00Z';
const DATE = '2027-05-14';

/** A payload of 150 kB like a service's: an hourly table of numbers, seeded by arithmetic only. */
export function calibrationPayload(): string {
  const hours = 168;
  const columns: Record<string, (number | null)[]> = {};
  for (let column = 0; JSON.stringify(columns).length < 150_000; column += 1) {
    columns[`column_${column}`] = Array.from({ length: hours }, (_, hour) => ((hour * 7919 + column * 104_729) % 97 === 0 ? null : Math.round(((hour * 37 + column * 211) % 1999) * 1.37) / 100));
  }
  return JSON.stringify({ latitude: 47.25, longitude: 11.38, elevation: 812, hourly: columns });
}

export function dayInputs(): DayInput[] {
  const config = loadConfig({
    sites: file('sites'), sheets: file('sheets'), wingClasses: file('wing-classes'), published: file('published'),
    sources: file('sources'), thresholds: file('thresholds'), subscribers: file('subscribers'), demo: file('demo'), planDemo: file('plan-demo'),
  }, { nowMs: Date.parse(NOW) });
  if (!config.ok) throw new Error(config.error.map(({ path, problem }) => `${path}: ${problem}`).join('\n'));
  const { sites, sheets, wingClasses, thresholds, demo } = config.value;
  return sites.flatMap((site) => {
    const sheet = sheets.find(({ id }) => id === (site.kind === 'strip' ? 'solo-tow' : 'descent-new'));
    if (sheet === undefined) throw new Error('config has no default sheet');
    const answers = demo.sources.map((source) => ({
      source: source.id, kind: source.kind, outcome: inventedForecast(demo, source, { site, fromUtc: '2027-05-13T20:00:00Z', toUtc: '2027-05-15T02:00:00Z', now: NOW }),
    }));
    if (answers.some(({ outcome }) => !outcome.ok)) return [];
    return [{ site, wing: wingClasses['EN B'], wingKey: 'EN B', wingName: 'EN B', sheet, localDate: DATE, issuedAt: NOW, validUntil: '2027-05-14T22:00:00Z', demo: true, thresholds, answers, storedGroundM: {} }];
  });
}
