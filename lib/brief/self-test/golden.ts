/**
 * What the judge has to say of the self-test's weather. Verdicts follow from the sheet by eye: the case says which single
 * thing is wrong. Spares are frozen from the judge itself, so they guard against change and prove nothing else.
 */
import type { Conditions, Forecast } from '../../forecast/conditions.ts';
import type { MarginId } from '../../margin/ids.ts';
import { failure, success } from '../../result.ts';
import type { DayInput } from '../day-input.ts';
import { DATE, forecast, LEVELS } from './places.ts';

export interface GoldenCase {
  readonly name: string;
  readonly answers: DayInput['answers'];
  /** A letter a judged hour (11, 12, 13 UTC), windows, sources with a vote: `www 1 1`. */
  readonly says: string;
}

function given(...forecasts: readonly Forecast[]): DayInput['answers'] {
  return forecasts.map((value) => ({ source: value.source, kind: value.kind, outcome: success(value) }));
}

/** What is changed at 11, 12 and 13 UTC. */
function each(...changes: readonly Partial<Conditions>[]): (index: number) => Partial<Conditions> {
  return (index) => changes[index - 11] ?? {};
}

const ALWAYS_BEYOND = { wind10m: { speedMps: 14, fromDeg: 250 }, gustMps: 19 };
const run = (time: string): Forecast => forecast(undefined, { runAt: time });
const second = forecast(each({}, { capeJkg: 900 }), { source: 'self-test:two' });

/** Judged before every fan-out, beside one quiet day: a place that is always beyond, and one of which nothing is ever known. */
export const CANARIES: readonly GoldenCase[] = [
  { name: 'always beyond', answers: given(forecast(() => ALWAYS_BEYOND)), says: 'bbb 0 1' },
  { name: 'always unknown', answers: [{ source: 'self-test:one', kind: 'deterministic', outcome: failure({ kind: 'unreachable' }) }], says: 'uuu 0 0' },
];

export const CASES: readonly GoldenCase[] = [
  // One thing an hour.
  { name: 'gusts missing, under the mean, and such as cannot be', answers: given(forecast(each({ gustMps: null }, { gustMps: 1 }, { gustMps: 400 }))), says: 'uuu 0 1' },
  { name: 'CAPE under, on and over its limit', answers: given(forecast(each({ capeJkg: 299 }, { capeJkg: 300 }, { capeJkg: 301 }))), says: 'ccb 1 1' },
  { name: 'rain, visibility, and proven beyond beside something missing', answers: given(forecast(each({ precipitationMm: 0.3 }, { visibilityM: 2900 }, { gustMps: null, capeJkg: 900 }))), says: 'bbb 0 1' },
  { name: 'kelvin, and wind from behind', answers: given(forecast(each({ temperature2mC: 277 }, {}, { levels: LEVELS.map((level) => ({ ...level, fromDeg: 82 })) }))), says: 'uwb 0 1' },
  { name: 'an hour missing', answers: given(forecast(undefined, { hours: [11, 13, 14, 15] })), says: 'uuw 0 1' },
  // Sources.
  { name: 'the worse of two sources', answers: given(forecast(), second), says: 'wbw 0 2' },
  { name: 'the other of two sources', answers: given(second, forecast(undefined, { source: 'self-test:three' })), says: 'wbw 0 2' },
  { name: 'nobody asked', answers: [], says: 'uuu 0 0' },
  // Ages, time and place.
  { name: 'a run of 18 h', answers: given(run('2026-12-20T12:00:00Z')), says: 'www 1 1' },
  { name: 'a run of 18 h and a minute', answers: given(run('2026-12-20T11:59:00Z')), says: 'uuu 0 0' },
  { name: 'a run of 30 h, fetched now', answers: given(run('2026-12-20T00:00:00Z')), says: 'uuu 0 0' },
  { name: 'a run ahead of the clock', answers: given(run(`${DATE}T07:01:00Z`)), says: 'uuu 0 0' },
  { name: 'a run without a time', answers: given(forecast(undefined, { runAt: null })), says: 'uuu 0 0' },
  { name: 'a grid point far away', answers: given(forecast(undefined, { gridDistanceM: 60_000 })), says: 'uuu 0 0' },
  { name: 'the day before', answers: given(forecast(undefined, { hours: [-13, -12, -11, -10, -9] })), says: 'uuu 0 0' },
  {
    name: 'a feed that is stuck', says: 'uuu 0 0',
    answers: given(forecast(() => ({ gustMps: 4.6 }), { hours: Array.from({ length: 26 }, (_, index) => index) })),
  },
];

/** Spares of the second hour of the quiet day, in each margin's own unit. */
export const LAUNCH_SPARES: readonly (readonly [MarginId, number])[] = [
  ['meanWind', 2.341], ['gust', 3.2433], ['gustSpread', 2.4023], ['crosswind', 2.011], ['tailwind', 0.5], ['offAxis', 48], ['forwardLaunch', 3.4409],
  ['forwardAloft', 5.0032], ['upperWind', 3.8786], ['overTheBack', 0.5], ['arrival', 46.7265], ['landingGradient', 1.3856], ['thermal', 1.9027],
  ['cloudBase', 934.1916], ['storm', 290], ['rain', 0.2], ['rainChance', 35], ['visibility', 17000], ['daylight', 105.5212],
];

export const STRIP_SPARES: readonly (readonly [MarginId, number])[] = [
  ['stripWind', 4], ['stripGust', 4.4], ['gustSpread', 1.9], ['stripCross', 1.8094], ['stripTail', 1], ['climbShear', 4.025], ['towHeight', 243.286],
  ['storm', 0], ['rain', 0.2], ['daylight', 105.5212],
];
