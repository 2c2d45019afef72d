import type { Database, Statement } from './database.ts';

export type LogLevel = 'info' | 'warning' | 'error';

export interface LogEntry {
  readonly level: LogLevel;
  readonly step: string;
  /** What happened, in fixed words: `dead-letter`, `judge-threw`. Never an address, a token or text from outside. */
  readonly event: string;
  readonly detail?: Readonly<Record<string, string | number | null>>;
}

const KEPT_MS = 14 * 24 * 3_600_000;

export function logStore(db: Database) {
  return {
    async write(entries: readonly LogEntry[], nowMs: number): Promise<void> {
      if (entries.length === 0) return;
      const list = entries.map((entry) => ({ ...entry, detail: entry.detail === undefined ? null : JSON.stringify(entry.detail) }));
      const sql = `INSERT INTO log (at, level, step, event, detail)
        SELECT ?2, value ->> 'level', value ->> 'step', value ->> 'event', value ->> 'detail' FROM json_each(?1)`;
      await db.write(sql, JSON.stringify(list), nowMs);
    },
    newest(count: number): Promise<{ at: number; level: LogLevel; step: string; event: string; detail: string | null }[]> {
      return db.read('SELECT at, level, step, event, detail FROM log ORDER BY id DESC LIMIT ?', count);
    },
    dropOld(nowMs: number): Statement {
      return { sql: 'DELETE FROM log WHERE at < ?', values: [nowMs - KEPT_MS] };
    },
  };
}

export type LogStore = ReturnType<typeof logStore>;
