import type { Database, Statement } from './database.ts';

/** Addresses that are never written to again, as keyed hashes: bounced hard, complained, or forgotten for good. */
export function suppressionStore(_db: Database) {
  return {
    add(owner: string, reason: 'bounced' | 'complained' | 'forgotten', nowMs: number): Statement {
      return { sql: 'INSERT OR IGNORE INTO suppression (owner, reason, stored_at) VALUES (?, ?, ?)', values: [owner, reason, nowMs] };
    },
    remove(owner: string): Statement {
      return { sql: 'DELETE FROM suppression WHERE owner = ?', values: [owner] };
    },
  };
}

export type SuppressionStore = ReturnType<typeof suppressionStore>;
