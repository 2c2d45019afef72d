// Tries mutants in this process, one line of JSON on standard output for each: whether a test noticed, and which. Started by
// run.ts with a file of jobs; killed by it when a mutant keeps it busy for too long.
import { readFileSync } from 'node:fs';
import path from 'node:path';
import { pathToFileURL } from 'node:url';
import { root } from '../../support/run-tool.ts';
import { takeTests } from './harness.ts';
import { dependents, setTrial } from './hooks.ts';

export interface Job {
  readonly number: number;
  readonly file: string;
  /** The module's text with the mutant in it, or as it is for the dry run. */
  readonly text: string;
  /** Test files to run, those that tell soonest first. */
  readonly tests: readonly string[];
}

export type Outcome =
  | { readonly number: number; readonly kind: 'killed'; readonly by: string; readonly ms: number }
  | { readonly number: number; readonly kind: 'survived'; readonly ms: number };

interface Loops { turnsOfLoops?: number }

async function failureOf(job: Job): Promise<string | null> {
  const reached = dependents(job.file);
  for (const file of job.tests) {
    if (!reached.has(file)) continue;
    try {
      await import(`${pathToFileURL(path.join(root, file)).href}?trial=${job.number}`);
    } catch (error) {
      return `${file}: ${String(error).slice(0, 200)}`;
    }
    for (const { name, run } of takeTests()) {
      (globalThis as Loops).turnsOfLoops = 0;
      try {
        await run();
      } catch (error) {
        return `${name}: ${String(error).split('\n')[0]!.slice(0, 160)}`;
      }
    }
  }
  return null;
}

const jobs = JSON.parse(readFileSync(process.argv[2]!, 'utf8')) as readonly Job[];
for (const job of jobs) {
  setTrial(job);
  takeTests();
  const start = performance.now();
  const by = await failureOf(job);
  const ms = Math.round(performance.now() - start);
  const outcome: Outcome = by === null ? { number: job.number, kind: 'survived', ms } : { number: job.number, kind: 'killed', by, ms };
  process.stdout.write(`${JSON.stringify(outcome)}\n`);
}
