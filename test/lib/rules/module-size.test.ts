// A module that does not fit on a few screens does more than one thing.
import { globSync, readFileSync } from 'node:fs';
import path from 'node:path';
import { expect, test } from 'vitest';
import { root } from '../../support/run-tool.ts';

const MOST_LINES = 300;

test('no module of lib or worker has more than 300 lines', () => {
  const files = globSync(['lib/**/*.ts', 'worker/**/*.ts'], { cwd: root });
  expect(files.length).toBeGreaterThan(100);
  expect(files.filter((file) => readFileSync(path.join(root, file), 'utf8').split('\n').length > MOST_LINES)).toEqual([]);
});
