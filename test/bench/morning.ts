// The morning before anything is sent - due, fetch, assess - on SQLite in this process: how it grows with sites, and with
// subscribers a site. Everybody who asks for the same wing and sheet shares one judged day.
import { tick } from '../../worker/morning/tick.ts';
import { answerCalls } from '../../worker/morning/queue.ts';
import { FastHouse, hook } from '../support/fast-house.ts';
import { exponentOf, median, say } from './turns.ts';

const DUE = '2027-05-14T04:00:00Z';

async function morningMs(sites: number, perSite: number): Promise<number> {
  const house = new FastHouse({ nowIso: DUE });
  const subscribers = Array.from({ length: sites * perSite }, (_, index) => ({ id: `s${index}`, sites: [`site-${index % sites}`], urls: [hook(`h${index}`)], dueIso: DUE }));
  for (let from = 0; from < subscribers.length; from += 5000) await house.seed(subscribers.slice(from, from + 5000), Array.from({ length: sites }, (_, index) => `site-${index}`));
  const begunMs = performance.now();
  await tick(house.services(), house.nowMs);
  for (let step = house.queue.shift(); step !== undefined; step = house.queue.shift()) {
    if (step === 'deliver') continue;
    await answerCalls(house.services(), [{ id: 'call', body: { v: 1, step }, attempts: 1, ack: () => undefined, retry: () => undefined }]);
  }
  const ms = performance.now() - begunMs;
  const judged = house.d1.ask('SELECT COUNT(*) AS n FROM brief') as { n: number }[];
  if ((judged[0]?.n ?? 0) < sites) throw new Error(`${judged[0]?.n} briefs for ${sites} sites`);
  return ms;
}

async function grow(name: string, sizes: readonly number[], at: (size: number) => Promise<number>): Promise<void> {
  const points: { size: number; cost: number }[] = [];
  for (const size of sizes) points.push({ size, cost: median([await at(size), await at(size), await at(size)]) });
  say({ name, exponent: exponentOf(points), points });
}

await morningMs(10, 1);
await grow('morning, in sites', [10, 50, 250], (sites) => morningMs(sites, 1));
await grow('morning, in subscribers a site', [1, 10, 50], (perSite) => morningMs(20, perSite));
