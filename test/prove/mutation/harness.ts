// What a test file imports as 'vitest' while mutants are tried: the same expect, and describe and test that only collect,
// so that a file can be run again and again in one process. Only what the listed test files use is here.
import { expect } from 'vitest';

export interface Collected {
  readonly name: string;
  readonly run: () => unknown;
}

let collected: Collected[] = [];
let prefix: readonly string[] = [];

/** The tests that were registered since the last call. */
export function takeTests(): Collected[] {
  const taken = collected;
  collected = [];
  return taken;
}

type Body = (...given: never[]) => unknown;

function add(name: string, body: () => unknown): void {
  collected.push({ name: [...prefix, name].join(' > '), run: body });
}

/** test(name, body) and test(name, options, body). */
function testOf(name: string, ...rest: readonly unknown[]): void {
  add(name, rest.find((each) => typeof each === 'function') as () => unknown);
}

function each(rows: readonly unknown[]) {
  return (name: string, ...rest: readonly unknown[]): void => {
    const body = rest.find((one) => typeof one === 'function') as Body;
    // As vitest does: rows are lists of arguments only where all of them are lists.
    const areLists = rows.every((row) => Array.isArray(row));
    for (const row of rows) add(`${name} ${JSON.stringify(row)}`, () => body(...((areLists ? row : [row]) as never[])));
  };
}

function describe(name: string, body: () => void): void {
  const outer = prefix;
  prefix = [...outer, name];
  body();
  prefix = outer;
}

const test = Object.assign(testOf, { each });
function afterAll(): void {}

export { afterAll, describe, expect, test };
