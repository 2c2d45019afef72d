// Judging one site-day against parsing a forecast payload of 150 kB, in one process and in turns: the ratio is what is
// asserted, because a clock alone says more about the machine than about the code.
import { readFileSync } from 'node:fs';
import path from 'node:path';
import { judgeDay } from '../../lib/brief/judge-day.ts';
import type { DayInput } from '../../lib/brief/day-input.ts';
import { loadConfig } from '../../lib/config/load.ts';
import { inventedForecast } from '../../lib/forecast/invented/forecast.ts';

const file = (name: string): unknown => JSON.parse(readFileSync(path.join(import.meta.dirname, '../../config', `${name}.json`), 'utf8'));
const NOW = '2027-05-14T04:00:00Z';
/** Rounds before the count begins: the compiler has settled by then. */
const WARM_UP = 300;
const DATE = '2027-05-14';

export interface Ratio {
  readonly site: string;
  readonly judgeMs: number;
  readonly parseMs: number;
  readonly ratio: number;
}

/** A payload of 150 kB like a service's: an hourly table of numbers, seeded by arithmetic only. */
export function calibrationPayload(): string {
  const hours = 168;
  const columns: Record<string, (number | null)[]> = {};
  for (let column = 0; JSON.stringify(columns).length < 150_000; column += 1) {
    columns[`column_${column}`] = Array.from({ length: hours }, (_, hour) => ((hour * 7919 + column * 104_729) % 97 === 0 ? null : Math.round(((hour * 37 + column * 211) % 1999) * 1.37) / 100));
  }
  return JSON.stringify({ latitude: 47.25, longitude: 11.38, elevation: 812, hourly: columns });
}

function dayInputs(): DayInput[] {
  const config = loadConfig({
    sites: file('sites'), sheets: file('sheets'), wingClasses: file('wing-classes'), published: file('published'),
    sources: file('sources'), thresholds: file('thresholds'), subscribers: file('subscribers'), demo: file('demo'),
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

function median(values: readonly number[]): number {
  const sorted = [...values].sort((a, b) => a - b);
  return sorted[Math.floor(sorted.length / 2)] ?? NaN;
}

/** The median of `rounds` turns of each, parse and judge alternating. */
export function measureSiteDays(rounds: number): Ratio[] {
  const payload = calibrationPayload();
  let kept = 0;
  return dayInputs().map((input) => {
    const judge: number[] = [];
    const parse: number[] = [];
    for (let round = 0; round < rounds + WARM_UP; round += 1) {
      const start = performance.now();
      kept += judgeDay(input).hours.length;
      const middle = performance.now();
      kept += Object.keys(JSON.parse(payload) as object).length;
      const end = performance.now();
      if (round < WARM_UP) continue;
      judge.push(middle - start);
      parse.push(end - middle);
    }
    if (kept === 0) throw new Error('nothing was judged');
    return { site: input.site.id, judgeMs: median(judge), parseMs: median(parse), ratio: median(judge) / median(parse) };
  });
}

if (import.meta.main) {
  for (const { site, judgeMs, parseMs, ratio } of measureSiteDays(200)) {
    console.log(`${site.padEnd(20)} judged in ${judgeMs.toFixed(2)} ms, 150 kB parsed in ${parseMs.toFixed(2)} ms: ${ratio.toFixed(1)} x`);
  }
}
