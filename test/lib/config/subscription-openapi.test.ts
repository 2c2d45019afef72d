// The served description is the one that the schemas make, and holds together: `WRITE=1` writes it anew.
import { readFileSync, writeFileSync } from 'node:fs';
import path from 'node:path';
import { expect, test } from 'vitest';
import { openapi } from '../../support/openapi.ts';

const file = path.resolve(import.meta.dirname, '../../../worker/assets/api/v1/openapi.json');
const made = `${JSON.stringify(openapi(), null, 1)}\n`;
if (process.env['WRITE'] === '1') writeFileSync(file, made);

test('the served description is what the schemas make', () => {
  expect(readFileSync(file, 'utf8')).toBe(made);
});

test('every reference leads somewhere, every parameter of a path is described, every operation has an answer and a summary', () => {
  const document = JSON.parse(made) as { paths: Record<string, Record<string, unknown>>; components: { schemas: Record<string, unknown> } };
  for (const [, name] of made.matchAll(/"#\/components\/schemas\/(\w+)"/g)) expect(Object.keys(document.components.schemas)).toContain(name);
  for (const [address, item] of Object.entries(document.paths)) {
    const shared = (item['parameters'] ?? []) as { name: string; in: string }[];
    for (const [method, value] of Object.entries(item).filter(([key]) => key !== 'parameters')) {
      const operation = value as { summary?: string; responses?: Record<string, unknown>; parameters?: { name: string; in: string }[] };
      expect(['get', 'put', 'post', 'delete']).toContain(method);
      expect(operation.summary).toBeTruthy();
      expect(Object.keys(operation.responses ?? {}).every((status) => /^[2-5]\d\d$/.test(status))).toBe(true);
      const named = [...shared, ...(operation.parameters ?? [])].filter(({ in: place }) => place === 'path').map(({ name }) => name);
      expect(new Set(named)).toEqual(new Set([...address.matchAll(/\{(\w+)\}/g)].map(([, name]) => name)));
    }
  }
});

test('a subscription is described with all that it may hold, and nothing else', () => {
  const { components } = openapi() as { components: { schemas: Record<string, { properties: object; additionalProperties: boolean; required: string[] }> } };
  expect(Object.keys(components.schemas['Subscription']!.properties)).toEqual(['sites', 'wing', 'deliver', 'units', 'pauseUntil', 'language', 'channels']);
  expect(components.schemas['Subscription']).toMatchObject({ additionalProperties: false, required: ['sites', 'deliver', 'channels'] });
});
