// npm run plan -- --sites 20 --subscribers 500 [--own-wings 50] [--views 4] [--on free|paid] [--weather WEIGHT A DAY] [--json]:
// what a house of that size needs of the platform, against what a plan gives. Asks nobody. Exit 0 only when it fits.
import { readFileSync } from 'node:fs';
import path from 'node:path';
import { parseArgs } from 'node:util';
import figures from '../../config/running-costs.json' with { type: 'json' };
import { parseSourceOrder } from '../../lib/config/source-order.ts';
import { FREE_QUOTA } from '../sources/quota.ts';
import { planRequests } from '../sources/request-plan.ts';
import { bindingLine, chargesOf, linesOf, needsOf, shareOf, type Line, type Prices } from './running-costs/model.ts';

const HELP = 'npm run plan -- --sites N --subscribers M [--own-wings N] [--views PAGES A SUBSCRIBER AND DAY] [--on free|paid] [--weather WEIGHT A DAY] [--json]';

function stop(message: string): never {
  console.error(`${message}\n${HELP}`);
  process.exit(2);
}

/** Beyond this no sum is exact any more, and no such house exists. */
const MOST = 9_999_999;

function wholeNumber(text: string, name: string, least = 0): number {
  const number = /^\d{1,7}$/.test(text) ? Number(text) : NaN;
  return number >= least ? number : stop(`--${name} "${text}": a whole number, ${least} to ${MOST}`);
}

/** A negative number would be taken for an option. */
function joined(args: readonly string[]): string[] {
  return args.flatMap((arg, index) => {
    if (/^--[a-z-]+$/.test(args[index - 1] ?? '') && /^-\d/.test(arg)) return [];
    return [/^--[a-z-]+$/.test(arg) && /^-\d/.test(args[index + 1] ?? '') ? `${arg}=${args[index + 1]}` : arg];
  });
}

function given() {
  try {
    const { values, tokens } = parseArgs({
      args: joined(process.argv.slice(2)), tokens: true,
      options: {
        sites: { type: 'string' }, subscribers: { type: 'string' }, 'own-wings': { type: 'string' }, views: { type: 'string', default: '4' },
        on: { type: 'string', default: 'free' }, weather: { type: 'string', default: String(FREE_QUOTA.perDay) }, json: { type: 'boolean', default: false },
      },
    });
    const names = tokens.flatMap((token) => (token.kind === 'option' ? [token.name] : []));
    const twice = names.find((name, index) => names.indexOf(name) !== index);
    return twice === undefined ? values : stop(`--${twice} is given twice`);
  } catch (error) {
    const [sentence = ''] = (error instanceof Error ? error.message : String(error)).split('\n');
    const [, name] = /'(--[a-z-]+)[^']*' argument/.exec(sentence) ?? [];
    return stop(name === undefined ? sentence : `${name} needs a value`);
  }
}

/** What a day of refreshed forecasts weighs at the service: the sites of the plan, the models of config, in the middle of Europe. */
function weatherLine(sites: number, limit: number): Line {
  const order = parseSourceOrder(JSON.parse(readFileSync(path.resolve(import.meta.dirname, '../../config/sources.json'), 'utf8')));
  if (!order.ok) return stop(order.error.map(({ path: at, problem }) => `config/sources.json ${at}: ${problem}`).join('\n'));
  const plan = planRequests(order.value, { sites: 1, place: { latDeg: 47.26, lonDeg: 11.44 }, sitesPerRequest: 1, sitesWithStep: 0, fromMs: 0, quota: FREE_QUOTA, gapMs: 0 });
  return { name: 'weight of forecast requests a day', need: Math.ceil(plan.totalWeight * sites * figures.counts.refreshesADay), limit };
}

const values = given();
if (values.sites === undefined || values.subscribers === undefined) stop('--sites and --subscribers are needed');
const sites = wholeNumber(values.sites, 'sites', 1);
const subscribers = wholeNumber(values.subscribers, 'subscribers');
const ownWings = values['own-wings'] === undefined ? Math.ceil(subscribers / 10) : wholeNumber(values['own-wings'], 'own-wings');
if (ownWings > subscribers) stop(`--own-wings ${ownWings}: at most one a subscriber, ${subscribers}`);
if (values.on !== 'free' && values.on !== 'paid') stop(`--on "${values.on}": free or paid`);
const plan = figures.plans[values.on];

const needs = needsOf(figures.counts, { sites, subscribers, ownWings, pageViewsPerSubscriber: wholeNumber(values.views, 'views') });
const lines = linesOf(plan, figures.counts, needs, weatherLine(sites, wholeNumber(values.weather, 'weather', 1)));
const fits = lines.every((line) => shareOf(line) <= 1);
process.exitCode = fits ? 0 : 1;

if (values.json) {
  console.log(JSON.stringify({ lines, fits }, null, 2));
} else {
  const whole = (value: number): string => value.toLocaleString('en', { maximumFractionDigits: 0 });
  const row = (cells: readonly string[]): string => cells.map((cell, index) => (index === 0 ? cell.padEnd(36) : cell.padStart(18))).join('');
  console.log(`${whole(sites)} sites, ${whole(subscribers)} subscribers, ${whole(ownWings)} with a wing of their own, on the ${values.on} plan (limits as read ${figures.plans.readOn}):\n`);
  console.log(row(['', 'need', 'limit', 'share']));
  for (const line of lines) console.log(row([line.name, whole(line.need), whole(line.limit), `${(100 * shareOf(line)).toFixed(1)} %`]));
  const binding = bindingLine(lines);
  const over = lines.filter((line) => shareOf(line) > 1).length;
  if (binding !== undefined) console.log(`\n${fits ? `It fits on all ${lines.length} lines; the first to give way: ${binding.name}.` : `It does not fit: ${over} of ${lines.length} lines ${over === 1 ? 'is' : 'are'} passed, first of all ${binding.name}.`}`);
  if (binding?.name.startsWith('weight')) console.log('With a key of the weather service its own limit counts: --weather WEIGHT A DAY. What does not fit is put off by the worker itself, and its sites say "cannot say".');
  const charges = chargesOf(figures.prices as Prices, needs);
  if (values.on === 'paid') {
    console.log(`\nA month at the prices of ${figures.prices.asOf} (${figures.prices.source}):`);
    for (const { name, amountAMonth, usd } of charges) console.log(row([name, whole(amountAMonth), '', `${usd.toFixed(2)} USD`]));
    console.log(row(['in all', '', '', `${charges.reduce((sum, { usd }) => sum + usd, 0).toFixed(2)} USD`]));
  }
}
