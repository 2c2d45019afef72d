// Every small slip of hand that a module could hold, one at a time: an operator turned, a bound moved, a constant changed,
// a branch taken always or never, a result dropped. Found in the syntax tree, written as an edit of the text.
import { children, lineOf, walk, type Node, type Source } from '../../support/source.ts';

export interface Mutant {
  readonly file: string;
  readonly line: number;
  /** The line it stands on, so that a list of mutants survives edits above it. */
  readonly code: string;
  readonly was: string;
  readonly becomes: string;
  /** Which of several alike on that line, from 1. */
  readonly nth: number;
  readonly start: number;
  readonly end: number;
}

interface Edit {
  readonly start: number;
  readonly end: number;
  readonly becomes: string;
}

const OPERATORS: Readonly<Record<string, readonly string[]>> = {
  '<': ['<=', '>='], '<=': ['<', '>'], '>': ['>=', '<='], '>=': ['>', '<'], '===': ['!=='], '!==': ['==='],
  '&&': ['||'], '||': ['&&'], '+': ['-'], '-': ['+'], '*': ['/'], '/': ['*'], '%': ['*'], '**': ['*'], '+=': ['-='], '-=': ['+='],
};

/** Calls that have a twin, and calls that may be left out: `x.sort(f)` becomes `x`. */
const TWINS: Readonly<Record<string, string>> = { max: 'min', min: 'max', floor: 'ceil', ceil: 'floor', some: 'every', every: 'some' };
const LEFT_OUT: ReadonlySet<string> = new Set(['filter', 'sort', 'slice', 'reverse']);

/** The value of an expression with a type to it. */
const TYPED: ReadonlySet<string> = new Set(['TSAsExpression', 'TSSatisfiesExpression', 'TSNonNullExpression']);

function text(source: Source, node: Node): string {
  return source.text.slice(node.start, node.end);
}

function replace(node: Node, becomes: string): Edit {
  return { start: node.start, end: node.end, becomes };
}

/** Numbers beside a number: the next whole ones, or a tenth more and less. */
function besides(value: number): string[] {
  if (Number.isInteger(value)) return [String(value + 1), value > 0 ? String(value - 1) : '(-1)'];
  return value < 1e-6 ? ['0', '1e-3'] : [String(value * 1.1), String(value * 0.9)];
}

/** Where the operator of a binary node stands: between its sides, outside comments the house does not write there. */
function operatorEdits(source: Source, node: Node): Edit[] {
  const [left, right] = [node['left'] as Node, node['right'] as Node];
  const operator = String(node['operator']);
  const at = source.text.indexOf(operator, left.end);
  if (at < 0 || at >= right.start) return [];
  if (operator === '??') return [replace(node, `(${text(source, left)})`), replace(node, `(${text(source, right)})`)];
  return (OPERATORS[operator] ?? []).map((becomes) => ({ start: at, end: at + operator.length, becomes }));
}

function callEdits(source: Source, node: Node): Edit[] {
  const callee = node['callee'] as Node;
  if (callee.type !== 'MemberExpression' || callee['computed'] === true) return [];
  const property = callee['property'] as Node;
  const name = text(source, property);
  const twin = TWINS[name];
  const object = callee['object'] as Node;
  return [
    ...(twin === undefined ? [] : [replace(property, twin)]),
    ...(LEFT_OUT.has(name) ? [replace(node, text(source, object))] : []),
    ...(name === 'abs' ? [replace(node, `(${text(source, (node['arguments'] as Node[])[0]!)})`)] : []),
  ];
}

function literalEdits(node: Node): Edit[] {
  const value = node['value'];
  if (typeof value === 'number') return besides(value).map((becomes) => replace(node, becomes));
  if (typeof value === 'boolean') return [replace(node, String(!value))];
  if (typeof value === 'string') return [replace(node, value === '' ? "'another'" : "''")];
  return [];
}

function editsAt(source: Source, node: Node): Edit[] {
  switch (node.type) {
    case 'BinaryExpression': case 'LogicalExpression': case 'AssignmentExpression': return operatorEdits(source, node);
    case 'UnaryExpression': return ['!', '-'].includes(String(node['operator'])) ? [replace(node, `(${text(source, node['argument'] as Node)})`)] : [];
    case 'ConditionalExpression': return ['true', 'false'].map((becomes) => replace(node['test'] as Node, becomes));
    case 'IfStatement': return ['true', 'false'].map((becomes) => replace(node['test'] as Node, becomes));
    case 'CallExpression': return callEdits(source, node);
    case 'Literal': return literalEdits(node);
    case 'ArrayExpression': return (node['elements'] as Node[]).length > 0 ? [replace(node, '[]')] : [];
    case 'ReturnStatement': return node['argument'] === null ? [] : [replace(node['argument'] as Node, 'undefined')];
    case 'ExpressionStatement': case 'ContinueStatement': case 'BreakStatement': case 'ThrowStatement': return [replace(node, ';')];
    default: return [];
  }
}

/** Keys of objects, types, imports and the words of directives are names, not values. */
function isValue(parent: Node, field: string, child: Node): boolean {
  if (child.type.startsWith('TS')) return TYPED.has(child.type);
  if ((field === 'key' || field === 'property') && parent['computed'] !== true) return false;
  if (TYPED.has(parent.type)) return field === 'expression';
  return !['ImportDeclaration', 'ExportAllDeclaration'].includes(child.type) && field !== 'source' && field !== 'typeAnnotation' && field !== 'directive';
}

function* valuesBelow(node: Node): Generator<Node> {
  yield node;
  for (const [field, child] of children(node)) if (isValue(node, field, child)) yield* valuesBelow(child);
}

/** Every mutant of a module, in the order of its text. */
export function mutantsOf(source: Source): Mutant[] {
  const seen = new Map<string, number>();
  return [...valuesBelow(source.program)]
    .flatMap((node) => editsAt(source, node).map((edit) => ({ ...edit, line: lineOf(source, { ...node, start: edit.start }) })))
    .filter(({ start, end, becomes }) => source.text.slice(start, end) !== becomes)
    .map(({ start, end, becomes, line }) => {
      const code = source.text.split('\n')[line - 1]!.trim();
      const was = source.text.slice(start, end);
      const key = JSON.stringify([code, was, becomes]);
      const nth = (seen.get(key) ?? 0) + 1;
      seen.set(key, nth);
      return { file: source.file, line, code, was, becomes, nth, start, end };
    });
}

/** A loop that a mutant makes endless ends here, as a failure. */
const GUARD = 'if ((globalThis.turnsOfLoops = (globalThis.turnsOfLoops ?? 0) + 1) > 3e6) throw new Error("endless");';

/** The module's text with the mutant in it, and a guard in each of its loops. */
export function mutated(source: Source, mutant: Pick<Mutant, 'start' | 'end' | 'becomes'>): string {
  const guards = [...walk(source.program)]
    .filter(({ type }) => ['ForStatement', 'WhileStatement', 'DoWhileStatement'].includes(type))
    .map((loop) => loop['body'] as Node)
    .filter((body) => body.end <= mutant.start || body.start >= mutant.end || (body.start < mutant.start && body.end > mutant.end))
    .flatMap((body): Edit[] => [{ start: body.start, end: body.start, becomes: `{${GUARD}` }, { start: body.end, end: body.end, becomes: '}' }]);
  const edits = [...guards, { start: mutant.start, end: mutant.end, becomes: ` ${mutant.becomes} ` }].sort((a, b) => b.start - a.start || b.end - a.end);
  return edits.reduce((done, { start, end, becomes }) => done.slice(0, start) + becomes + done.slice(end), source.text);
}

