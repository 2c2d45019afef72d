import { existsSync } from 'node:fs';
import path from 'node:path';
import { cloudflareTest, readD1Migrations } from '@cloudflare/vitest-plugin';
import { defineConfig } from 'vitest/config';

// Wrangler stays quiet and offline, whoever starts the tests.
process.env['WRANGLER_SEND_METRICS'] = 'false';
process.env['WRANGLER_SEND_ERROR_REPORTS'] = 'false';
process.env['WRANGLER_HIDE_BANNER'] = 'true';
process.env['CLOUDFLARE_CF_FETCH_ENABLED'] = 'false';
process.env['WRANGLER_LOG_PATH'] = '.data/logs';

const root = path.resolve(import.meta.dirname, '..');
const workerSetup = 'test/worker/setup.ts';

export default defineConfig({
  root,
  test: {
    passWithNoTests: true,
    // On demand only: `npx vitest run --config test/vitest.config.ts --coverage`.
    coverage: { provider: 'istanbul', include: ['lib/**', 'worker/**'], reporter: ['text', 'json-summary'] },
    // One group after the other, the browser last. No group is 0: vitest runs a group 0 without parallel files last.
    projects: [
      {
        root,
        test: {
          name: 'lib',
          environment: 'node',
          // Pure functions leave nothing behind, so the files share a process.
          isolate: false,
          maxWorkers: 2,
          // Long enough for a busy machine: no test of ours asserts a clock.
          testTimeout: 120_000,
          sequence: { groupOrder: 1 },
          include: ['lib', 'reference', 'properties', 'config'].map((folder) => `test/${folder}/**/*.test.ts`),
        },
      },
      {
        root,
        plugins: [
          cloudflareTest(async () => ({
            main: path.join(root, 'worker/whole.ts'),
            wrangler: { configPath: path.join(root, 'wrangler.toml') },
            miniflare: {
              bindings: { TEST_MIGRATIONS: await readD1Migrations(path.join(root, 'worker/store/migrations')) },
              // A closed world: a worker test that wants an answer from outside replaces fetch itself.
              outboundService: (request: Request) => new Response(`blocked ${request.url}`, { status: 599 }),
              // The three workers are one here.
              serviceBindings: Object.fromEntries(['DESK', 'OPERATOR'].map((name) => [name, () => new Response('there is no desk of its own here', { status: 599 })])),
            },
          })),
        ],
        test: {
          name: 'worker',
          testTimeout: 120_000,
          maxWorkers: 2,
          hookTimeout: 120_000,
          sequence: { groupOrder: 2 },
          include: ['test/worker/**/*.test.ts'],
          setupFiles: existsSync(path.join(root, workerSetup)) ? [workerSetup] : [],
        },
      },
      {
        root,
        test: {
          name: 'e2e',
          environment: 'node',
          include: ['test/e2e/**/*.test.ts', 'test/faults/**/*.test.ts'],
          testTimeout: 120_000,
          hookTimeout: 120_000,
          // Two at a time: most of them wait for a process of their own, which has its own port and folder.
          maxWorkers: 2,
          sequence: { groupOrder: 3 },
        },
      },
      {
        root,
        test: {
          name: 'browser',
          environment: 'node',
          include: ['test/browser/**/*.test.ts'],
          testTimeout: 120_000,
          // A browser on a busy machine: no check of ours is about how long something takes.
          expect: { poll: { timeout: 20_000 } },
          hookTimeout: 120_000,
          maxWorkers: 2,
          sequence: { groupOrder: 4 },
        },
      },
    ],
  },
});
