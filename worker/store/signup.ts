import type { Database, Statement } from './database.ts';

/** Somebody asked for briefs to an address that has not said yes. Nothing else is made of it before it has. */
export interface Signup {
  readonly owner: string;
  readonly id: string;
  readonly address: string;
  /** The checked request as JSON. */
  readonly body: string;
}

/** A mail that asks: leased to one sender. */
export interface SignupToMail extends Signup {
  readonly attempts: number;
  /** The subscription that the owner has already. */
  readonly subscriptionId: string | null;
  readonly linkVersion: number | null;
  readonly isSuppressed: 0 | 1;
}

/** Who has not said yes by then is forgotten. */
export const UNCONFIRMED_MS = 48 * 3_600_000;
/** An address is asked once a day, whoever asks how often. */
const ASKED_AGAIN_MS = 24 * 3_600_000;
const MOST_ATTEMPTS = 5;

export function signupStore(db: Database) {
  return {
    /** One row an owner. One that is there keeps what it holds: nobody changes what another asked for. */
    add(signup: Signup, nowMs: number): Promise<number> {
      return db.write(
        `INSERT INTO signup (owner, id, address, body, mail_at, expires_at, stored_at) VALUES (?1, ?2, ?3, ?4, ?5, ?5 + ${UNCONFIRMED_MS}, ?5)
          ON CONFLICT (owner) DO UPDATE SET mail_at = ?5, mailed_at = NULL, attempts = 0, expires_at = ?5 + ${UNCONFIRMED_MS},
            address = ?3, id = CASE body WHEN '{}' THEN ?2 ELSE id END, body = CASE body WHEN '{}' THEN ?4 ELSE body END
          WHERE mailed_at <= ?5 - ${ASKED_AGAIN_MS}`,
        signup.owner, signup.id, signup.address, signup.body, nowMs,
      );
    },
    /** Leases mails that are to be sent. */
    claim(nowMs: number, limit: number): Promise<SignupToMail[]> {
      return db.take<SignupToMail>(
        `UPDATE signup SET lease_until = ?1 + 60000, attempts = attempts + 1
          WHERE owner IN (SELECT owner FROM signup WHERE mail_at <= ?1 AND (lease_until IS NULL OR lease_until <= ?1) ORDER BY mail_at LIMIT ?2)
          RETURNING owner, id, address, body, attempts,
            (SELECT s.id FROM subscription AS s WHERE s.owner = signup.owner) AS subscriptionId,
            (SELECT s.link_version FROM subscription AS s WHERE s.owner = signup.owner) AS linkVersion,
            EXISTS (SELECT 1 FROM suppression AS x WHERE x.owner = signup.owner) AS isSuppressed`,
        nowMs, limit,
      );
    },
    mailed(owner: string, nowMs: number): Statement {
      return { sql: 'UPDATE signup SET mail_at = NULL, lease_until = NULL, mailed_at = ?2 WHERE owner = ?1', values: [owner, nowMs] };
    },
    /** Later, or not at all after five attempts. */
    postpone(owner: string, nowMs: number): Statement {
      return {
        sql: `UPDATE signup SET lease_until = NULL, mail_at = CASE WHEN attempts < ${MOST_ATTEMPTS} THEN ?2 + attempts * 120000 ELSE NULL END,
          mailed_at = CASE WHEN attempts < ${MOST_ATTEMPTS} THEN mailed_at ELSE ?2 END WHERE owner = ?1`,
        values: [owner, nowMs],
      };
    },
    /** Nothing is to be confirmed here: only that the address was written to is kept, for its day. */
    blank(owner: string): Statement {
      return { sql: `UPDATE signup SET address = '', body = '{}', id = id || '-done' WHERE owner = ? AND id NOT LIKE '%-done'`, values: [owner] };
    },
    async waiting(nowMs: number): Promise<boolean> {
      const rows = await db.read('SELECT 1 FROM signup WHERE mail_at <= ?1 AND (lease_until IS NULL OR lease_until <= ?1) LIMIT 1', nowMs);
      return rows.length > 0;
    },
    async byId(id: string): Promise<Signup | null> {
      const [row] = await db.read<Signup>('SELECT owner, id, address, body FROM signup WHERE id = ?', id);
      return row ?? null;
    },
    remove(owner: string): Statement {
      return { sql: 'DELETE FROM signup WHERE owner = ?', values: [owner] };
    },
    /** With the link that was sent for it. */
    forget(owner: string): Statement[] {
      return [{ sql: 'DELETE FROM token WHERE subject = (SELECT id FROM signup WHERE owner = ?)', values: [owner] }, this.remove(owner)];
    },
    dropExpired(nowMs: number): Statement {
      return { sql: 'DELETE FROM signup WHERE expires_at <= ?', values: [nowMs] };
    },
  };
}

export type SignupStore = ReturnType<typeof signupStore>;
