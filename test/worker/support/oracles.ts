// The six oracles after every fault of delivery (O1 to O6 of the fault catalogue), as sentences about what is wrong.
import { env } from 'cloudflare:workers';
import { health } from '../../../worker/routes/health.ts';
import type { House } from './house.ts';

export interface Expected {
  /** Who has to be told, by the name at the end of their address, and how many minutes after the due time at the latest. */
  readonly told: Readonly<Record<string, number>>;
  readonly dueIso: string;
  /** What may be read in every message: the verdict that was judged, or that nothing can be said. */
  readonly verdict: 'within' | 'unknown';
  /** Sends more than messages: what was in flight when something ended. */
  readonly repeats?: number;
  /** What became of the rows, by state. */
  readonly books: Readonly<Record<string, number>>;
  /** What health has to show of the fault: an event of the log or a warning. Nothing when the fault was overcome. */
  readonly seen?: RegExp;
}

export async function oracles(house: House, { told, dueIso, verdict, repeats = 0, books, seen }: Expected): Promise<string[]> {
  const wrong: string[] = [];
  const bodies = house.posts.map((post) => ({ ...post, read: JSON.parse(post.body) as { data?: { id: string; validUntil: string; days: { verdict: string }[] } } })).filter(({ read }) => read.data?.id !== undefined);
  // O1: nothing is said that was not judged.
  for (const { url, read } of bodies) for (const day of read.data?.days ?? []) if (day.verdict !== verdict) wrong.push(`O1: ${url} was told "${day.verdict}"`);
  // O2: what was created is what is sent, expired, dead, suppressed or pending, with a reason.
  const rows = await env.DB.prepare('SELECT state, COUNT(*) AS n, SUM(reason IS NULL) AS unexplained FROM outbox GROUP BY state').all<{ state: string; n: number; unexplained: number }>();
  const found = Object.fromEntries(rows.results.map((row) => [row.state, row.n]));
  const states = new Set([...Object.keys(found), ...Object.keys(books)]);
  if ([...states].some((state) => found[state] !== books[state])) wrong.push(`O2: the books say ${JSON.stringify(found)}`);
  for (const row of rows.results) if (row.state !== 'pending' && row.unexplained > 0) wrong.push(`O2: ${row.unexplained} rows ended as ${row.state} without a reason`);
  // O3: one id a message, the same words under it, and no more sends than messages and what was in flight.
  const byId = Map.groupBy(bodies, ({ id }) => id);
  for (const [id, same] of byId) if (new Set(same.map(({ body }) => body)).size > 1) wrong.push(`O3: ${id} said different things`);
  if (bodies.length - byId.size > repeats) wrong.push(`O3: ${bodies.length - byId.size} repeats`);
  for (const name of Object.keys(told)) if (new Set(bodies.filter(({ url }) => url.endsWith(`/${name}`)).map(({ id }) => id)).size > 1) wrong.push(`O3: ${name} would see more than one message`);
  // O4: nothing after it has ceased to hold.
  for (const { url, atMs, read } of bodies) if (atMs >= Date.parse(read.data?.validUntil ?? '')) wrong.push(`O4: ${url} was told after it had ceased to hold`);
  // O5: everyone in time.
  for (const [name, withinMin] of Object.entries(told)) {
    const first = bodies.find(({ url }) => url.endsWith(`/${name}`));
    if (first === undefined) wrong.push(`O5: ${name} was not told`);
    else if (first.atMs - Date.parse(dueIso) > withinMin * 60_000) wrong.push(`O5: ${name} was told after ${(first.atMs - Date.parse(dueIso)) / 60_000} minutes`);
  }
  // O6: who looks at health sees it, and sees nothing when there is nothing.
  const text = JSON.stringify(await (await health(house.services())).json());
  if (seen === undefined ? /given up|could not be delivered|stuck/.test(text) : !seen.test(text)) wrong.push(`O6: health says ${text.slice(0, 600)}`);
  return wrong;
}
