/** Reads one JSON text, keeping the path of where it is and every issue that does not keep it from reading on. */
import type { Issue } from '../result.ts';
import { formatPath, shortened, type Path } from './path.ts';

/** Ends the reading of one text; caught in json.ts. */
export class Unreadable extends Error {
  readonly issue: Issue;

  constructor(issue: Issue) {
    super(issue.problem);
    this.issue = issue;
  }
}

const numberForm = /-?(?:0|[1-9]\d*)(?:\.\d+)?(?:[eE][+-]?\d+)?/y;
/** Everything but control characters (below U+0020), the quote and the backslash. */
const plainString = /"[\u0020\u0021\u0023-\u005b\u005d-\u{10ffff}]*"/uy;
const anyString = /"(?:[\u0020\u0021\u0023-\u005b\u005d-\u{10ffff}]|\\(?:["\\/bfnrt]|u[0-9a-fA-F]{4}))*"/uy;
const whiteSpace = /[ \t\n\r]*/y;

export class Reader {
  readonly issues: Issue[] = [];
  readonly #text: string;
  readonly #maxDepth: number;
  readonly #path: (string | number)[] = [];
  #at = 0;

  constructor(text: string, maxDepth: number) {
    this.#text = text;
    this.#maxDepth = maxDepth;
  }

  document(): unknown {
    if (this.#text.startsWith('\uFEFF')) this.#at = 1;
    this.#skipSpace();
    const value = this.#value();
    this.#skipSpace();
    if (this.#at < this.#text.length) this.#stop('there is more text after the end of the value', 'one JSON value');
    return value;
  }

  #value(): unknown {
    switch (this.#text.charAt(this.#at)) {
      case '{': return this.#nested(() => this.#object());
      case '[': return this.#nested(() => this.#list());
      case '"': return this.#string('a value');
      case 't': return this.#word('true', true);
      case 'f': return this.#word('false', false);
      case 'n': return this.#word('null', null);
      default: return this.#number();
    }
  }

  #nested<T>(read: () => T): T {
    if (this.#path.length >= this.#maxDepth) this.#stop('too many levels inside one another', `at most ${this.#maxDepth} levels`);
    return read();
  }

  #object(): Record<string, unknown> {
    const object: Record<string, unknown> = {};
    this.#at += 1;
    this.#skipSpace();
    if (this.#takes('}')) return object;
    for (;;) {
      const key = this.#string('a key in double quotes');
      this.#path.push(key);
      if (key === '__proto__') this.#complain('this key is not allowed', 'another key');
      else if (Object.hasOwn(object, key)) this.#complain('this key is there twice', 'each key once');
      this.#skipSpace();
      if (!this.#takes(':')) this.#stop('a colon is missing after the key', '"key": value');
      this.#skipSpace();
      const value = this.#value();
      if (key !== '__proto__') object[key] = value;
      this.#path.pop();
      this.#skipSpace();
      if (this.#takes('}')) return object;
      if (!this.#takes(',')) this.#stop('a comma or the closing } is missing', ', or }');
      this.#skipSpace();
    }
  }

  #list(): unknown[] {
    const list: unknown[] = [];
    this.#at += 1;
    this.#skipSpace();
    if (this.#takes(']')) return list;
    for (;;) {
      this.#path.push(list.length);
      list.push(this.#value());
      this.#path.pop();
      this.#skipSpace();
      if (this.#takes(']')) return list;
      if (!this.#takes(',')) this.#stop('a comma or the closing ] is missing', ', or ]');
      this.#skipSpace();
    }
  }

  #string(wanted: string): string {
    const plain = this.#match(plainString);
    if (plain !== undefined) return plain.slice(1, -1);
    const escaped = this.#match(anyString);
    if (escaped !== undefined) return String(JSON.parse(escaped));
    const isBroken = this.#text[this.#at] === '"';
    return this.#stop(isBroken ? 'a text that does not end, or holds a control character or a wrong escape' : `${wanted} is missing`, wanted);
  }

  #number(): number {
    const digits = this.#match(numberForm);
    if (digits === undefined) return this.#stop('a value is missing or not JSON', 'a number, a text in double quotes, true, false, null, a list or an object');
    const value = Number(digits);
    if (!Number.isFinite(value)) this.#complain('this number is too large to be one', 'a finite number', digits);
    // Minus zero is a zero of the sender's arithmetic; nothing downstream tells them apart.
    return value === 0 ? 0 : value;
  }

  #word<T>(word: string, value: T): T {
    if (!this.#text.startsWith(word, this.#at)) this.#stop('a value is not JSON', word);
    this.#at += word.length;
    return value;
  }

  #match(form: RegExp): string | undefined {
    form.lastIndex = this.#at;
    const found = form.exec(this.#text)?.[0];
    if (found !== undefined) this.#at += found.length;
    return found;
  }

  #takes(character: string): boolean {
    if (this.#text[this.#at] !== character) return false;
    this.#at += 1;
    return true;
  }

  #skipSpace(): void {
    this.#match(whiteSpace);
  }

  #complain(problem: string, allowed: string, found?: string): void {
    const path: Path = this.#path;
    this.issues.push({ path: formatPath(path), value: shortened(found ?? JSON.stringify(path.at(-1))), problem, allowed });
  }

  #stop(problem: string, allowed: string): never {
    const before = this.#text.slice(0, this.#at);
    const line = before.split('\n').length;
    const column = this.#at - before.lastIndexOf('\n');
    const found = this.#at < this.#text.length ? JSON.stringify(this.#text.slice(this.#at, this.#at + 20)) : 'the end of the text';
    throw new Unreadable({ path: formatPath(this.#path), value: found, problem: `line ${line}, column ${column}: ${problem}`, allowed });
  }
}
