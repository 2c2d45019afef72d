// npm run prove: proofs that take minutes, one after the other; npm test runs the same code on fewer cases.
// Words behind it choose steps: `npm run prove -- mutation`. A step is a script that says what it tried and ends with 0.
import path from 'node:path';
import { root, run, vitestEntry } from '../support/run-tool.ts';

interface Step {
  readonly name: string;
  readonly what: string;
  readonly script: string;
  readonly args?: readonly string[];
  readonly env?: Readonly<Record<string, string>>;
}

/** Another seed each time, told by the tests: setting it again repeats the run. */
const seed = String(Math.floor(Date.now() / 1000));

function vitest(...files: readonly string[]): Pick<Step, 'script' | 'args'> {
  return { script: vitestEntry, args: ['run', '--config=test/vitest.config.ts', '--project=lib', '--testTimeout=3600000', ...files] };
}

const STEPS: readonly Step[] = [
  { name: 'mutation', what: 'every slip of hand in verdict, gate, age and units', script: 'test/prove/mutation/run.ts' },
  { name: 'laws', what: 'the laws on 5,000 cases each', ...vitest('test/properties/air-laws', 'test/properties/unit-laws', 'test/properties/wing-laws', 'test/properties/verdict-laws', 'test/properties/hour-laws', 'test/properties/day-laws'), env: { LAW_RUNS: '5000', LAW_SEED: seed } },
  { name: 'second-opinion', what: 'two implementations on 3,000 random sites', ...vitest('test/properties/second-opinion'), env: { SECOND_OPINION_CASES: '3000', SECOND_OPINION_SEED: seed } },
  { name: 'payloads', what: 'a million spoilt answers of services, none of which may read as within', ...vitest('test/lib/sources/mutated-payloads', 'test/lib/sources/mutated-surface'), env: { DAWNMARGIN_PROVE: '1' } },
  { name: 'year', what: '366 mornings in twelve zones while one call in ten fails, nobody left in silence', script: 'test/prove/year.ts' },
  { name: 'words', what: 'every prefix of the sentences of a quarter of a million days, and of a million messages as they are carried', ...vitest('test/lib/words/prefix-safe', 'test/lib/words/message-prefixes'), env: { DAWNMARGIN_PROVE: '1' } },
  { name: 'fuzz', what: '200,000 request bodies and 200,000 configurations at random, no crash, no half-stored row', script: 'test/prove/fuzz.ts', args: ['200000', seed] },
  { name: 'wishes', what: '200,000 subscriptions and 200,000 configurations spoilt before they are read', ...vitest('test/lib/config/subscription.test'), env: { PROVE: '1' } },
  { name: 'lighthouse', what: 'board and day page, four scores of at least 98 each; on an idle machine', script: 'test/prove/lighthouse.ts' },
];

const wanted = process.argv.slice(2);
const unknown = wanted.filter((name) => !STEPS.some((step) => step.name === name));
if (unknown.length > 0) throw new Error(`no step is called "${unknown.join('", "')}": there are ${STEPS.map(({ name }) => name).join(', ')}`);

const results: string[] = [];
for (const { name, what, script, args = [], env = {} } of STEPS.filter((step) => wanted.length === 0 || wanted.includes(step.name))) {
  console.log(`\n=== ${name}: ${what}`);
  Object.assign(process.env, env);
  const start = Date.now();
  const code = await run(path.resolve(root, script), args);
  for (const key of Object.keys(env)) delete process.env[key];
  results.push(`${code === 0 ? 'proven' : 'FAILED'}  ${name.padEnd(16)} ${Math.round((Date.now() - start) / 1000)} s`);
  if (code !== 0) process.exitCode = 1;
}
console.log(`\n${results.join('\n')}`);
