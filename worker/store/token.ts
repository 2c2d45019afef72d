import { base64Url, sha256Hex } from '../secrets.ts';
import type { Database, Statement } from './database.ts';

/** Random, single use, bound to a purpose; only the hash is kept. */
export interface NewToken {
  readonly purpose: 'confirm' | 'push';
  readonly subject: string;
  readonly expiresAtMs: number;
}

export function newToken(): string {
  return base64Url(crypto.getRandomValues(new Uint8Array(24)));
}

export function tokenStore(db: Database) {
  return {
    async put(token: string, { purpose, subject, expiresAtMs }: NewToken): Promise<void> {
      await db.write('INSERT OR IGNORE INTO token (hash, purpose, subject, expires_at) VALUES (?, ?, ?, ?)', await sha256Hex(token), purpose, subject, expiresAtMs);
    },
    /** What the token stands for, without using it up; null for any that is not one. */
    async subject(token: string, purpose: NewToken['purpose'], nowMs: number): Promise<string | null> {
      if (!/^[A-Za-z0-9_-]{32}$/.test(token)) return null;
      const [row] = await db.read<{ subject: string }>('SELECT subject FROM token WHERE hash = ? AND purpose = ? AND expires_at > ?', await sha256Hex(token), purpose, nowMs);
      return row?.subject ?? null;
    },
    /** With one of them the others of the same subject are used up. */
    drop(subject: string): Statement {
      return { sql: 'DELETE FROM token WHERE subject = ?', values: [subject] };
    },
    dropExpired(nowMs: number): Statement {
      return { sql: 'DELETE FROM token WHERE expires_at <= ?', values: [nowMs] };
    },
  };
}

export type TokenStore = ReturnType<typeof tokenStore>;
