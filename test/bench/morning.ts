// The morning before anything is sent - due, fetch, assess - on SQLite in this process: how it grows with sites, and with
// subscribers a site. Everybody who asks for the same wing and sheet shares one judged day. Counted is the time of the
// processor, which another process on the machine does not lengthen, and only after a first small morning of the same
// house, so that no statement is new to the database. Growth is the slope of all points, the smallest included.
import { tick } from '../../worker/morning/tick.ts';
import { answerCalls } from '../../worker/morning/queue.ts';
import { FastHouse, hook } from '../support/fast-house.ts';
import { exponentOf, median, say } from './turns.ts';

const FIRST = '2027-05-14T02:00:00Z';
const DUE = '2027-05-14T04:00:00Z';

async function untilSent(house: FastHouse): Promise<void> {
  await tick(house.services(), house.nowMs);
  for (let step = house.queue.shift(); step !== undefined; step = house.queue.shift()) {
    if (step === 'deliver') continue;
    await answerCalls(house.services(), [{ id: 'call', body: { v: 1, step }, attempts: 1, ack: () => undefined, retry: () => undefined }]);
  }
}

async function morningMs(sites: number, perSite: number): Promise<number> {
  const house = new FastHouse({ nowIso: FIRST });
  const siteIds = ['first', ...Array.from({ length: sites }, (_, index) => `site-${index}`)];
  const subscribers = Array.from({ length: sites * perSite }, (_, index) => ({ id: `s${index}`, sites: [`site-${index % sites}`], urls: [hook(`h${index}`)], dueIso: DUE }));
  await house.seed([{ id: 'first', sites: ['first'], urls: [hook('first')], dueIso: FIRST }], siteIds);
  for (let from = 0; from < subscribers.length; from += 5000) await house.seed(subscribers.slice(from, from + 5000), siteIds);
  await untilSent(house);
  house.nowMs = Date.parse(DUE);
  const before = process.cpuUsage();
  await untilSent(house);
  const { user, system } = process.cpuUsage(before);
  const judged = house.d1.ask('SELECT COUNT(*) AS n FROM brief') as { n: number }[];
  if ((judged[0]?.n ?? 0) <= sites) throw new Error(`${judged[0]?.n} briefs for ${sites + 1} sites`);
  house.d1.close();
  return (user + system) / 1000;
}

async function grow(name: string, sizes: readonly number[], at: (size: number) => Promise<number>): Promise<void> {
  const points: { size: number; cost: number }[] = [];
  for (const size of sizes) {
    // A short one is measured more often: it is easier to disturb.
    const costs: number[] = [];
    for (let round = 0; round < (size < 100 ? 15 : 3); round += 1) costs.push(await at(size));
    points.push({ size, cost: median(costs) });
  }
  say({ name, exponent: exponentOf(points), points });
}

await morningMs(100, 1);
await grow('morning, in sites', [10, 100, 1000], (sites) => morningMs(sites, 1));
await grow('morning, in subscribers a site', [1, 10, 100], (perSite) => morningMs(20, perSite));
