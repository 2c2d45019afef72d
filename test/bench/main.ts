// npm run bench [-- --write] [-- judging parsing …]: each bench in a process of its own, several times; medians of the ratios with
// their spread. With --write the rounds and the versions are kept in test/bench/RESULTS.md; rows of benches that were not asked
// for stay as they are.
import { execFileSync } from 'node:child_process';
import { readFileSync, writeFileSync } from 'node:fs';
import { availableParallelism } from 'node:os';
import path from 'node:path';
import { parseArgs } from 'node:util';
import { median, type Growing, type Measured, type Told } from './turns.ts';

const BENCHES = ['judging', 'parsing', 'pages', 'push', 'morning', 'plan'] as const;
const ROUNDS = 3;

const { values, positionals } = parseArgs({ options: { write: { type: 'boolean', default: false } }, allowPositionals: true });
const unknown = positionals.filter((name) => !BENCHES.some((bench) => bench === name));
if (unknown.length > 0) {
  console.error(`no bench "${unknown.join('", "')}": there are ${BENCHES.join(', ')}`);
  process.exit(2);
}

type Result = Measured | Growing | Told;
const rounds = new Map<string, Result[]>();
for (const bench of BENCHES.filter((name) => positionals.length === 0 || positionals.includes(name))) {
  for (let round = 0; round < ROUNDS; round += 1) {
    const output = execFileSync(process.execPath, ['--no-warnings', path.join(import.meta.dirname, `${bench}.ts`)], { encoding: 'utf8', maxBuffer: 1e7 });
    for (const line of output.split('\n').filter((text) => text.startsWith('{'))) {
      const result = JSON.parse(line) as Result;
      rounds.set(result.name, [...(rounds.get(result.name) ?? []), result]);
    }
  }
}

const spread = (list: readonly number[]): string => `${Math.min(...list).toFixed(2)} to ${Math.max(...list).toFixed(2)}`;
const ms = (value: number): string => (value < 10 ? value.toFixed(2) : value.toFixed(0));
function row(results: readonly Result[]): string {
  const [first] = results;
  if (first === undefined) return '';
  if ('says' in first) return `| ${first.name} | ${first.says} | | |`;
  if ('exponent' in first) {
    const exponents = results.map((result) => (result as Growing).exponent);
    return `| ${first.name} | exponent **${median(exponents).toFixed(2)}** | ${spread(exponents)} | ${first.points.map(({ size, cost }) => `${size}: ${ms(cost)} ms`).join(', ')} |`;
  }
  const ratios = results.map((result) => (result as Measured).ratio);
  return `| ${first.name} | **${median(ratios).toFixed(2)}** x ${first.yardstick} | ${spread(ratios)} | ${results.map((result) => `${ms((result as Measured).ownMs)} / ${ms((result as Measured).yardMs)} ms`).join(', ')} |`;
}

const HEADING = ['| work | ratio, or growth | least to most of the rounds | raw rounds |', '|---|---|---|---|'];
const measured = new Map([...rounds].map(([name, results]) => [name, row(results)]));
const table = [...HEADING, ...measured.values()].join('\n');
console.log(table);
if (values.write) {
  const versionOf = (name: string): string => (JSON.parse(readFileSync(path.join(import.meta.dirname, '../../node_modules', name, 'package.json'), 'utf8')) as { version: string }).version;
  const file = path.join(import.meta.dirname, 'RESULTS.md');
  const text = readFileSync(file, 'utf8');
  const head = `Node ${process.version}, ${availableParallelism()} processors, web-push ${versionOf('web-push')}, workerd of miniflare ${versionOf('miniflare')}; ${ROUNDS} processes each.`;
  const [before = '', known = '', after = ''] = text.split(/(?<=<!-- bench:begin -->)|(?=<!-- bench:end -->)/);
  const nameOf = (line: string): string => line.split('|')[1]?.trim() ?? '';
  const kept = positionals.length === 0 ? [] : known.split('\n').filter((line) => line.startsWith('| ') && line !== HEADING[0]);
  const rows = [...kept.map((line) => measured.get(nameOf(line)) ?? line), ...[...measured].flatMap(([name, line]) => (kept.some((other) => nameOf(other) === name) ? [] : [line]))];
  writeFileSync(file, `${before}\n${head}\n\n${[...HEADING, ...rows].join('\n')}\n${after}`);
}
