/**
 * Does the work of several lanes side by side, that of one lane in turn: one slow receiver holds up only its own lane.
 * What waits `outside` holds up nobody. Never rejects for a piece of work that fails: `work` has to see to that itself.
 */
export async function inLanes<Item>(
  items: readonly Item[],
  laneOf: (item: Item) => string,
  sideBySide: number,
  work: (item: Item, outside: <T>(waited: Promise<T>) => Promise<T>) => Promise<void>,
): Promise<void> {
  let free = sideBySide;
  const waiting: (() => void)[] = [];
  const enter = (): Promise<void> => {
    if (free === 0) return new Promise((resolve) => { waiting.push(resolve); });
    free -= 1;
    return Promise.resolve();
  };
  const leave = (): void => {
    const next = waiting.shift();
    if (next === undefined) free += 1;
    else next();
  };
  const outside = async <T>(waited: Promise<T>): Promise<T> => {
    leave();
    try {
      return await waited;
    } finally {
      await enter();
    }
  };
  await Promise.all([...Map.groupBy(items, laneOf).values()].map(async (lane) => {
    for (const item of lane) {
      await enter();
      try {
        await work(item, outside);
      } finally {
        leave();
      }
    }
  }));
}
