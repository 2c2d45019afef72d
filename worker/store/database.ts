import { inTime } from '../in-time.ts';

/**
 * The door to D1. Four ways in, by what a repeated call would do: `read` and `write` are repeated after a transient
 * error, so `write` is for statements that leave the same rows when run twice; `together` is a batch of such
 * statements, all or none; `take` is for claims, which are never repeated (a claim whose answer was lost comes back
 * when its lease ends). Reads that are asked for in one breath travel in one call: a call costs far more than a read.
 */
export type Bindable = string | number | null;

export interface Statement {
  readonly sql: string;
  readonly values: readonly Bindable[];
}

export interface Database {
  read<Row>(sql: string, ...values: Bindable[]): Promise<Row[]>;
  /** The number of rows changed. */
  write(sql: string, ...values: Bindable[]): Promise<number>;
  together(statements: readonly Statement[]): Promise<number[]>;
  take<Row>(sql: string, ...values: Bindable[]): Promise<Row[]>;
  /** Statements so far, counted one by one even where they travel together: the platform allows an invocation only so many. */
  asked(): number;
}

/** What of D1 is used, so that tests can put faults and counters in between. */
export type D1 = Pick<D1Database, 'prepare' | 'batch'>;

interface Asked extends Statement {
  readonly resolve: (rows: unknown[]) => void;
  readonly reject: (error: unknown) => void;
}

export interface DatabaseOptions {
  readonly sleep: (ms: number) => Promise<void>;
  /** 0 to 1: spreads the waits. */
  readonly random: () => number;
  /** A statement that has not answered by then is given up; it may still have been carried out. */
  readonly timeoutMs: number;
}

const RETRY_BASE_MS = [50, 200, 600] as const;

/** The statement itself is wrong, or a constraint refused it: asking again gives the same answer. */
const OWN_FAULT = /SQLITE_(ERROR|CONSTRAINT|MISMATCH|RANGE|TOOBIG|AUTH)|constraint failed|no such (table|column)|syntax error|D1_TYPE_ERROR|datatype mismatch/i;

function isOwnFault(error: unknown): boolean {
  return OWN_FAULT.test(error instanceof Error ? error.message : String(error));
}

export function database(d1: D1, options: DatabaseOptions): Database {
  const prepare = ({ sql, values }: Statement): D1PreparedStatement => d1.prepare(sql).bind(...values);

  let askedSoFar = 0;
  const timed = <T>(statements: number, work: Promise<T>): Promise<T> => {
    askedSoFar += statements;
    return inTime(work, options.timeoutMs, 'the database');
  };

  async function repeated<T>(statements: number, work: () => Promise<T>): Promise<T> {
    for (const baseMs of RETRY_BASE_MS) {
      try {
        return await timed(statements, work());
      } catch (error) {
        if (isOwnFault(error)) throw error;
        await options.sleep(baseMs * (0.5 + options.random()));
      }
    }
    return timed(statements, work());
  }

  const all = async (statement: Statement): Promise<unknown[]> => (await repeated(1, () => prepare(statement).all())).results;

  let asked: Asked[] = [];

  async function readAsked(): Promise<void> {
    const group = asked;
    asked = [];
    const [first, ...others] = group;
    if (first === undefined) return;
    if (others.length > 0) {
      try {
        const answers = await repeated(group.length, () => d1.batch(group.map(prepare)));
        for (const [index, { resolve }] of group.entries()) resolve(answers[index]?.results ?? []);
        return;
      } catch (error) {
        // One bad read must not take its neighbours with it.
        if (!isOwnFault(error)) return group.forEach(({ reject }) => reject(error));
      }
    }
    for (const one of group) void all(one).then(one.resolve, one.reject);
  }

  return {
    read<Row>(sql: string, ...values: Bindable[]) {
      if (asked.length === 0) queueMicrotask(() => void readAsked());
      return new Promise<Row[]>((resolve, reject) => {
        asked.push({ sql, values, resolve: (rows) => resolve(rows as Row[]), reject });
      });
    },
    async write(sql, ...values) {
      const answer = await repeated(1, () => prepare({ sql, values }).run());
      return answer.meta.changes;
    },
    async together(statements) {
      const [first] = statements;
      if (first === undefined) return [];
      // One alone needs no transaction around it.
      const answers = await repeated(statements.length, () => (statements.length === 1 ? prepare(first).run().then((answer) => [answer]) : d1.batch(statements.map(prepare))));
      return answers.map((answer) => answer.meta.changes);
    },
    async take<Row>(sql: string, ...values: Bindable[]) {
      const answer = await timed(1, prepare({ sql, values }).all<Row>());
      return answer.results;
    },
    asked: () => askedSoFar,
  };
}
