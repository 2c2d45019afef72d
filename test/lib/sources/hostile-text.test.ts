// T3: no text of a provider gets past the readers. Every text of a clean answer, and every key, in turn replaced by a hostile one.
import { expect, test } from 'vitest';
import { metNorway } from '../../support/forecast-server/met-norway.ts';
import { gridAnswer } from '../../support/forecast-server/nws.ts';
import { toMetForecast } from '../../../worker/sources/met-norway/to-forecast.ts';
import { toNwsForecast } from '../../../worker/sources/nws/to-forecast.ts';
import { cleanLocation, entryOf, read, textOf } from './pipeline.ts';

const HOSTILE = '<script>alert(1)</script>\r\nBEGIN:VEVENT\r\nBcc: evil@evil.example \u202E';
const nowMs = Date.parse('2027-05-14T02:40:00Z');
const terrain = { groundAtM: () => 1180 };
const entry = entryOf('open-meteo:icon_d2');

type Path = readonly (string | number)[];

/** Where a text stands or an object has keys; of a list only the first two items, since the rest are alike. */
function placesOf(value: unknown, path: Path = []): Path[] {
  if (typeof value === 'string') return [path];
  if (Array.isArray(value)) return value.slice(0, 2).flatMap((item, i) => placesOf(item, [...path, i]));
  if (typeof value !== 'object' || value === null) return [];
  return Object.entries(value).flatMap(([key, item]) => [[...path, key, 'its key'], ...placesOf(item, [...path, key])]);
}

/** A copy with the text there, or the key there, replaced. */
function spoilt(value: unknown, [first, ...rest]: Path): unknown {
  if (first === undefined) return HOSTILE;
  if (Array.isArray(value)) return value.map((item: unknown, i) => (i === first ? spoilt(item, rest) : item));
  return Object.fromEntries(Object.entries(value as object).map(([key, item]) => {
    if (key !== first) return [key, item];
    return rest[0] === 'its key' ? [HOSTILE, item] : [key, spoilt(item, rest)];
  }));
}

const payloads: readonly [string, unknown, (json: unknown) => unknown][] = [
  ['Open-Meteo', cleanLocation(entry), (json) => read(textOf(json), entry)],
  ['MET Norway', metNorway({ latDeg: 60.1, lonDeg: 9.1 }, nowMs, terrain), (json) => toMetForecast(json, nowMs)],
  ['NWS', gridAnswer(2720, 5208, nowMs, terrain), toNwsForecast],
];

test.each(payloads)('%s', (_, payload, reader) => {
  const places = placesOf(payload);
  expect(places.length).toBeGreaterThan(30);
  let stillRead = 0;
  for (const place of places) {
    const answer = reader(spoilt(payload, place)) as { readonly ok: boolean };
    expect(JSON.stringify(answer), place.join('.')).not.toMatch(/script|alert|VEVENT|evil|\u202e/i);
    if (answer.ok) stillRead += 1;
  }
  // Most places cost a field or nothing: it is the readers that drop the text, not the refusal of the answer.
  expect(stillRead).toBeGreaterThan(10);
});
