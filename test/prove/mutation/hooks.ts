// How a mutant gets into a running Node: the modules that depend on the mutated one are loaded anew under its number, the
// mutated one from its changed text, 'vitest' as the harness. Everything else stays as it was first loaded.
import { registerHooks } from 'node:module';
import path from 'node:path';
import { fileURLToPath, pathToFileURL } from 'node:url';
import { importsOf, listFiles, readSource } from '../../support/source.ts';
import { root } from '../../support/run-tool.ts';

const harness = pathToFileURL(path.join(import.meta.dirname, 'harness.ts')).href;
const realVitest = import.meta.resolve('vitest');

export interface Trial {
  /** A fresh number for every load. */
  readonly number: number;
  readonly file: string;
  readonly text: string;
}

let trial: Trial | null = null;
let renewed: ReadonlySet<string> = new Set();

/** Which files each file imports, of the folders that tests reach. */
const importers = new Map<string, Set<string>>();
for (const file of listFiles(['lib', 'worker', 'test'], '.ts')) {
  for (const { specifier, typeOnly } of importsOf(readSource(file))) {
    if (typeOnly || !specifier.startsWith('.')) continue;
    const target = path.posix.join(path.posix.dirname(file), specifier);
    importers.set(target, (importers.get(target) ?? new Set()).add(file));
  }
}

/** The file and everything that leads to it by imports. */
export function dependents(file: string): Set<string> {
  const found = new Set([file]);
  for (const each of found) for (const importer of importers.get(each) ?? []) found.add(importer);
  return found;
}

/** From here on imports see the trial's text. */
export function setTrial(next: Trial): void {
  trial = next;
  renewed = dependents(next.file);
}

function fileOf(url: string): string | null {
  if (!url.startsWith('file:')) return null;
  return path.relative(root, fileURLToPath(url.split('?')[0]!)).split(path.sep).join('/');
}

registerHooks({
  resolve(specifier, context, next) {
    if (specifier === 'vitest') return { url: context.parentURL?.startsWith(harness) === true ? realVitest : harness, shortCircuit: true };
    const resolved = next(specifier, context);
    const file = fileOf(resolved.url);
    return trial !== null && file !== null && renewed.has(file) ? { ...resolved, url: `${resolved.url.split('?')[0]}?trial=${trial.number}` } : resolved;
  },
  load(url, context, next) {
    if (trial !== null && fileOf(url) === trial.file) return { format: 'module-typescript', source: trial.text, shortCircuit: true };
    return next(url, context);
  },
});
