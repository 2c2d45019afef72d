// A signalled thunderstorm is beyond any sheet, whoever signals it (design: storm, "and always, whatever the sheet").
import { expect, test } from 'vitest';
import { judgeHours } from '../../../lib/brief/judge-hours.ts';
import { forecastOf } from '../../../worker/sources/open-meteo/open-meteo.ts';
import { entryOf, sheets, site } from '../sources/pipeline.ts';
import { readAnswer } from '../../../worker/sources/open-meteo/read-answer.ts';
import { wingOf } from '../../../lib/config/wing.ts';

const wing = { ...wingOf({ trimMps: 38 / 3.6, glideAtTrim: 9, minSinkMps: 1.1 }), class: null };
const sheet = sheets.find(({ id }) => id === 'descent-new')!;

function stormOf(weatherCode: number, declares: readonly ('weatherCode' | 'capeJkg')[], capeJkg: number | null = null) {
  const hours = [{ validAt: '2027-05-14T08:00:00Z', gridElevationM: 1180, weatherCode, capeJkg }];
  return judgeHours({ site, wing, sheet, hours, declares }).hours[0]!.margins.find(({ id }) => id === 'storm')!;
}

test('a source that gives no CAPE still closes the day when it signals thunder', () => {
  expect(stormOf(95, ['weatherCode'])).toMatchObject({ status: 'beyond', spare: null });
  expect(stormOf(3, ['weatherCode'])).toMatchObject({ status: 'unknown', missing: ['capeJkg'] });
  expect(stormOf(3, ['weatherCode', 'capeJkg'], 40)).toMatchObject({ status: 'within', spare: 460 });
});

test('a field that a model may give is declared where the answer has it, and only there', () => {
  const entry = { ...entryOf('open-meteo:icon_eu'), declares: ['wind10m'] as const, mayGive: ['visibilityM'] as const };
  const fromMs = Date.UTC(2027, 4, 14, 6);
  const times = [-1, 0, 1, 2].map((hour) => fromMs / 1000 + hour * 3600);
  const declared = (visibility: number | null, unit: string) => {
    const answer = readAnswer({
      latitude: site.latDeg, longitude: site.lonDeg, elevation: 1180, utc_offset_seconds: 0,
      hourly_units: { time: 'unixtime', wind_speed_10m: 'm/s', wind_direction_10m: '°', visibility: unit },
      hourly: { time: times, wind_speed_10m: times.map(() => 3), wind_direction_10m: times.map(() => 250), visibility: times.map(() => visibility) },
    }, 1);
    if (!answer.ok) throw new Error('the answer does not parse');
    const ask = { ...entry, declares: ['wind10m', 'visibilityM'] as const, fromMs, toMs: fromMs + 3_600_000 };
    const forecast = forecastOf(entry, site, { location: answer.value[0]!, ask, pressures: () => ({ a: null, b: null }), runAt: '2027-05-14T03:00:00Z', fetchedAt: '2027-05-14T05:00:00Z' });
    return forecast.ok ? forecast.value.declares : forecast.error;
  };
  expect(declared(24_000, 'm')).toEqual(['wind10m', 'visibilityM']);
  expect(declared(null, 'undefined')).toEqual(['wind10m']);
});
