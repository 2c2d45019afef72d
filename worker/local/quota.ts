// npm run quota -- --sites 200 [--at 47.26,11.44] [--brief 05:00] [--steps 20]: how a morning's questions to the weather
// service fit into what it gives for nothing. Asks nobody. Exit 1 when they do not fit before the first brief.
import { readFileSync } from 'node:fs';
import path from 'node:path';
import { parseArgs } from 'node:util';
import { parseSourceOrder } from '../../lib/config/source-order.ts';
import { HOUR_MS, MINUTE_MS } from '../../lib/time.ts';
import { FREE_QUOTA } from '../sources/quota.ts';
import { planRequests } from '../sources/request-plan.ts';

const HELP = 'npm run quota -- --sites 200 [--at LATITUDE,LONGITUDE] [--brief HH:MM] [--steps SITES WITH A PRESSURE STEP]';
/** Fetching begins this long before the first brief. */
const LEAD_MS = 2 * HOUR_MS;
const SITES_PER_REQUEST = 8;
const REQUEST_MS = 2000;

function stop(message: string): never {
  console.error(`${message}\n${HELP}`);
  process.exit(2);
}

function wholeNumber(text: string, name: string, most: number): number {
  return /^\d{1,6}$/.test(text) && Number(text) <= most ? Number(text) : stop(`--${name} "${text}": a whole number up to ${most}`);
}

const { values } = parseArgs({
  options: { sites: { type: 'string', default: '200' }, at: { type: 'string', default: '47.26,11.44' }, brief: { type: 'string', default: '05:00' }, steps: { type: 'string', default: '0' } },
});
const sites = wholeNumber(values.sites, 'sites', 100_000);
const sitesWithStep = wholeNumber(values.steps, 'steps', sites);
const [latDeg = NaN, lonDeg = NaN, ...more] = values.at.split(',').map(Number);
const isPlace = Math.abs(latDeg) <= 90 && Math.abs(lonDeg) <= 180 && more.length === 0;
if (!isPlace) stop(`--at "${values.at}": latitude and longitude in degrees, 47.26,11.44`);
if (!/^([01]\d|2[0-3]):[0-5]\d$/.test(values.brief)) stop(`--brief "${values.brief}": a time of day in UTC, 05:00`);

const file = path.resolve(import.meta.dirname, '../../config/sources.json');
const order = parseSourceOrder(JSON.parse(readFileSync(file, 'utf8')));
if (!order.ok) stop(order.error.map(({ path: at, problem }) => `config/sources.json ${at}: ${problem}`).join('\n'));

const briefMs = Date.parse(`2027-05-14T${values.brief}:00Z`);
const plan = planRequests(order.value, { sites, place: { latDeg, lonDeg }, sitesPerRequest: SITES_PER_REQUEST, sitesWithStep, fromMs: briefMs - LEAD_MS, quota: FREE_QUOTA, gapMs: REQUEST_MS });

const clock = (ms: number) => new Date(ms).toISOString().slice(11, 16);
const row = (cells: readonly string[]) => cells.map((cell, i) => (i === 0 ? cell.padEnd(54) : cell.padStart(9))).join('');
const amount = (value: number) => value.toFixed(1);

console.log(`${sites} sites at ${values.at}, ${SITES_PER_REQUEST} to a request, one full refresh:\n`);
console.log(row(['source', 'variables', 'members', 'a site', 'requests', 'in all']));
for (const line of plan.lines) console.log(row([line.source, String(line.variables), String(line.members), amount(line.weightPerSite), String(line.requests), amount(line.weight)]));
console.log(row(['', '', '', '', String(plan.requests.length), amount(plan.totalWeight)]));

const perMinute = new Map<number, { requests: number; weight: number }>();
for (const { atMs, request } of plan.requests) {
  const minute = Math.floor(atMs / MINUTE_MS) * MINUTE_MS;
  const before = perMinute.get(minute) ?? { requests: 0, weight: 0 };
  perMinute.set(minute, { requests: before.requests + 1, weight: before.weight + request.weight });
}
console.log(`\nThe free quota: ${FREE_QUOTA.perMinute} a minute, ${FREE_QUOTA.perHour} an hour, ${FREE_QUOTA.perDay} a day. One request after the other, from ${clock(briefMs - LEAD_MS)} UTC:\n`);
console.log(row(['minute', 'requests', 'weight']));
for (const [minute, { requests, weight }] of perMinute) console.log(row([clock(minute), String(requests), amount(weight)]));

const lastMs = plan.requests.at(-1)?.atMs ?? briefMs - LEAD_MS;
const takesMin = Math.ceil((lastMs + REQUEST_MS - (briefMs - LEAD_MS)) / MINUTE_MS);
const inTime = lastMs + REQUEST_MS <= briefMs && plan.totalWeight <= FREE_QUOTA.perDay;
console.log(`\n${amount((plan.totalWeight / FREE_QUOTA.perDay) * 100)} % of a day's quota, ${takesMin} min. First brief at ${values.brief} UTC: ${inTime ? 'in time' : 'NOT in time: fewer sites, fewer models in config/sources.json, or a key'}.`);
process.exitCode = inTime ? 0 : 1;
