// Reading a service's answer: text to forecast with every check of it, against nothing but JSON.parse of the same text.
import { readFileSync } from 'node:fs';
import path from 'node:path';
import { parseSourceOrder } from '../../lib/config/source-order.ts';
import { forecastUrl } from '../../worker/sources/open-meteo/address.ts';
import { forecastOf } from '../../worker/sources/open-meteo/open-meteo.ts';
import { readAnswer } from '../../worker/sources/open-meteo/read-answer.ts';
import { columnsFor } from '../../worker/sources/open-meteo/variables.ts';
import { toMetForecast } from '../../worker/sources/met-norway/to-forecast.ts';
import { toNwsForecast } from '../../worker/sources/nws/to-forecast.ts';
import { HOUR_MS } from '../../lib/time.ts';
import { metNorway } from '../support/forecast-server/met-norway.ts';
import { gridAnswer } from '../support/forecast-server/nws.ts';
import { openMeteo } from '../support/forecast-server/open-meteo.ts';
import { groundAtM } from '../support/forecast-server/weather.ts';
import { dayInputs } from './days.ts';
import { inTurns, say } from './turns.ts';

const NOW_MS = Date.parse('2027-05-14T04:00:00Z');
const [{ site } = { site: undefined }] = dayInputs();
const order = parseSourceOrder(JSON.parse(readFileSync(path.join(import.meta.dirname, '../../config/sources.json'), 'utf8')));
if (!order.ok || site === undefined) throw new Error('config cannot be read');

async function against(name: string, answer: unknown, read: (json: unknown) => { readonly ok: boolean }): Promise<void> {
  const text = JSON.stringify(answer);
  const own = (): unknown => {
    const result = read(JSON.parse(text) as unknown);
    if (!result.ok) throw new Error(`${name}: ${JSON.stringify(result)}`);
    return result;
  };
  say(await inTurns({ name: `${name}, ${(text.length / 1000).toFixed(0)} kB`, yardstick: 'JSON.parse of the same text', own, yard: () => JSON.parse(text) as unknown, warmUp: 100, rounds: 150 }));
}

for (const entry of order.value.sources.filter(({ provider, id }) => provider === 'open-meteo' && ['open-meteo:icon_d2', 'open-meteo:icon_d2_eps'].includes(id))) {
  if (entry.provider !== 'open-meteo') continue;
  const ask = { ...entry, declares: [...entry.declares, ...entry.mayGive], fromMs: NOW_MS - 6 * HOUR_MS, toMs: NOW_MS + 22 * HOUR_MS };
  const url = forecastUrl({
    origin: 'http://127.0.0.1', path: entry.kind === 'ensemble' ? '/v1/ensemble' : '/v1/forecast', model: entry.model, points: [site],
    variables: columnsFor(ask).keys(), fromMs: ask.fromMs - HOUR_MS, toMs: ask.toMs + HOUR_MS,
  });
  const { body } = openMeteo(new URL(url), { groundAtM });
  await against(entry.id, body, (json) => {
    const answer = readAnswer(json, 1);
    const [location] = answer.ok ? answer.value : [];
    return location === undefined ? answer : forecastOf(entry, site, { location, ask, pressures: () => ({ a: null, b: null }), runAt: '2027-05-14T00:00:00Z', fetchedAt: '2027-05-14T04:00:00Z' });
  });
}
await against('MET Norway', metNorway(site, NOW_MS, { groundAtM }), (json) => toMetForecast(json, NOW_MS));
await against('National Weather Service', gridAnswer(31, 80, NOW_MS, { groundAtM }), toNwsForecast);
