// Who may import whom. The tables below are the rule; the functions only apply it.
//
//   config (data) <- worker -> lib        lib: each floor imports itself and floors below it
import path from 'node:path';
import { importsOf, type Import, type Source } from '../../support/source.ts';

/** The floors of lib, lowest first. A floor is a folder, or one of the files that lie in lib itself. */
const floors: readonly (readonly string[])[] = [
  ['units.ts', 'angles.ts', 'result.ts', 'time.ts', 'site.ts', 'numeric'],
  ['air'],
  ['wing'],
  ['sky'],
  ['forecast'],
  ['margin'],
  ['brief'],
  ['plan'],
];

/** lib/config stands beside the floors: it may build any of their types, and they may know its types only. */
const besideTheFloors = 'config';

/** The npm packages of lib: where each may be imported, and in how many files. */
const libPackages: Readonly<Record<string, { readonly folder: string; readonly files: number }>> = {
  suncalc: { folder: 'lib/sky/', files: 1 },
  geomagnetism: { folder: 'lib/sky/', files: 1 },
  zod: { folder: 'lib/config/', files: Infinity },
};

/** In these folders of the worker only these files may be named from outside; services.ts and desk-services.ts name the concrete ones. */
const workerInterfaces: Readonly<Record<string, readonly string[]>> = {
  'worker/sources/': ['source.ts', 'order.ts'],
  'worker/channels/': ['channel.ts'],
};

const nameConcreteOnes = ['worker/services.ts', 'worker/desk-services.ts'];

/** What an import points at: a file of the repository, or a package (the first two parts of a scoped name). */
type Target = { readonly file: string } | { readonly package: string };

function targetOf(source: Source, specifier: string): Target {
  if (specifier.startsWith('.')) {
    return { file: path.posix.join(path.posix.dirname(source.file), specifier) };
  }
  if (specifier.includes(':')) return { package: specifier };
  const parts = specifier.split('/');
  return { package: parts.slice(0, specifier.startsWith('@') ? 2 : 1).join('/') };
}

/** -1 when the file stands on no floor. */
function floorOf(file: string): number {
  const name = file.split('/')[1] ?? '';
  return floors.findIndex((floor) => floor.includes(name));
}

function isLocal(file: string): boolean {
  return file.startsWith('worker/local/');
}

function libComplaint(source: Source, item: Import, target: Target): string | undefined {
  if ('package' in target) {
    const rule = libPackages[target.package];
    if (rule === undefined) return `lib may not import "${target.package}"`;
    if (!source.file.startsWith(rule.folder)) return `"${target.package}" belongs in ${rule.folder} only`;
    const isWhole = (item.namespace || item.typeOnly) && item.specifier === 'zod/mini';
    return target.package === 'zod' && !isWhole ? "zod is imported as import * as z from 'zod/mini'" : undefined;
  }
  if (!target.file.startsWith('lib/')) return 'lib imports nothing but lib';
  if (target.file.endsWith('.json')) return 'lib is handed its data, it does not import it';
  if (source.file.startsWith(`lib/${besideTheFloors}/`)) return undefined;
  if (target.file.startsWith(`lib/${besideTheFloors}/`)) {
    return item.typeOnly ? undefined : 'of lib/config only types are known inside lib: use import type';
  }
  const from = floorOf(source.file);
  const to = floorOf(target.file);
  if (to < 0) return `"${target.file}" stands on no floor of lib`;
  return to > from ? `a lower floor imports a higher one ("${target.file}")` : undefined;
}

function workerComplaint(source: Source, target: Target, dependencies: readonly string[]): string | undefined {
  if ('package' in target) {
    if (isLocal(source.file) || target.package.startsWith('cloudflare:')) return undefined;
    if (target.package.startsWith('node:')) return 'Node belongs in worker/local';
    return dependencies.includes(target.package) ? undefined : `"${target.package}" is not a dependency of the worker`;
  }
  const home = target.file.split('/')[0] ?? '';
  if (!['worker', 'lib', 'config', 'package.json'].includes(home)) return 'worker imports worker, lib and config';
  if (isLocal(target.file) && !isLocal(source.file)) return 'what runs in the worker may not import worker/local';
  for (const [folder, allowed] of Object.entries(workerInterfaces)) {
    const within = target.file.startsWith(folder) && !source.file.startsWith(folder);
    const free = nameConcreteOnes.includes(source.file) || isLocal(source.file);
    if (within && !free && !allowed.includes(target.file.slice(folder.length))) {
      return `only ${nameConcreteOnes.join(' and ')} name "${target.file}"`;
    }
  }
  return undefined;
}

/** How the import is spelt, wherever it stands: Node runs our files as they are, so it needs whole file names. */
function spellingComplaint(item: Import, target: Target): string | undefined {
  if ('package' in target) return undefined;
  if (target.file.endsWith('.json')) {
    return item.attributeType === 'json' || item.typeOnly ? undefined : "a JSON import ends in with { type: 'json' }";
  }
  return /\.[cm]?[jt]s$/.test(target.file) ? undefined : 'a relative import ends in .ts';
}

/** Every breach in one file, as "file:line: what is wrong". */
export function boundaryBreaches(source: Source, dependencies: readonly string[]): string[] {
  const breaches: string[] = [];
  const isLib = source.file.startsWith('lib/');
  if (isLib && floorOf(source.file) < 0 && !source.file.startsWith(`lib/${besideTheFloors}/`)) {
    breaches.push(`${source.file}:1: stands on no floor of lib (${floors.flat().join(' ')})`);
  }
  for (const item of importsOf(source)) {
    const target = targetOf(source, item.specifier);
    const complaints = [spellingComplaint(item, target)];
    if (isLib) complaints.push(libComplaint(source, item, target));
    if (source.file.startsWith('worker/')) complaints.push(workerComplaint(source, target, dependencies));
    for (const complaint of complaints) {
      if (complaint !== undefined) breaches.push(`${source.file}:${item.line}: "${item.specifier}": ${complaint}`);
    }
  }
  return breaches;
}

/** A package of lib that more files import than its rule allows. */
export function crowdedPackages(sources: readonly Source[]): string[] {
  return Object.entries(libPackages).flatMap(([name, rule]) => {
    const files = sources
      .filter((source) => source.file.startsWith('lib/') && importsOf(source).some((item) => item.specifier === name))
      .map((source) => source.file);
    const isCrowded = files.length > rule.files;
    return isCrowded ? [`"${name}" is imported in ${files.join(' and ')}, allowed: ${rule.files} file`] : [];
  });
}
