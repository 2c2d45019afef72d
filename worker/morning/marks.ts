import type { Database, Statement } from '../store/database.ts';
import { statementsOf, type Mark } from '../store/mark.ts';

interface Waiting {
  readonly marks: readonly (Mark | Statement)[];
  readonly resolve: () => void;
  readonly reject: (error: unknown) => void;
}

/**
 * Marks what has been sent, each piece as soon as it can be: while one write is under way, what has been sent meanwhile
 * waits and is written together. `gather` is the moment that is waited for others that end at the same time: two writes cost
 * twice as much as one. Whoever marks waits until it is written, so that no more is ever unmarked than is sent
 * side by side.
 */
export function marker(db: Pick<Database, 'together'>, gather: () => Promise<void>): (marks: readonly (Mark | Statement)[]) => Promise<void> {
  let waiting: Waiting[] = [];
  let isWriting = false;

  async function write(group: readonly Waiting[]): Promise<void> {
    try {
      await db.together(statementsOf(group.flatMap(({ marks }) => marks)));
      for (const { resolve } of group) resolve();
    } catch (error) {
      // One bad mark must not take its neighbours with it.
      if (group.length === 1) group[0]?.reject(error);
      else for (const one of group) await write([one]);
    }
  }

  async function writeAll(): Promise<void> {
    isWriting = true;
    while (waiting.length > 0) {
      await gather();
      const group = waiting;
      waiting = [];
      await write(group);
    }
    isWriting = false;
  }

  return (marks) => new Promise((resolve, reject) => {
    waiting.push({ marks, resolve, reject });
    if (!isWriting) void writeAll();
  });
}
