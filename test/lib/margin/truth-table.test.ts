// The verdict in small scope, exhausted: two limits in two hours, each of the four cells in one of nine states, 6,561 days
// in all, from a provider's text through the adapter, the frame, the range gate and margin() to the hours and the window;
// then every field of a full day singly. The tables of what is expected are written out here, apart from any code of lib.
import { describe, expect, test } from 'vitest';
import type { DayInput } from '../../../lib/brief/day-input.ts';
import { judgeDay } from '../../../lib/brief/judge-day.ts';
import type { ConditionField, Conditions, Forecast } from '../../../lib/forecast/conditions.ts';
import type { SourceFailure } from '../../../lib/forecast/failure.ts';
import type { MarginId, Verdict } from '../../../lib/margin/ids.ts';
import type { LimitSheet } from '../../../lib/margin/sheet.ts';
import type { Result } from '../../../lib/result.ts';
import type { LaunchSite } from '../../../lib/site.ts';
import { legalDay } from '../../../lib/sky/sun.ts';
import { epochOf, HOUR_MS, isoUtc, MINUTE_MS } from '../../../lib/time.ts';
import { answer, cleanLocation, entryOf, read, site as pipelineSite, textOf } from '../sources/pipeline.ts';
import { ALPINE, ALPINE_GROUND_M, forecastOf, hourAt, inputOf, instantAt, ISSUED_AT, marginsThatAre, QUIET, sheetOf } from '../../support/typical-days.ts';

const STATES = ['ok', 'exceeded', 'null', 'absent', 'NaN', 'string', 'stale', 'out of range', 'wrong unit'] as const;
type State = (typeof STATES)[number];

/** What a cell makes of its own margin while its source has a vote, and whether it costs the source that vote. */
const EXPECTED: Readonly<Record<State, { readonly margin: Verdict; readonly costsTheVote: boolean }>> = {
  'ok':           { margin: 'within',  costsTheVote: false },
  'exceeded':     { margin: 'beyond',  costsTheVote: false },
  'null':         { margin: 'unknown', costsTheVote: false },
  'absent':       { margin: 'unknown', costsTheVote: false },
  'NaN':          { margin: 'unknown', costsTheVote: false },
  'string':       { margin: 'unknown', costsTheVote: false },
  'stale':        { margin: 'unknown', costsTheVote: true },
  'out of range': { margin: 'unknown', costsTheVote: false },
  'wrong unit':   { margin: 'unknown', costsTheVote: true },
};

/** Of two margins an hour is: row the one, column the other. */
const HOUR: Readonly<Record<'within' | 'beyond' | 'unknown', Readonly<Record<'within' | 'beyond' | 'unknown', Verdict>>>> = {
  within:  { within: 'within',  beyond: 'beyond', unknown: 'unknown' },
  beyond:  { within: 'beyond',  beyond: 'beyond', unknown: 'beyond' },
  unknown: { within: 'unknown', beyond: 'beyond', unknown: 'unknown' },
};

/** A place whose law allows two hours a day: eleven and twelve UTC, well inside. */
const HOURS = ['2027-05-14T11:00:00Z', '2027-05-14T12:00:00Z'] as const;
const site = ((): LaunchSite => {
  const place = { ...(pipelineSite as LaunchSite), hill: { form: 'flat', heightM: 0, halfLengthM: 100 }, elevationM: 1180, daylight: { rule: 'sunrise-sunset', beforeMin: 0, afterMin: 0 } } as const;
  const day = legalDay(place, '2027-05-14');
  if ('none' in day) throw new Error('no legal day');
  const beforeMin = (day.fromMs - epochOf('2027-05-14T10:30:00Z')) / MINUTE_MS;
  const afterMin = (epochOf('2027-05-14T12:30:00Z') - day.toMs) / MINUTE_MS;
  return { ...place, daylight: { rule: 'sunrise-sunset', beforeMin, afterMin } };
})();

const sheet: LimitSheet = { ...sheetOf('ground-handling'), id: 'two-limits', limits: { maxMeanMps: 6, minVisibilityM: 1500 }, basis: {} };

/** A column of the service for each limit: values that are fine, too much, and beyond what nature does. */
const LIMITS = [
  { id: 'meanWind', entry: { ...entryOf('open-meteo:icon_d2'), id: 'winds', declares: ['wind10m'] }, column: 'wind_speed_10m', ok: 3, exceeded: 15, outOfRange: 80, otherUnit: 'km/h' },
  { id: 'visibility', entry: { ...entryOf('open-meteo:icon_d2'), id: 'sights', declares: ['visibilityM'] }, column: 'visibility', ok: 20_000, exceeded: 100, outOfRange: 400_000, otherUnit: 'ft' },
] as const satisfies readonly { readonly id: MarginId; readonly [key: string]: unknown }[];

/** Hours of the answer around the two: no more than is needed to judge them. */
const AROUND_H = 4;
const EIGHTEEN_HOURS_AND_A_MINUTE_AGO = isoUtc(epochOf(ISSUED_AT) - 18 * HOUR_MS - MINUTE_MS);

type Limit = (typeof LIMITS)[number];
type Cells = readonly [State, State];
type Outcome = Result<Forecast, SourceFailure>;

/** The answer of a limit's source with its two cells in these states. */
function outcomeOf({ entry, column, ok, exceeded, outOfRange, otherUnit }: Limit, cells: Cells): Outcome {
  const location = cleanLocation(entry);
  const times = location.hourly['time'] as number[];
  const rows = HOURS.map((validAt) => times.indexOf(epochOf(validAt) / 1000));
  const values: Partial<Record<State, unknown>> = { ok, exceeded, 'null': null, string: '3', 'out of range': outOfRange };
  cells.forEach((state, i) => {
    (location.hourly[column] as unknown[])[rows[i]!] = state in values ? values[state] : ok;
  });
  const gone = rows.filter((_, i) => cells[i] === 'absent');
  const kept = (row: number) => !gone.includes(row) && Math.abs(row - rows[0]!) <= AROUND_H;
  for (const [name, list] of Object.entries(location.hourly)) location.hourly[name] = (list as unknown[]).filter((_, row) => kept(row)) as never;
  if (cells.includes('wrong unit')) location.hourly_units[column] = otherUnit;
  const outcome = read(textOf(location), entry);
  if (!outcome.ok) return outcome;
  // The run is told by another document than the hours.
  const dated = cells.includes('stale') ? { ...outcome.value, runAt: EIGHTEEN_HOURS_AND_A_MINUTE_AGO } : outcome.value;
  // JSON has no NaN: this one comes from an adapter that divided by nothing.
  return { ok: true, value: withNaN(dated, HOURS.filter((_, i) => cells[i] === 'NaN')) };
}

function withNaN(forecast: Forecast, at: readonly string[]): Forecast {
  const broken = (hour: Conditions): Conditions => {
    if (!at.includes(hour.validAt)) return hour;
    return hour.wind10m ? { ...hour, wind10m: { ...hour.wind10m, speedMps: NaN } } : { ...hour, visibilityM: NaN };
  };
  return { ...forecast, members: forecast.members.map((hours) => hours.map(broken)) };
}

/** Every pair of states in the two hours of a limit. */
const PAIRS: readonly Cells[] = STATES.flatMap((first) => STATES.map((second): Cells => [first, second]));

/** No thunder, from a third source: storms are judged whatever the sheet. */
const sky = { ...entryOf('open-meteo:icon_d2'), id: 'skies', declares: ['weatherCode'] as const };
const calmSky = answer(sky, read(textOf(cleanLocation(sky)), sky));

function marginsExpected([first, second]: Cells): readonly ['within' | 'beyond' | 'unknown', 'within' | 'beyond' | 'unknown'] {
  if (EXPECTED[first].costsTheVote || EXPECTED[second].costsTheVote) return ['unknown', 'unknown'];
  return [EXPECTED[first].margin, EXPECTED[second].margin] as never;
}

function judged(winds: Outcome, sights: Outcome): ReturnType<typeof judgeDay> {
  const answers: DayInput['answers'] = [answer(LIMITS[0].entry, winds), answer(LIMITS[1].entry, sights), calmSky];
  return judgeDay({ ...inputOf({ site, sheet, forecasts: [] }), issuedAt: ISSUED_AT, answers });
}

const told = (winds: Cells, sights: Cells) => `wind ${winds.join(', ')}; visibility ${sights.join(', ')}`;

describe('two limits in two hours', () => {
  const outcomes = LIMITS.map((limit) => PAIRS.map((cells) => outcomeOf(limit, cells)));

  test('the law of the place leaves two hours', () => {
    const day = judged(outcomes[0]![0]!, outcomes[1]![0]!);
    expect(day.hours.map(({ validAt }) => validAt)).toEqual(HOURS);
    expect(day.hours.map(({ margins }) => margins.map(({ id }) => id))).toEqual([['meanWind', 'storm', 'visibility', 'daylight'], ['meanWind', 'storm', 'visibility', 'daylight']]);
  });

  test('every one of the 6,561 states of the four cells is as the tables say', { timeout: 120_000 }, () => {
    const wrong: string[] = [];
    let tried = 0;
    PAIRS.forEach((winds, w) => PAIRS.forEach((sights, s) => {
      tried += 1;
      const day = judged(outcomes[0]![w]!, outcomes[1]![s]!);
      const expected = [marginsExpected(winds), marginsExpected(sights)];
      const hours = ([0, 1] as const).map((hour) => HOUR[expected[0]![hour]][expected[1]![hour]]);
      const found = day.hours.map((hour) => LIMITS.map(({ id }) => hour.margins.find((margin) => margin.id === id)?.status));
      const wanted = ([0, 1] as const).map((hour) => [expected[0]![hour], expected[1]![hour]]);
      const window = hours[0] === 'within' && hours[1] === 'within' ? [{ from: HOURS[0], to: HOURS[1], verdict: 'within' }] : [];
      const same =
        JSON.stringify(found) === JSON.stringify(wanted) &&
        JSON.stringify(day.hours.map(({ verdict }) => verdict)) === JSON.stringify(hours) &&
        JSON.stringify(day.windows.map(({ from, to, verdict }) => ({ from, to, verdict }))) === JSON.stringify(window) &&
        day.verdict === HOUR[hours[0] as 'within'][hours[1] as 'within'];
      if (!same) wrong.push(`${told(winds, sights)}: ${JSON.stringify(found)}, hours ${day.hours.map(({ verdict }) => verdict).join()}, ${day.windows.length} windows`);
    }));
    expect(tried).toBe(6561);
    expect(wrong.slice(0, 10), `${wrong.length} cells`).toEqual([]);
  });

  test.each(PAIRS.filter((cells) => cells.some((state) => EXPECTED[state].costsTheVote)))('%s then %s costs the source its vote, and it is said', (...cells) => {
    const at = PAIRS.findIndex((pair) => pair[0] === cells[0] && pair[1] === cells[1]);
    const day = judged(outcomes[0]![at]!, outcomes[1]![0]!);
    expect(day.sources.map(({ source, state }) => [source, state])).toEqual([['winds', 'no vote'], ['sights', 'voted'], ['skies', 'voted']]);
    expect(day.cautions).toContainEqual(expect.objectContaining({ id: 'noVote', subject: 'winds' }));
  });
});

describe('a field of a full day, singly', () => {
  const quiet = forecastOf({ groundM: ALPINE_GROUND_M, day: (hour) => ({ ...QUIET, wind: [2 + hour / 100, 245], gustMps: 3.4 + hour / 100, temperatureC: 12 + hour / 100, capeJkg: 40, rainChancePct: 5, shortwaveWm2: 200 }) });
  const NOON = 13;

  /** The margins of descent-experienced that need a field, on a launch that both estimates of the wind reach. */
  const NEEDED_BY: Readonly<Partial<Record<ConditionField, readonly MarginId[]>>> = {
    wind10m: ['meanWind', 'gust', 'gustSpread', 'crosswind', 'tailwind', 'offAxis', 'forwardLaunch', 'forwardAloft', 'upperWind', 'overTheBack', 'arrival', 'landingGradient', 'run'],
    gustMps: ['gust', 'gustSpread', 'crosswind', 'tailwind', 'forwardLaunch', 'landingGradient'],
    levels: ['meanWind', 'gust', 'gustSpread', 'crosswind', 'tailwind', 'offAxis', 'forwardLaunch', 'forwardAloft', 'upperWind', 'overTheBack', 'arrival', 'landingGradient', 'run', 'cloudBase'],
    temperature2mC: ['forwardLaunch', 'forwardAloft', 'arrival', 'landingGradient', 'run', 'thermal', 'cloudBase'],
    dewPoint2mC: ['forwardLaunch', 'forwardAloft', 'arrival', 'landingGradient', 'run', 'thermal', 'cloudBase'],
    surfacePressureHpa: ['forwardLaunch', 'forwardAloft', 'arrival', 'landingGradient', 'run', 'thermal'],
    mixedLayerM: ['arrival', 'thermal'],
    shortwaveWm2: ['arrival', 'thermal'],
    capeJkg: ['storm'],
    weatherCode: ['storm'],
    precipitationMm: ['rain'],
    precipitationProbabilityPct: ['rainChance'],
    visibilityM: ['visibility'],
  };

  const spoil: Readonly<Record<'null' | 'absent' | 'NaN' | 'string' | 'out of range', (hour: Conditions, field: ConditionField) => Conditions>> = {
    'null': (hour, field) => ({ ...hour, [field]: null }),
    'absent': (hour, field) => Object.fromEntries(Object.entries(hour).filter(([key]) => key !== field)) as unknown as Conditions,
    'NaN': (hour, field) => replaced(hour, field, NaN),
    'string': (hour, field) => replaced(hour, field, '3'),
    'out of range': (hour, field) => replaced(hour, field, 1e6),
  };

  /** Every number of the field replaced; the pressures that name the levels stay. */
  function replaced(hour: Conditions, field: ConditionField, by: unknown): Conditions {
    const value = hour[field];
    if (field === 'wind10m') return { ...hour, wind10m: { speedMps: by as number, fromDeg: by as number } };
    if (field !== 'levels') return { ...hour, [field]: by };
    return { ...hour, levels: (value as NonNullable<Conditions['levels']>).map(({ pressureHpa }) => ({ pressureHpa, altitudeM: by, speedMps: by, fromDeg: by, temperatureC: by, relativeHumidityPct: by }) as never) };
  }

  function dayWith(edit: (hour: Conditions) => Conditions): ReturnType<typeof judgeDay> {
    const at = isoUtc(instantAt(NOON));
    const members = quiet.members.map((hours) => hours.map((hour) => (hour.validAt === at ? edit(hour) : hour)));
    return judgeDay(inputOf({ site: ALPINE, sheet: 'descent-experienced', forecasts: [{ ...quiet, members }] }));
  }

  const clean = hourAt(dayWith((hour) => hour), NOON);

  test('the clean hour is within, and needs every field of the table', () => {
    expect(clean.verdict).toBe('within');
    const needed = new Set(Object.values(NEEDED_BY).flat());
    expect(clean.margins.map(({ id }) => id).filter((id) => !needed.has(id))).toEqual(['slope', 'daylight']);
  });

  const rows = Object.entries(NEEDED_BY).flatMap(([field, ids]) => Object.keys(spoil).map((how) => [field as ConditionField, how as keyof typeof spoil, ids] as const));
  test.each(rows)('%s %s', (field, how, ids) => {
    const day = dayWith((hour) => spoil[how](hour, field));
    const hour = hourAt(day, NOON);
    const others = clean.margins.map(({ id }) => id).filter((id) => !ids.includes(id));
    expect(hour.verdict).toBe('unknown');
    expect(marginsThatAre(hour, 'unknown').sort()).toEqual([...ids].sort());
    expect(marginsThatAre(hour, 'within', 'close')).toEqual(others);
    expect(day.windows.some(({ from, to }) => from <= hour.validAt && hour.validAt <= to)).toBe(false);
    // A thunderstorm in the next two hours counts now: without its code the two hours before cannot say either.
    const before = [1, 2].map((step) => hourAt(day, NOON - step).verdict);
    expect(before).toEqual(field === 'weatherCode' ? ['unknown', 'unknown'] : ['within', 'within']);
  });

  test('one proof is enough, whatever else is missing in the hour', () => {
    for (const field of ['visibilityM', 'gustMps', 'levels', 'temperature2mC'] as const) {
      expect(hourAt(dayWith((hour) => ({ ...spoil.null(hour, field), precipitationMm: 3 })), NOON)).toMatchObject({ verdict: 'beyond', causes: expect.arrayContaining(['rain']) });
    }
  });
});
