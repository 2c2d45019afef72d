/** Waits for work for so long and no longer. What was given up may still be carried out. */
export async function inTime<T>(work: Promise<T>, timeoutMs: number, whose: string): Promise<T> {
  const { promise: late, reject } = Promise.withResolvers<never>();
  const timer = setTimeout(() => reject(new Error(`${whose} did not answer within ${timeoutMs} ms`)), timeoutMs);
  try {
    return await Promise.race([work, late]);
  } finally {
    clearTimeout(timer);
  }
}
