// What README.md and DEVELOPERS.md tell people to type or to open is there.
import { existsSync, readFileSync } from 'node:fs';
import path from 'node:path';
import { expect, test } from 'vitest';
import { root } from '../../support/run-tool.ts';

const pages = ['README.md', 'DEVELOPERS.md'];
const { scripts } = JSON.parse(readFileSync(path.join(root, 'package.json'), 'utf8')) as { scripts: Readonly<Record<string, string>> };

test.each(pages)('every command of %s is one of package.json', (page) => {
  const named = [...readFileSync(path.join(root, page), 'utf8').matchAll(/npm (?:run )?([a-z]+)\b/g)].map(([, name]) => name ?? '');
  expect([...new Set(named)].filter((name) => !['ci', 'install', 'run'].includes(name) && scripts[name] === undefined)).toEqual([]);
});

test.each(pages)('every file that %s names is there', (page) => {
  const named = [...readFileSync(path.join(root, page), 'utf8').matchAll(/`((?:lib|worker|config|test)\/[\w./-]+\.(?:ts|json|md|toml|css|js|sql))`/g)].map(([, file]) => file ?? '');
  expect(named.length).toBeGreaterThan(0);
  expect([...new Set(named)].filter((file) => !existsSync(path.join(root, file)))).toEqual([]);
});
