/** The wait between two messages once a host has said that they are too many, and the longest it becomes. */
const FIRST_GAP_MS = 50;
const MOST_GAP_MS = 2000;

/** Answers to what was sent side by side are one answer. */
const ONE_ANSWER_MS = 500;

/** So long a chunk waits for a busy host; what is left of it comes another minute. */
const PATIENCE_MS = 10_000;

interface Pace {
  readonly sinceMs: number;
  slowedMs: number;
  gapMs: number;
  line: Promise<unknown>;
}

/**
 * How fast the messages of one chunk go to a host that thousands share. After its first 429 they go in single file: each
 * further one doubles the gap, each message that it takes narrows it.
 */
export function pacer(sleep: (ms: number) => Promise<void>, nowMs: () => number) {
  const paces = new Map<string, Pace>();
  return {
    /** null where nobody has to wait; else whether its turn came before patience ended. */
    turn(host: string): Promise<boolean> | null {
      const pace = paces.get(host);
      if (pace === undefined) return null;
      const turn = pace.line.then(async () => {
        if (nowMs() - pace.sinceMs > PATIENCE_MS) return false;
        await sleep(pace.gapMs);
        return true;
      });
      pace.line = turn;
      return turn;
    },
    answered(host: string, how: 'taken' | 'busy'): void {
      const pace = paces.get(host);
      const now = nowMs();
      if (pace === undefined) {
        if (how === 'busy') paces.set(host, { sinceMs: now, slowedMs: now, gapMs: FIRST_GAP_MS, line: Promise.resolve() });
      } else if (how === 'taken') {
        pace.gapMs *= 0.95;
      } else if (now - pace.slowedMs > ONE_ANSWER_MS) {
        pace.gapMs = Math.min(MOST_GAP_MS, pace.gapMs * 2);
        pace.slowedMs = now;
      }
    },
  };
}
