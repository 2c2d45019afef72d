/**
 * Does the work of several lanes side by side, that of one lane in turn: one slow receiver holds up only its own lane.
 * Never rejects for a piece of work that fails: `work` has to see to that itself.
 */
export async function inLanes<Item>(items: readonly Item[], laneOf: (item: Item) => string, sideBySide: number, work: (item: Item) => Promise<void>): Promise<void> {
  const lanes = [...Map.groupBy(items, laneOf).values()];
  const runners = Array.from({ length: Math.min(sideBySide, lanes.length) }, async () => {
    for (let lane = lanes.shift(); lane !== undefined; lane = lanes.shift()) {
      for (const item of lane) await work(item);
    }
  });
  await Promise.all(runners);
}
