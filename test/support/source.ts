// The repository's own source as data: which files there are, what each imports, and its syntax tree.
// The tree comes from vite's parser, so a rule sees code and never a comment or a string that looks like code.
import { globSync, readFileSync } from 'node:fs';
import path from 'node:path';
import { parseSync } from 'vite';
import { root } from './run-tool.ts';

/** A node of an ESTree. Rules look at few kinds of node: the fields stay open and each rule narrows what it reads. */
export interface Node {
  readonly type: string;
  readonly start: number;
  readonly end: number;
  readonly [field: string]: unknown;
}

export interface Source {
  /** From the root, with forward slashes. */
  readonly file: string;
  readonly text: string;
  readonly program: Node;
}

export interface Import {
  readonly specifier: string;
  readonly typeOnly: boolean;
  /** `import * as z`: house style for zod, where a named import costs five times the bytes. */
  readonly namespace: boolean;
  /** `with { type: 'json' }`, which Node asks for. */
  readonly attributeType: string | undefined;
  readonly line: number;
}

export function parse(file: string, text: string): Source {
  const result = parseSync(file, text, { preserveParens: false });
  const error = result.errors[0];
  if (error !== undefined) throw new Error(`"${file}" cannot be parsed: ${error.message}`);
  return { file, text, program: result.program as unknown as Node };
}

/** Every file of these folders that ends in `extension`, sorted, from the root. */
export function listFiles(folders: readonly string[], extension: string): string[] {
  return folders
    .flatMap((folder) => globSync(`${folder}/**/*${extension}`, { cwd: root }))
    .map((file) => file.split(path.sep).join('/'))
    .filter((file) => !file.includes('node_modules/') && !file.endsWith('.d.ts'))
    .sort();
}

export function readSource(file: string): Source {
  return parse(file, readFileSync(path.join(root, file), 'utf8'));
}

export function isNode(value: unknown): value is Node {
  return typeof value === 'object' && value !== null && typeof (value as { type?: unknown }).type === 'string';
}

/** The nodes directly below a node, with the field that holds each. */
export function* children(node: Node): Generator<readonly [field: string, child: Node]> {
  for (const [field, value] of Object.entries(node)) {
    if (isNode(value)) yield [field, value];
    else if (Array.isArray(value)) for (const item of value) if (isNode(item)) yield [field, item];
  }
}

/** The node and everything below it. */
export function* walk(node: Node): Generator<Node> {
  yield node;
  for (const [, child] of children(node)) yield* walk(child);
}

export function lineOf(source: Source, node: Node): number {
  return source.text.slice(0, node.start).split('\n').length;
}

function literal(node: unknown): string | undefined {
  return isNode(node) && typeof node['value'] === 'string' ? node['value'] : undefined;
}

function attributeType(node: Node): string | undefined {
  const attributes = Array.isArray(node['attributes']) ? (node['attributes'] as Node[]) : [];
  return literal(attributes[0]?.['value']);
}

/** Static imports, re-exports, dynamic imports and `import('…')` types. */
export function importsOf(source: Source): Import[] {
  const found: Import[] = [];
  for (const node of walk(source.program)) {
    const isType = node.type === 'TSImportType';
    const specifier = literal(node['source']) ?? (isType ? literal(node['argument']) : undefined);
    if (specifier === undefined) continue;
    const specifiers = Array.isArray(node['specifiers']) ? (node['specifiers'] as Node[]) : [];
    found.push({
      specifier,
      typeOnly: isType || node['importKind'] === 'type' || node['exportKind'] === 'type',
      namespace: specifiers.some((item) => item.type === 'ImportNamespaceSpecifier'),
      attributeType: attributeType(node),
      line: lineOf(source, node),
    });
  }
  return found;
}
