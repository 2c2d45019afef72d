// How many laws there are: counted in the syntax tree, said in the run's output.
import { expect, test } from 'vitest';
import { isNode, listFiles, readSource, walk } from '../support/source.ts';
import { RUNS } from './support/law.ts';

test('at least twenty-five laws are stated, each with its own words', () => {
  const statements = listFiles(['test/properties'], '-laws.test.ts').flatMap((file) =>
    [...walk(readSource(file).program)]
      .filter((node) => node.type === 'CallExpression' && isNode(node['callee']) && node['callee']['name'] === 'law')
      .map((node) => String((node['arguments'] as { value?: unknown }[])[0]?.value)),
  );
  console.log(`${statements.length} laws, ${RUNS} cases each`);
  expect(statements.length).toBeGreaterThanOrEqual(25);
  expect(new Set(statements).size).toBe(statements.length);
});
