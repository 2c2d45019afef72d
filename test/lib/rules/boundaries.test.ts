import { readFileSync } from 'node:fs';
import path from 'node:path';
import { describe, expect, test } from 'vitest';
import { root } from '../../support/run-tool.ts';
import { listFiles, parse, readSource } from '../../support/source.ts';
import { boundaryBreaches, crowdedPackages } from './boundaries.ts';

const manifest = JSON.parse(readFileSync(path.join(root, 'package.json'), 'utf8')) as {
  dependencies: Record<string, string>;
};
const dependencies = Object.keys(manifest.dependencies);

function breaches(file: string, text: string): string[] {
  return boundaryBreaches(parse(file, text), dependencies);
}

describe('the repository', () => {
  const sources = listFiles(['lib', 'worker', 'test'], '.ts').map(readSource);

  test('keeps its boundaries', () => {
    expect(sources.length).toBeGreaterThan(0);
    expect(sources.flatMap((source) => boundaryBreaches(source, dependencies))).toEqual([]);
  });

  test('imports suncalc and geomagnetism in one file each', () => {
    expect(crowdedPackages(sources)).toEqual([]);
  });

  test('keeps nothing but data in config', () => {
    expect(listFiles(['config'], '').filter((file) => path.extname(file) !== '' && !file.endsWith('.json'))).toEqual([]);
  });
});

describe('the check', () => {
  test.each([
    ['lib/air/a.ts', "import { b } from '../numeric/b.ts';"],
    ['lib/air/a.ts', "import { b } from './b.ts';"],
    ['lib/margin/a.ts', "import type { Site } from '../config/site.ts';"],
    ['lib/config/a.ts', "import * as z from 'zod/mini'; import type { Forecast } from '../forecast/forecast.ts';"],
    ['lib/sky/a.ts', "import * as SunCalc from 'suncalc';"],
    ['worker/a.ts', "import sites from '../config/sites.json' with { type: 'json' };"],
    ['worker/a.ts', "import { Hono } from 'hono'; import { cors } from 'hono/cors'; import { connect } from 'cloudflare:sockets';"],
    ['worker/services.ts', "import { demo } from './sources/demo.ts';"],
    ['worker/morning/a.ts', "import type { Source } from '../sources/source.ts';"],
    ['worker/local/a.ts', "import path from 'node:path'; import { createTestHarness } from 'wrangler';"],
    ['lib/air/a.ts', "// import { b } from '../plan/b.ts'\nconst text = \"import x from 'worker'\"; export { text };"],
  ])('lets pass: %s: %s', (file, text) => {
    expect(breaches(file, text)).toEqual([]);
  });

  test.each([
    ['lib/air/a.ts', "import { b } from '../margin/b.ts';"],
    ['lib/air/a.ts', "import type { B } from '../margin/b.ts';"],
    ['lib/air/a.ts', "export * from '../plan/b.ts';"],
    ['lib/air/a.ts', "export const b = await import('../plan/b.ts');"],
    ['lib/air/a.ts', "export type B = import('../plan/b.ts').B;"],
    ['lib/units.ts', "import { b } from './air/b.ts';"],
    ['lib/odd/a.ts', 'export const b = 1;'],
    ['lib/margin/a.ts', "import { parseSite } from '../config/site.ts';"],
    ['lib/margin/a.ts', "import * as z from 'zod/mini';"],
    ['lib/config/a.ts', "import { z } from 'zod/mini';"],
    ['lib/config/a.ts', "import * as z from 'zod';"],
    ['lib/air/a.ts', "import { getTimes } from 'suncalc';"],
    ['lib/air/a.ts', "import { readFileSync } from 'node:fs';"],
    ['lib/brief/a.ts', "import { b } from '../../worker/b.ts';"],
    ['lib/brief/a.ts', "import sites from '../../config/sites.json' with { type: 'json' };"],
    ['lib/brief/a.ts', "import { b } from './b';"],
    ['worker/a.ts', "import sites from '../config/sites.json';"],
    ['worker/a.ts', "import path from 'node:path';"],
    ['worker/a.ts', "import { b } from './local/b.ts';"],
    ['worker/a.ts', "import { b } from '../test/b.ts';"],
    ['worker/a.ts', "import fc from 'fast-check';"],
    ['worker/morning/a.ts', "import { demo } from '../sources/demo.ts';"],
    ['worker/routes/a.ts', "import { webhook } from '../channels/webhook.ts';"],
  ])('finds: %s: %s', (file, text) => {
    expect(breaches(file, text)).toHaveLength(1);
  });

  test('finds a package that a second file imports', () => {
    const text = "import * as SunCalc from 'suncalc';";
    expect(crowdedPackages([parse('lib/sky/a.ts', text)])).toEqual([]);
    expect(crowdedPackages([parse('lib/sky/a.ts', text), parse('lib/sky/b.ts', text)])).toHaveLength(1);
  });
});
