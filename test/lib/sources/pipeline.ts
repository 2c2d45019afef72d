// From a provider's text to a judged day without a network: the adapters' own functions in the order in which the adapters
// call them, on a mild mountain launch whose clean day has no unknown hour.
import { readFileSync } from 'node:fs';
import path from 'node:path';
import type { DayInput } from '../../../lib/brief/day-input.ts';
import type { JudgedDay } from '../../../lib/brief/day.ts';
import { judgeDay } from '../../../lib/brief/judge-day.ts';
import type { CautionThresholds } from '../../../lib/brief/thresholds.ts';
import { parseSheets } from '../../../lib/config/sheet.ts';
import { parseSiteFeature } from '../../../lib/config/site.ts';
import { parseSourceOrder, type OpenMeteoSource } from '../../../lib/config/source-order.ts';
import { parseWingClasses } from '../../../lib/config/wing-classes.ts';
import { parseWing } from '../../../lib/config/wing.ts';
import type { Forecast } from '../../../lib/forecast/conditions.ts';
import type { SourceFailure } from '../../../lib/forecast/failure.ts';
import { failure, type Result } from '../../../lib/result.ts';
import type { LaunchSite, Site } from '../../../lib/site.ts';
import { epochOf, HOUR_MS } from '../../../lib/time.ts';
import { root } from '../../support/run-tool.ts';
import { openMeteo, type Location } from '../../support/forecast-server/open-meteo.ts';
import { forecastUrl } from '../../../worker/sources/open-meteo/address.ts';
import { forecastOf } from '../../../worker/sources/open-meteo/open-meteo.ts';
import { readAnswer } from '../../../worker/sources/open-meteo/read-answer.ts';
import type { Ask } from '../../../worker/sources/open-meteo/to-hours.ts';
import { columnsFor } from '../../../worker/sources/open-meteo/variables.ts';
import { withCompanions } from '../../../worker/sources/order.ts';
import { readJson } from '../../../worker/sources/read-json.ts';

function valueOf<T, E>(result: Result<T, E>): T {
  if (result.ok) return result.value;
  throw new Error(`test data that does not parse: ${JSON.stringify(result.error)}`);
}

function config(name: string): unknown {
  return JSON.parse(readFileSync(path.join(root, 'config', name), 'utf8'));
}

export const order = valueOf(parseSourceOrder(config('sources.json')));
export const sheets = valueOf(parseSheets(config('sheets.json'), { basis: 'required' }));
const thresholds = config('thresholds.json') as CautionThresholds;
const classes = valueOf(parseWingClasses(config('wing-classes.json')));

/** As the live sources are built from it: without the depth that a companion lends. */
export function entryOf(id: string): OpenMeteoSource {
  const entry = withCompanions(order.sources).find((candidate) => candidate.id === id);
  if (entry?.provider !== 'open-meteo') throw new Error(`config/sources.json has no Open-Meteo source "${id}"`);
  return entry;
}

export const groundM = 1180;
const terrain = { groundAtM: () => groundM };

/** An invented launch above an invented valley, facing the test server's westerly. */
export const site: Site = valueOf(
  parseSiteFeature(
    {
      type: 'Feature', id: 'pipeline-launch', geometry: { type: 'Point', coordinates: [11.4456, 47.2611, 1340] },
      properties: {
        kind: 'launch', name: 'Pipeline launch', timeZone: 'Europe/Vienna', facingDeg: 250, headingReference: 'true', slopeDeg: 24,
        hill: { form: 'ridge', heightM: 180, halfLengthM: 320 },
        landing: { coordinates: [11.4416, 47.2606, 1190], roughnessM: 0.03 },
        daylight: { rule: 'sunrise-sunset', beforeMin: 0, afterMin: 0 },
        pressureStep: null, localRules: 'none', notes: [],
      },
    },
    { nowMs: Date.parse('2027-05-01T00:00:00Z') },
  ),
) as LaunchSite;

const localDate = '2027-05-14';
const issuedAt = '2027-05-14T03:00:00Z';
export const request = { fromUtc: '2027-05-13T21:00:00Z', toUtc: '2027-05-14T23:00:00Z' };
export const runAt = '2027-05-14T00:00:00Z';

export type Window = typeof request;

function askOf(entry: OpenMeteoSource, window: Window = request): Ask {
  return { ...entry, fromMs: epochOf(window.fromUtc), toMs: epochOf(window.toUtc) };
}

/** What the documented service answers for a place, ours to spoil. */
export function cleanLocation(entry: OpenMeteoSource, place: { readonly latDeg: number; readonly lonDeg: number } = site, window: Window = request): Location {
  const ask = askOf(entry, window);
  const url = forecastUrl({
    origin: 'https://a.example', path: entry.kind === 'ensemble' ? '/v1/ensemble' : '/v1/forecast', model: entry.model, points: [place],
    variables: columnsFor(ask).keys(), fromMs: ask.fromMs - HOUR_MS, toMs: ask.toMs + HOUR_MS,
  });
  const reply = openMeteo(new URL(url), terrain);
  if (reply.status !== 200) throw new Error(`the test server refused: ${JSON.stringify(reply.body)}`);
  return structuredClone(reply.body) as Location;
}

export interface ReadOptions {
  readonly window?: Window;
  readonly run?: string | null;
  readonly site?: Site;
  readonly pressures?: { readonly a: number | null; readonly b: number | null };
}

/** The adapter's way from text to forecast. */
export function readFor(text: string, entry: OpenMeteoSource, options: ReadOptions): Result<Forecast, SourceFailure> {
  const { run = runAt, pressures = { a: null, b: null } } = options;
  const json = readJson(text);
  if (json === undefined) return failure({ kind: 'not-json' });
  const locations = readAnswer(json, 1);
  if (!locations.ok) return locations;
  return forecastOf(entry, options.site ?? site, { location: locations.value[0]!, ask: askOf(entry, options.window), pressures: () => pressures, runAt: run, fetchedAt: issuedAt });
}

export function read(text: string, entry: OpenMeteoSource, options: ReadOptions = {}): Result<Forecast, SourceFailure> {
  return readFor(text, entry, options);
}

/** JSON has no word for Infinity; the text 1e999 says it. */
export function textOf(value: unknown): string {
  const text = JSON.stringify(value, (_, one: unknown) => (one === Infinity ? '1e999!' : one === -Infinity ? '-1e999!' : one));
  return text.includes('1e999!') ? text.replaceAll(/"(-?1e999)!"/g, '$1') : text;
}

export const enB = valueOf(parseWing({ class: 'EN B' }, classes));

export function judge(answers: DayInput['answers'], changes: Partial<DayInput> & { readonly sheetId?: string } = {}): JudgedDay {
  const { sheetId = 'descent-new', ...rest } = changes;
  return judgeDay({
    site, wing: enB, wingKey: 'EN B', wingName: 'EN B', sheet: sheets.find(({ id }) => id === sheetId)!,
    localDate, issuedAt, validUntil: '2027-05-14T22:00:00Z', answers, demo: false, thresholds, storedGroundM: {}, ...rest,
  });
}

export function answer(entry: { readonly id: string; readonly kind: 'deterministic' | 'ensemble' }, outcome: Result<Forecast, SourceFailure>): DayInput['answers'][number] {
  return { source: entry.id, kind: entry.kind, outcome };
}
