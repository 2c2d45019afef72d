// The shape of D1 over the SQLite of Node, in memory: the same SQL a hundred times faster than through a runtime, for
// simulations of months. What D1 itself does is tested in workerd.
import { readdirSync, readFileSync } from 'node:fs';
import path from 'node:path';
import { DatabaseSync, type SQLInputValue, type StatementSync } from 'node:sqlite';
import type { D1 } from '../../worker/store/database.ts';
import { root } from './run-tool.ts';

const MIGRATIONS = path.join(root, 'worker/store/migrations');

export interface SqliteD1 extends D1 {
  /** Rows of a test's own question. */
  readonly ask: <Row>(sql: string, ...values: SQLInputValue[]) => Row[];
  readonly close: () => void;
}

export function sqliteD1(): SqliteD1 {
  const db = new DatabaseSync(':memory:');
  for (const name of readdirSync(MIGRATIONS).filter((file) => file.endsWith('.sql')).sort()) db.exec(readFileSync(path.join(MIGRATIONS, name), 'utf8'));
  const known = new Map<string, StatementSync>();
  const statementOf = (sql: string): StatementSync => {
    const found = known.get(sql) ?? db.prepare(sql);
    known.set(sql, found);
    return found;
  };
  const plain = (rows: unknown[]): Record<string, unknown>[] => rows.map((row) => ({ ...(row as Record<string, unknown>) }));

  class Prepared {
    readonly sql: string;
    readonly values: SQLInputValue[];
    constructor(sql: string, values: SQLInputValue[]) {
      this.sql = sql;
      this.values = values;
    }
    bind(...values: SQLInputValue[]): Prepared {
      return new Prepared(this.sql, values);
    }
    async all(): Promise<unknown> {
      return { results: plain(statementOf(this.sql).all(...this.values)), success: true, meta: { changes: 0 } };
    }
    async run(): Promise<unknown> {
      return this.now();
    }
    now(): unknown {
      const statement = statementOf(this.sql);
      if (/^\s*(SELECT|WITH)/i.test(this.sql)) return { results: plain(statement.all(...this.values)), success: true, meta: { changes: 0 } };
      return { results: [], success: true, meta: { changes: Number(statement.run(...this.values).changes) } };
    }
  }
  return {
    prepare: (sql) => new Prepared(sql, []) as unknown as D1PreparedStatement,
    async batch(statements) {
      db.exec('BEGIN IMMEDIATE');
      try {
        const answers = (statements as unknown as Prepared[]).map((statement) => statement.now());
        db.exec('COMMIT');
        return answers as never;
      } catch (error) {
        db.exec('ROLLBACK');
        throw error;
      }
    },
    ask: <Row>(sql: string, ...values: SQLInputValue[]) => plain(statementOf(sql).all(...values)) as Row[],
    close: () => db.close(),
  };
}
