// margin() is the only door to a comparison with a limit. In JavaScript `null <= 20`, `"15" <= 20` and `!(NaN > 20)`
// all hold, so a comparison anywhere else is a place where missing data can read as within limits. This finds them in
// the syntax tree: relational operators, Math.max and Math.min, one of whose operands mentions a limit.
import { LIMIT_NAMES } from '../../../lib/margin/sheet.ts';
import { children, isNode, lineOf, walk, type Node, type Source } from '../../support/source.ts';

/** The door itself, and the ranges of the schemas, which compare a limit with what a limit may be. */
const allowedFile = 'lib/margin/margin.ts';
const allowedFolders = ['lib/config/'];

/** Besides the names of a sheet: a margin's own `limit`, and `maxMps`, the limit of a site's sector. */
const limitNames: ReadonlySet<string> = new Set([...LIMIT_NAMES, 'limit', 'maxMps']);

/** The limit of `slope` is itself the larger of two fields of the sheet, so margins may take Math.max of these. */
const largerOfTwo: ReadonlySet<string> = new Set(['slopeBufferDeg', 'minSlopeDeg']);

/** Where a negated comparison, true for NaN and undefined, is an error whatever it compares. */
const noNegation = ['lib/margin/', 'lib/forecast/'];

const relational: ReadonlySet<unknown> = new Set(['<', '>', '<=', '>=']);

const functionTypes: ReadonlySet<string> = new Set([
  'FunctionDeclaration', 'FunctionExpression', 'ArrowFunctionExpression',
]);

const opaque: ReadonlySet<string> = new Set(['CallExpression', 'NewExpression']);

/** The variables of one function that hold a limit under another name, by scope; false hides an outer one. */
type Scope = ReadonlyMap<string, string | false>;

function startsWithAny(file: string, places: readonly string[]): boolean {
  return places.some((place) => file.startsWith(place));
}

function nameOf(node: unknown): string {
  if (!isNode(node)) return '';
  if (node.type === 'Identifier') return String(node['name']);
  return node.type === 'Literal' && typeof node['value'] === 'string' ? node['value'] : '';
}

function limitAmong(...names: readonly (string | undefined)[]): string | undefined {
  return names.find((name) => name !== undefined && limitNames.has(name));
}

/** The name of the limit that a single node reads, or undefined: `minReleaseM`, `x.limit`, `limits[name]`. */
function limitRead(node: Node, scope: Scope): string | undefined {
  if (node.type === 'Identifier') {
    const name = nameOf(node);
    const held = scope.get(name);
    if (held !== undefined) return held === false ? undefined : held;
    return limitNames.has(name) ? name : undefined;
  }
  if (node.type !== 'MemberExpression') return undefined;
  const property = nameOf(node['property']);
  if (limitNames.has(property)) return property;
  const object = isNode(node['object']) ? node['object'] : undefined;
  const holder = object?.type === 'MemberExpression' ? nameOf(object['property']) : nameOf(object);
  return holder === 'limits' && property !== 'length' ? property || 'limits[…]' : undefined;
}

/** Names of fields, and the bodies of functions, which are visited on their own. */
function isNoOperand(parent: Node, field: string, child: Node): boolean {
  const isFieldName = (field === 'property' || field === 'key') && parent['computed'] !== true;
  return isFieldName || functionTypes.has(child.type) || child.type.startsWith('TSType');
}

/** Every limit that an operand mentions, however deep. */
function limitsIn(node: Node, scope: Scope): string[] {
  const own = limitRead(node, scope);
  if (own !== undefined) return [own];
  const operands = [...children(node)].filter(([field, child]) => !isNoOperand(node, field, child));
  return operands.flatMap(([, child]) => limitsIn(child, scope));
}

/** The variables of a pattern, each with the field it takes: `{ maxRunMps: r }` declares r from maxRunMps. */
function* declared(pattern: Node): Generator<readonly [name: string, field: string | undefined]> {
  if (pattern.type === 'Identifier') yield [nameOf(pattern), undefined];
  else if (pattern.type === 'AssignmentPattern') yield* declared(pattern['left'] as Node);
  else if (pattern.type === 'Property') {
    for (const [name, field] of declared(pattern['value'] as Node)) yield [name, field ?? nameOf(pattern['key'])];
  } else for (const [field, child] of children(pattern)) if (field !== 'typeAnnotation') yield* declared(child);
}

/** What a call gives back is its own affair: `const m = margin({ limit })` does not make m a limit. */
function isPlainValue(node: unknown): node is Node {
  const isOpaque = (part: Node) => opaque.has(part.type) || functionTypes.has(part.type);
  return isNode(node) && ![...walk(node)].some(isOpaque);
}

/** The scope inside a function or block: its parameters and variables hide or pass on limits. */
function scopeInside(node: Node, outer: Scope): Scope {
  const scope = new Map(outer);
  if (functionTypes.has(node.type)) {
    for (const parameter of node['params'] as Node[]) {
      for (const [name, field] of declared(parameter)) scope.set(name, limitAmong(field, name) ?? false);
    }
  }
  if (node.type !== 'BlockStatement' && node.type !== 'Program') return scope;
  for (const statement of node['body'] as Node[]) {
    const declaration = statement.type === 'ExportNamedDeclaration' ? statement['declaration'] : statement;
    if (!isNode(declaration) || declaration.type !== 'VariableDeclaration') continue;
    for (const declarator of declaration['declarations'] as Node[]) {
      const init = declarator['init'];
      const pattern = declarator['id'] as Node;
      const [inherited] = isPlainValue(init) && pattern.type === 'Identifier' ? limitsIn(init, scope) : [];
      for (const [name, field] of declared(pattern)) {
        scope.set(name, limitAmong(field, name) ?? inherited ?? false);
      }
    }
  }
  return scope;
}

function isMathMaxMin(callee: unknown): boolean {
  if (!isNode(callee) || callee.type !== 'MemberExpression') return false;
  return nameOf(callee['object']) === 'Math' && ['max', 'min'].includes(nameOf(callee['property']));
}

/** The limits that this node compares. */
function compared(node: Node, scope: Scope, file: string): string[] {
  if (node.type === 'BinaryExpression' && relational.has(node['operator'])) return limitsIn(node, scope);
  if (node.type !== 'CallExpression' || !isMathMaxMin(node['callee'])) return [];
  const found = (node['arguments'] as Node[]).flatMap((argument) => limitsIn(argument, scope));
  const isSlope = file.startsWith('lib/margin/') && nameOf((node['callee'] as Node)['property']) === 'max';
  return isSlope ? found.filter((name) => !largerOfTwo.has(name)) : found;
}

/** A comparison under a `!`, also inside a negated and/or. */
function negates(node: unknown): boolean {
  if (!isNode(node)) return false;
  if (node.type === 'LogicalExpression') return negates(node['left']) || negates(node['right']);
  return node.type === 'BinaryExpression' && relational.has(node['operator']);
}

function* breachesIn(source: Source, node: Node, outer: Scope): Generator<string> {
  const scope = scopeInside(node, outer);
  const at = `${source.file}:${lineOf(source, node)}`;
  const names = compared(node, scope, source.file);
  if (names.length > 0) yield `${at}: compares the limit ${names.join(', ')}: only margin() may`;
  const isNegated = node.type === 'UnaryExpression' && node['operator'] === '!' && negates(node['argument']);
  if (isNegated && startsWithAny(source.file, noNegation)) {
    yield `${at}: a negated comparison is true for NaN: turn the operator round and check for finite numbers`;
  }
  for (const [, child] of children(node)) yield* breachesIn(source, child, scope);
}

/** Every breach in one file, as "file:line: what is wrong". */
export function limitBreaches(source: Source): string[] {
  if (source.file === allowedFile || startsWithAny(source.file, allowedFolders)) return [];
  return [...breachesIn(source, source.program, new Map())];
}
