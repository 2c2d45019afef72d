import type { JudgedDay } from '../../lib/brief/day.ts';
import { judgedDate } from '../morning/times.ts';
import type { Client, Progress } from './client.ts';
import type { Plan } from './plan.ts';

const POLL_MS = 100;
const SWEEP_EVERY_MS = 2000;
/** The morning itself takes seconds; with services that hang, what is there by then is what is said. */
const MOST_MS = 55_000;

/** Runs this morning now and waits until every brief is computed and every message has been tried. */
export async function runMorning(client: Client, plan: Plan): Promise<readonly JudgedDay[]> {
  const startedMs = Date.now();
  await client.morning();
  let lastSweepMs = Date.now();
  for (let progress = await client.progress(); !isSettled(progress); progress = await client.progress()) {
    if (Date.now() - startedMs > MOST_MS) break;
    await new Promise((resolve) => setTimeout(resolve, POLL_MS));
    if (Date.now() - lastSweepMs < SWEEP_EVERY_MS) continue;
    // A queue of this machine forgets its calls when the machine stops: what was left over is woken here.
    await client.sweep();
    lastSweepMs = Date.now();
  }
  const sites = new Map(plan.sites.map((site) => [site.id, site]));
  return Promise.all(plan.pairs.map(({ siteId, wingKey, sheetId }) => {
    const site = sites.get(siteId);
    if (site === undefined) throw new Error(`no site "${siteId}" in the plan`);
    return client.day({ siteId, date: judgedDate(site, startedMs), wing: wingKey, sheet: sheetId });
  }));
}

function isSettled({ work, outbox }: Progress): boolean {
  return work.assess === 0 && outbox.pending === 0;
}
