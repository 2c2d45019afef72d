import { inTime } from '../in-time.ts';

/**
 * The door to D1. Four ways in, by what a repeated call would do: `read` and `write` are repeated after a transient
 * error, so `write` is for statements that leave the same rows when run twice; `together` is a batch of such
 * statements, all or none; `take` is for claims, which are never repeated (a claim whose answer was lost comes back
 * when its lease ends).
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
}

/** What of D1 is used, so that tests can put faults and counters in between. */
export type D1 = Pick<D1Database, 'prepare' | 'batch'>;

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

export function isOwnFault(error: unknown): boolean {
  return OWN_FAULT.test(error instanceof Error ? error.message : String(error));
}

export function database(d1: D1, options: DatabaseOptions): Database {
  const prepare = ({ sql, values }: Statement): D1PreparedStatement => d1.prepare(sql).bind(...values);

  const timed = <T>(work: Promise<T>): Promise<T> => inTime(work, options.timeoutMs, 'the database');

  async function repeated<T>(work: () => Promise<T>): Promise<T> {
    for (const baseMs of RETRY_BASE_MS) {
      try {
        return await timed(work());
      } catch (error) {
        if (isOwnFault(error)) throw error;
        await options.sleep(baseMs * (0.5 + options.random()));
      }
    }
    return timed(work());
  }

  return {
    async read<Row>(sql: string, ...values: Bindable[]) {
      const answer = await repeated(() => prepare({ sql, values }).all<Row>());
      return answer.results;
    },
    async write(sql, ...values) {
      const answer = await repeated(() => prepare({ sql, values }).run());
      return answer.meta.changes;
    },
    async together(statements) {
      if (statements.length === 0) return [];
      const answers = await repeated(() => d1.batch(statements.map(prepare)));
      return answers.map((answer) => answer.meta.changes);
    },
    async take<Row>(sql: string, ...values: Bindable[]) {
      const answer = await timed(prepare({ sql, values }).all<Row>());
      return answer.results;
    },
  };
}
