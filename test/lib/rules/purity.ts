// lib is a function of its arguments: no clock, no chance, no world. Types keep most of that out already
// (lib/tsconfig.json knows no platform); this finds what the language itself offers.
import { children, isNode, lineOf, walk, type Node, type Source } from '../../support/source.ts';

const forbiddenNames = new Set([
  'fetch', 'process', 'console', 'performance', 'crypto', 'globalThis', 'Temporal', 'WebSocket', 'caches', 'require',
  'setTimeout', 'setInterval', 'queueMicrotask', 'eval',
]);

const forbiddenMembers = new Set(['Date.now', 'Math.random']);

function nameOf(node: unknown): string {
  return isNode(node) && node.type === 'Identifier' ? String(node['name']) : '';
}

/** Names that are read as variables: not the `b` of `a.b`, not the key of `{ b: 1 }`. */
function* variables(node: Node): Generator<Node> {
  if (node.type === 'Identifier') yield node;
  for (const [field, child] of children(node)) {
    const isName = (field === 'property' || field === 'key') && node['computed'] !== true && node['shorthand'] !== true;
    if (!isName && !node.type.startsWith('TS')) yield* variables(child);
    else if (field === 'expression') yield* variables(child);
  }
}

function complaintAbout(node: Node): string | undefined {
  if (node.type === 'MemberExpression') {
    const property = node['property'] as Node;
    const member = `${nameOf(node['object'])}.${nameOf(property) || String(property['value'])}`;
    if (forbiddenMembers.has(member)) return member;
  }
  const isDate = nameOf(node['callee']) === 'Date';
  if (node.type === 'CallExpression' && isDate) return 'Date()';
  if (node.type === 'NewExpression' && isDate && (node['arguments'] as Node[]).length === 0) return 'new Date()';
  return undefined;
}

/** Every breach in one file, as "file:line: what is wrong". */
export function purityBreaches(source: Source): string[] {
  const found: { node: Node; what: string }[] = [];
  for (const node of variables(source.program)) {
    if (forbiddenNames.has(nameOf(node))) found.push({ node, what: nameOf(node) });
  }
  for (const node of walk(source.program)) {
    const what = complaintAbout(node);
    if (what !== undefined) found.push({ node, what });
  }
  return found.map(({ node, what }) => `${source.file}:${lineOf(source, node)}: lib may not use ${what}: hand it in`);
}
