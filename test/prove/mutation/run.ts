// Mutation testing of what a verdict hangs on: verdicts, gates, ages and units. Every mutant of these modules is tried
// against the tests below; one that no test notices must stand in equivalents.json with the argument why it changes nothing.
// `node test/prove/mutation/run.ts lib/margin/window.ts` tries one module.
import { spawn, type ChildProcess } from 'node:child_process';
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { availableParallelism, tmpdir } from 'node:os';
import path from 'node:path';
import { createInterface } from 'node:readline';
import { readSource } from '../../support/source.ts';
import type { Job, Outcome } from './child.ts';
import { mutated, mutantsOf, type Mutant } from './mutants.ts';

const MODULES = [
  'lib/margin/margin.ts', 'lib/margin/verdict.ts', 'lib/margin/window.ts', 'lib/margin/sources.ts', 'lib/margin/agreement.ts',
  'lib/margin/judge-member.ts', 'lib/forecast/ranges.ts', 'lib/forecast/ages.ts', 'lib/forecast/frame.ts', 'lib/units.ts',
];

/** Those that tell within a second. */
const QUICK = [
  'test/properties/verdict-laws.test.ts', 'test/properties/unit-laws.test.ts', 'test/lib/forecast/ages.test.ts', 'test/lib/forecast/frame.test.ts',
  'test/lib/margin/margin.test.ts', 'test/lib/margin/verdict.test.ts', 'test/lib/margin/agreement.test.ts', 'test/lib/margin/judge-member.test.ts', 'test/lib/margin/range-gate.test.ts',
  'test/lib/margin/frame-gate.test.ts',
];

/** Those that judge whole days: asked only about what the quick ones let pass. */
const SLOW = [
  'test/lib/brief/airspeed.test.ts', 'test/lib/brief/hour-detail.test.ts', 'test/lib/brief/typical-days.test.ts', 'test/lib/brief/judge-day.test.ts',
  'test/lib/brief/cautions.test.ts', 'test/properties/hour-laws.test.ts', 'test/properties/day-laws.test.ts', 'test/lib/margin/truth-table.test.ts',
];

/** Laws are tried on fewer cases here: a mutant that needs a thousand to be seen needs a test of its own. */
const LAW_RUNS = '30';
/** A process forgets no module: after so many mutants it is replaced. */
const JOBS_A_CHILD = 60;
/** The dry run times this, and half a minute, is how long one mutant may take. */
const PATIENCE = 6;
const LEAST_PATIENCE_MS = 30_000;
const DRY_PATIENCE_MS = 600_000;

interface Equivalent {
  readonly file: string;
  readonly code: string;
  readonly was: string;
  readonly becomes: string;
  readonly nth?: number;
  readonly why: string;
}

type Fate = Outcome | { readonly number: number; readonly kind: 'timed out' };

function keyOf({ file, code, was, becomes, nth = 1 }: Pick<Mutant, 'file' | 'code' | 'was' | 'becomes'> & { readonly nth?: number }): string {
  return JSON.stringify([file, code, was, becomes, nth]);
}

const folder = mkdtempSync(path.join(tmpdir(), 'dawnmargin-mutants-'));

function start(jobs: readonly Job[]): ChildProcess {
  const file = path.join(folder, `jobs-${jobs[0]!.number}.json`);
  writeFileSync(file, JSON.stringify(jobs));
  return spawn(process.execPath, ['--max-old-space-size=2000', '--no-warnings', path.join(import.meta.dirname, 'child.ts'), file], {
    stdio: ['ignore', 'pipe', 'ignore'], env: { ...process.env, LAW_RUNS },
  });
}

/** Runs the jobs in processes of their own, one after the other; a job that takes too long, or breaks its process, is done with. */
async function tryAll(jobs: readonly Job[], patienceMs: number, tell: (fate: Fate) => void): Promise<void> {
  let left = [...jobs];
  while (left.length > 0) {
    const batch = left.slice(0, JOBS_A_CHILD);
    const child = start(batch);
    let done = 0;
    let watch = setTimeout(() => child.kill('SIGKILL'), patienceMs);
    for await (const line of createInterface({ input: child.stdout! })) {
      clearTimeout(watch);
      watch = setTimeout(() => child.kill('SIGKILL'), patienceMs);
      tell(JSON.parse(line) as Outcome);
      done += 1;
    }
    clearTimeout(watch);
    if (done < batch.length) {
      tell({ number: batch[done]!.number, kind: 'timed out' });
      done += 1;
    }
    left = left.slice(done);
  }
}

function sharesOf<T>(items: readonly T[], count: number): T[][] {
  return Array.from({ length: count }, (_, i) => items.filter((__, k) => k % count === i));
}

const chosen = process.argv.slice(2);
const modules = chosen.length > 0 ? chosen : MODULES;
const sources = new Map(modules.map((file) => [file, readSource(file)]));
const mutants = [...sources.values()].flatMap(mutantsOf);
const equivalents = (JSON.parse(readFileSync(path.join(import.meta.dirname, 'equivalents.json'), 'utf8')) as readonly Equivalent[]).filter(({ file }) => sources.has(file));
const argued = new Map(equivalents.map((each) => [keyOf(each), each]));

const startedMs = performance.now();
const dry = modules.map((file, i): Job => ({ number: -1 - i, file, text: sources.get(file)!.text, tests: [...QUICK, ...SLOW] }));

/** Runs the tests without any mutant; the time the slowest took. Where they fail, every mutant would look noticed. */
async function runDry(when: string): Promise<number> {
  let slowestMs = 0;
  const failed: Fate[] = [];
  await tryAll(dry, DRY_PATIENCE_MS, (fate) => {
    if (fate.kind === 'survived') slowestMs = Math.max(slowestMs, fate.ms);
    else failed.push(fate);
  });
  if (failed.length === 0) return slowestMs;
  console.error(`${when} any mutant the tests fail, so that nothing is proven: ${JSON.stringify(failed)}`);
  process.exit(1);
}

const slowestMs = await runDry('before');
const patienceMs = Math.max(LEAST_PATIENCE_MS, PATIENCE * slowestMs);

const fates = new Map<number, Fate>();
const jobs = mutants.map((mutant, number): Job => ({
  number, file: mutant.file, text: mutated(sources.get(mutant.file)!, mutant), tests: argued.has(keyOf(mutant)) ? QUICK : [...QUICK, ...SLOW],
}));
const tell = (fate: Fate): void => {
  fates.set(fate.number, fate);
  if (process.env['MUTATION_LOG'] !== undefined) {
    const { file, line, was, becomes } = mutants[fate.number]!;
    console.log(`${file}:${line} ${was.slice(0, 40)} => ${becomes.slice(0, 40)}: ${JSON.stringify(fate)}`);
  }
};
await Promise.all(sharesOf(jobs, Math.min(4, availableParallelism())).map((share) => tryAll(share, patienceMs, tell)));
// The tests, or what they test, may have been edited meanwhile.
await runDry('after');
rmSync(folder, { recursive: true, force: true });

const unlisted: string[] = [];
const idle: string[] = [];
const used = new Set<string>();
let [killed, late, listed] = [0, 0, 0];
mutants.forEach((mutant, number) => {
  const fate = fates.get(number);
  const key = keyOf(mutant);
  const told = `${mutant.file}:${mutant.line}: ${mutant.was} => ${mutant.becomes}   (#${mutant.nth} of ${mutant.code})`;
  if (argued.has(key)) used.add(key);
  if (fate?.kind === 'survived') {
    if (argued.has(key)) listed += 1;
    else unlisted.push(told);
    return;
  }
  if (argued.has(key)) idle.push(`${told} is listed as changing nothing, and was noticed`);
  if (fate?.kind === 'timed out') late += 1;
  else killed += 1;
});
for (const each of equivalents) if (!used.has(keyOf(each))) idle.push(`${each.file}: "${each.code}" with ${each.was} => ${each.becomes} is listed, and there is no such mutant`);

for (const told of unlisted) console.log(`survived   ${told}`);
for (const told of idle) console.log(`stale      ${told}`);
const different = mutants.length - listed;
console.log(`\n${mutants.length} mutants of ${modules.length} modules: ${killed} killed by a test, ${late} by time, ${listed} argued to change nothing, ${unlisted.length} survived`);
console.log(`mutation score ${((100 * (killed + late)) / different).toFixed(1)} % of the ${different} that differ, in ${Math.round((performance.now() - startedMs) / 1000)} s`);
process.exitCode = unlisted.length + idle.length > 0 ? 1 : 0;
