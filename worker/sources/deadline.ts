/** A moment after which nothing is waited for any more. It needs no clock: the platform's clock stands still between waits. */
export interface Deadline {
  readonly passed: Promise<typeof PASSED>;
  readonly hasPassed: () => boolean;
  /** Stops the timer; `passed` then never settles. */
  readonly stop: () => void;
}

export const PASSED = Symbol('the deadline has passed');

export function deadlineIn(delayMs: number): Deadline {
  const { promise, resolve } = Promise.withResolvers<typeof PASSED>();
  let hasPassed = false;
  const timer = setTimeout(() => {
    hasPassed = true;
    resolve(PASSED);
  }, delayMs);
  return { passed: promise, hasPassed: () => hasPassed, stop: () => clearTimeout(timer) };
}

/** What comes first: the work, or any of the deadlines. Work that fails after that is nobody's concern. */
export function before<T>(work: Promise<T>, ...deadlines: readonly Deadline[]): Promise<T | typeof PASSED> {
  work.catch(() => undefined);
  return Promise.race([work, ...deadlines.map((deadline) => deadline.passed)]);
}
