// npm run check: types of every project, lint (type-aware; it finds circular imports too), what nothing uses, and then the
// repository's own rules.
// Everything runs even if something before it failed, so that one run shows every problem.
import { existsSync, globSync } from 'node:fs';
import path from 'node:path';
import { root, run, toolEntry, vitestEntry } from './support/run-tool.ts';

const projects = ['lib', 'worker', 'worker/local', 'test', 'test/browser'];

const failed: string[] = [];
async function step(name: string, script: string, args: readonly string[]): Promise<void> {
  if ((await run(script, args)) !== 0) failed.push(name);
}

for (const project of projects) {
  const hasFiles = globSync('**/*.ts', { cwd: path.join(root, project) }).length > 0;
  if (hasFiles) await step(`types of ${project}`, toolEntry('typescript', 'tsc'), ['-p', project]);
}
await step('lint', toolEntry('oxlint', 'oxlint'), ['--type-aware', '--deny-warnings']);
await step('nothing unused', toolEntry('knip', 'knip'), ['--config', 'test/knip.json', '--no-config-hints', '--no-progress']);
// Under npm test the rules run with all the other tests.
if (process.env['npm_lifecycle_event'] !== 'test' && existsSync(path.join(root, 'test/lib/rules'))) {
  await step('rules', vitestEntry, ['run', '--config=test/vitest.config.ts', '--project=lib', 'test/lib/rules']);
}

if (failed.length > 0) {
  console.error(`\ncheck failed: ${failed.join(', ')}`);
  process.exitCode = 1;
} else {
  console.log('check passed');
}
