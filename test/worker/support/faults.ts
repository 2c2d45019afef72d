// Faults in every call that leaves an invocation: the n-th of database, fetch or queue fails, or everything from it on.
import type { D1 } from '../../../worker/store/database.ts';

export const MODES = [
  // The call does not happen, happens and its answer is lost, or is never answered.
  'before', 'after', 'hang',
  // The process ends there: before the call, or after it was carried out.
  'end before', 'end after',
] as const;

export type Mode = (typeof MODES)[number];

export type Kind = 'db' | 'fetch' | 'queue';

export class Faults {
  /** Calls so far. */
  seen = 0;
  isHit = false;
  #isOver = false;
  readonly at: number;
  readonly mode: Mode;
  readonly kind: Kind;

  constructor(kind: Kind, at: number, mode: Mode) {
    this.kind = kind;
    this.at = at;
    this.mode = mode;
  }

  /** A new invocation: what ended with the one before is over. */
  begin(): void {
    this.#isOver = false;
  }

  async call<T>(kind: Kind, work: () => Promise<T>): Promise<T> {
    if (this.#isOver) throw new Error('the process has ended');
    if (kind === this.kind) this.seen += 1;
    if (this.isHit || kind !== this.kind || this.seen !== this.at) return work();
    this.isHit = true;
    switch (this.mode) {
      case 'before':
        throw new Error('Network connection lost.');
      case 'after':
        await work();
        throw new Error('Network connection lost.');
      case 'hang':
        // A fetch has its own deadline, which the stand-in of the world reports at once.
        if (kind === 'fetch') throw new DOMException('The operation timed out', 'TimeoutError');
        return new Promise<never>(() => undefined);
      case 'end before':
        this.#isOver = true;
        throw new Error('the process has ended');
      case 'end after':
        await work();
        this.#isOver = true;
        throw new Error('the process has ended');
    }
  }

  around(d1: D1): D1 {
    const inner = new WeakMap<object, D1PreparedStatement>();
    const wrap = (statement: D1PreparedStatement): D1PreparedStatement => {
      const wrapped = {
        bind: (...values: unknown[]) => wrap(statement.bind(...values)),
        all: () => this.call('db', () => statement.all()),
        run: () => this.call('db', () => statement.run()),
      } as unknown as D1PreparedStatement;
      inner.set(wrapped, statement);
      return wrapped;
    };
    return {
      prepare: (sql) => wrap(d1.prepare(sql)),
      batch: (statements) => this.call('db', () => d1.batch(statements.map((statement) => inner.get(statement) ?? statement))) as unknown as Promise<D1Result<never>[]>,
    };
  }
}
