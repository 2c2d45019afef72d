import type { Database } from './database.ts';

/** A message to the terminal of the machine that runs a local Dawnmargin; the start command prints it. */
export interface TerminalMessage {
  readonly line: number;
  readonly messageId: string;
  readonly title: string;
  readonly text: string;
}

export function terminalStore(db: Database) {
  return {
    /** Writing the same message twice leaves one. */
    async write(message: Omit<TerminalMessage, 'line'>, nowMs: number): Promise<void> {
      const sql = 'INSERT INTO terminal (message_id, title, text, written_at) VALUES (?, ?, ?, ?) ON CONFLICT (message_id) DO NOTHING';
      await db.write(sql, message.messageId, message.title, message.text, nowMs);
    },
    after(line: number): Promise<TerminalMessage[]> {
      const sql = 'SELECT line, message_id AS messageId, title, text FROM terminal WHERE line > ? ORDER BY line LIMIT 50';
      return db.read<TerminalMessage>(sql, line);
    },
  };
}

export type TerminalStore = ReturnType<typeof terminalStore>;
