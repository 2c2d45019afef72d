// The Open-Meteo adapter against an answer written by hand, number by number.
import { describe, expect, test } from 'vitest';
import { siteAt } from '../../faults/forecast/live.ts';
import { forecastUrl, metaUrl, originWithKey } from '../../../worker/sources/open-meteo/address.ts';
import { forecastOf } from '../../../worker/sources/open-meteo/open-meteo.ts';
import { readAnswer } from '../../../worker/sources/open-meteo/read-answer.ts';
import { olderRun, runAtOf } from '../../../worker/sources/open-meteo/run-time.ts';
import { toMembers, type Ask } from '../../../worker/sources/open-meteo/to-hours.ts';
import { columnsFor } from '../../../worker/sources/open-meteo/variables.ts';
import { entryOf } from './pipeline.ts';

const ask: Ask = {
  model: 'icon_d2', members: 1, nearGroundM: [80], levelsHpa: [850, 700],
  declares: ['wind10m', 'gustMps', 'nearGround', 'levels', 'temperature2mC', 'precipitationMm', 'precipitationProbabilityPct', 'weatherCode', 'shortwaveWm2'],
  fromMs: Date.parse('2027-05-14T04:00:00Z'), toMs: Date.parse('2027-05-14T05:00:00Z'),
};
const at = (iso: string) => Date.parse(iso) / 1000;

/** Four stamps, 03 to 06 UTC, of which 04 and 05 are wanted. */
function byHand() {
  const units: Record<string, string> = { time: 'unixtime' };
  for (const [name, unit] of columnsFor(ask)) units[name] = unit;
  return {
    latitude: 47.26, longitude: 11.44, utc_offset_seconds: 0, elevation: 1180, hourly_units: units,
    hourly: {
      time: [at('2027-05-14T03:00Z'), at('2027-05-14T04:00Z'), at('2027-05-14T05:00Z'), at('2027-05-14T06:00Z')],
      wind_speed_10m: [1, 2.25, 2.5, 9], wind_direction_10m: [10, 245, 360, 10], wind_gusts_10m: [9, 3.5, 4.75, 4.5],
      wind_speed_80m: [1, 3, 3.5, 9], wind_direction_80m: [1, 250, 255, 9],
      wind_speed_850hPa: [1, 5, 5.5, 9], wind_direction_850hPa: [1, 260, 265, 9], geopotential_height_850hPa: [1, 1501, 1502, 9], temperature_850hPa: [1, 4.5, 5, 9], relative_humidity_850hPa: [1, 60, 61, 9],
      wind_speed_700hPa: [1, 8, null, 9], wind_direction_700hPa: [1, 280, null, 9], geopotential_height_700hPa: [1, 3050, null, 9], temperature_700hPa: [1, -6, null, 9], relative_humidity_700hPa: [1, 40, null, 9],
      temperature_2m: [1, 8.5, 9, 9], precipitation: [5, 0, 0.25, 0.5], precipitation_probability: [90, 5, 10, 8], weather_code: [99, 1, 2, 3], shortwave_radiation: [1, -0.25, 40, 9],
    } as Record<string, unknown[]>,
  };
}

type ByHand = ReturnType<typeof byHand>;

function members(edit: (answer: ByHand) => void = () => undefined, changes: Partial<Ask> = {}) {
  const answer = byHand();
  edit(answer);
  const read = readAnswer(JSON.parse(JSON.stringify(answer)), 1);
  return read.ok ? toMembers(read.value[0]!, { ...ask, ...changes }) : read;
}

const hours = (edit?: (answer: ByHand) => void) => {
  const result = members(edit);
  return result.ok ? result.value[0] : result.error;
};

test('every number lands where it belongs', () => {
  expect(hours()).toEqual([
    {
      validAt: '2027-05-14T04:00:00Z', gridElevationM: 1180,
      wind10m: { speedMps: 2.25, fromDeg: 245 },
      gustMps: 4.75,
      nearGround: [{ heightAglM: 80, speedMps: 3, fromDeg: 250 }],
      levels: [
        { pressureHpa: 850, altitudeM: 1501, speedMps: 5, fromDeg: 260, temperatureC: 4.5, relativeHumidityPct: 60 },
        { pressureHpa: 700, altitudeM: 3050, speedMps: 8, fromDeg: 280, temperatureC: -6, relativeHumidityPct: 40 },
      ],
      temperature2mC: 8.5, precipitationMm: 0.25, precipitationProbabilityPct: 10, weatherCode: 1, shortwaveWm2: -0.25,
    },
    {
      validAt: '2027-05-14T05:00:00Z', gridElevationM: 1180,
      wind10m: { speedMps: 2.5, fromDeg: 0 },
      gustMps: 4.75,
      nearGround: [{ heightAglM: 80, speedMps: 3.5, fromDeg: 255 }],
      levels: [
        { pressureHpa: 850, altitudeM: 1502, speedMps: 5.5, fromDeg: 265, temperatureC: 5, relativeHumidityPct: 61 },
        { pressureHpa: 700, altitudeM: null, speedMps: null, fromDeg: null, temperatureC: null, relativeHumidityPct: null },
      ],
      temperature2mC: 9, precipitationMm: 0.5, precipitationProbabilityPct: 10, weatherCode: 2, shortwaveWm2: 40,
    },
  ]);
});

describe('gusts and rain are the larger of the two hours that touch the instant', () => {
  const gusts = (values: (number | null)[]) => {
    const found = hours((answer) => (answer.hourly['wind_gusts_10m'] = values));
    return Array.isArray(found) ? found.map((hour) => hour.gustMps) : found;
  };

  test('the hour that ends with it and the one that begins', () => {
    expect(gusts([99, 4, 3, 5])).toEqual([4, 5]);
    expect(gusts([99, 3, 4, 2])).toEqual([4, 4]);
  });

  test('either missing, neither known', () => {
    expect(gusts([1, null, 4, 2])).toEqual([null, 4]);
    expect(gusts([1, 3, null, 2])).toEqual([null, null]);
    expect(gusts([1, 3, 4, null])).toEqual([4, null]);
  });

  test('across a missing hour the next stamp is not the next hour', () => {
    const found = hours((answer) => {
      for (const name of Object.keys(answer.hourly)) answer.hourly[name]!.splice(2, 1);
    });
    expect(found).toMatchObject([{ validAt: '2027-05-14T04:00:00Z', gustMps: null, precipitationMm: null }]);
  });
});

describe('units', () => {
  test.each([
    ['wind_speed_10m', 'km/h'], ['wind_speed_850hPa', 'kn'], ['wind_speed_80m', 'mp/h'], ['temperature_2m', '°F'], ['precipitation', 'inch'], ['geopotential_height_850hPa', 'ft'],
  ])('%s in %s costs the frame', (name, unit) => {
    expect(members((answer) => (answer.hourly_units[name] = unit))).toEqual({ ok: false, error: { kind: 'unit', field: name, expected: columnsFor(ask).get(name), found: unit } });
  });

  test('a unit nobody has heard of is called other, and one that is no text too', () => {
    expect(members((answer) => (answer.hourly_units['precipitation'] = '<b>mm</b>'))).toMatchObject({ error: { found: 'other' } });
    expect(members((answer) => ((answer.hourly_units as Record<string, unknown>)['precipitation'] = 5))).toMatchObject({ error: { found: 'other' } });
  });

  test('no units at all', () => {
    expect(members((answer) => delete (answer as Partial<ByHand>).hourly_units)).toEqual({ ok: false, error: { kind: 'times', why: 'not-utc' } });
  });

  test('"undefined" says that the model lacks the variable, whatever stands in the column', () => {
    const found = hours((answer) => (answer.hourly_units['temperature_2m'] = 'undefined'));
    expect(found).toMatchObject([{ temperature2mC: null }, { temperature2mC: null }]);
  });

  test('a column that was not asked for may have any unit', () => {
    expect(members((answer) => Object.assign(answer.hourly_units, { windspeed_10m: 'km/h' })).ok).toBe(true);
  });
});

describe('one location or many', () => {
  test('an object is the only location, a list has one for each', () => {
    expect(readAnswer(byHand(), 1).ok).toBe(true);
    expect(readAnswer([byHand()], 1).ok).toBe(true);
    expect(readAnswer([byHand(), { ...byHand(), location_id: 1 }], 2).ok).toBe(true);
  });

  test.each([
    ['fewer than asked', byHand(), 2],
    ['more than asked', [byHand(), byHand()], 1],
    ['none', [], 1],
    ['in another order', [{ ...byHand(), location_id: 1 }, { ...byHand(), location_id: 0 }], 2],
    ['one that is no location', [byHand(), null], 2],
  ])('%s', (_, json, count) => {
    expect(readAnswer(json, count)).toMatchObject({ ok: false, error: { kind: 'shape' } });
  });
});

describe('members of an ensemble', () => {
  const ensemble: Partial<Ask> = { members: 3, declares: ['wind10m', 'gustMps'], model: 'icon_d2_eps' };
  const add = (answer: ByHand, suffix = '') => {
    for (const name of ['wind_speed_10m', 'wind_direction_10m', 'wind_gusts_10m']) {
      for (const member of [1, 2]) {
        const column = `${name}_member0${member}${suffix}`;
        answer.hourly[column] = answer.hourly[name]!.map((value) => Number(value) + member);
        answer.hourly_units[column] = answer.hourly_units[name]!;
      }
    }
  };
  const winds = (edit: (answer: ByHand) => void) => {
    const result = members(edit, ensemble);
    return result.ok ? result.value.map(([hour]) => [hour?.wind10m?.speedMps, hour?.gustMps]) : result.error;
  };

  test('member 0 has the bare name, the others a number of two digits', () => {
    expect(winds((answer) => add(answer))).toEqual([[2.25, 4.75], [3.25, 5.75], [4.25, 6.75]]);
  });

  test('with or without the name of the model behind it', () => {
    expect(winds((answer) => add(answer, '_icon_d2_eps'))).toEqual([[2.25, 4.75], [3.25, 5.75], [4.25, 6.75]]);
  });

  test('a member that is not there is missing, not left out', () => {
    const found = winds((answer) => {
      add(answer);
      for (const name of Object.keys(answer.hourly)) if (name.endsWith('_member02')) delete answer.hourly[name];
    });
    expect(found).toEqual([[2.25, 4.75], [3.25, 5.75], [null, null]]);
  });

  test('a unit of one member is a unit of the frame', () => {
    expect(winds((answer) => (add(answer), (answer.hourly_units['wind_gusts_10m_member02'] = 'km/h')))).toMatchObject({ kind: 'unit', field: 'wind_gusts_10m' });
  });
});

describe('the question', () => {
  test('is as documented: one model, heights of the grid, m/s, unix time, GMT, hours without a Z', () => {
    const url = forecastUrl({
      origin: 'https://api.open-meteo.com', path: '/v1/forecast', model: 'icon_d2', points: [{ latDeg: 47.26114, lonDeg: 11.4 }, { latDeg: -33.92, lonDeg: -70 }],
      variables: ['wind_speed_10m', 'wind_gusts_10m'], fromMs: Date.parse('2027-05-13T21:00Z'), toMs: Date.parse('2027-05-14T23:00Z'),
    });
    expect(url).toBe(
      'https://api.open-meteo.com/v1/forecast?latitude=47.2611,-33.92&longitude=11.4,-70&elevation=nan,nan&models=icon_d2&cell_selection=nearest' +
        '&wind_speed_unit=ms&timeformat=unixtime&timezone=GMT&start_hour=2027-05-13T21:00&end_hour=2027-05-14T23:00&hourly=wind_speed_10m,wind_gusts_10m',
    );
    expect(metaUrl('https://api.open-meteo.com', 'dwd_icon_d2')).toBe('https://api.open-meteo.com/data/dwd_icon_d2/static/meta.json');
  });

  test('asks a model for its own levels and heights only', () => {
    const columns = [...columnsFor(entryOf('open-meteo:icon_d2')).keys()];
    const levels = new Set(columns.flatMap((name) => /_(\d+)hPa$/.exec(name)?.[1] ?? []));
    expect([...levels]).toEqual(['1000', '975', '950', '850', '700', '600', '500']);
    expect(columns.filter((name) => /^wind_speed_\d+m$/.test(name))).toEqual(['wind_speed_10m', 'wind_speed_80m', 'wind_speed_120m', 'wind_speed_180m']);
    expect(columns).not.toContain('sensible_heat_flux');
    expect(columns).not.toContain('boundary_layer_height');
  });

  test('with a key the public hosts become those for customers, an own address stays', () => {
    expect(originWithKey('https://api.open-meteo.com', 'k')).toBe('https://customer-api.open-meteo.com');
    expect(originWithKey('https://ensemble-api.open-meteo.com', 'k')).toBe('https://customer-ensemble-api.open-meteo.com');
    expect(originWithKey('https://api.open-meteo.com', null)).toBe('https://api.open-meteo.com');
    expect(originWithKey('https://weather.club.example', 'k')).toBe('https://weather.club.example');
  });
});

describe('the run time', () => {
  const meta = { last_run_initialisation_time: at('2027-05-14T00:00Z'), last_run_availability_time: at('2027-05-14T02:00Z'), update_interval_seconds: 10_800 };
  const run = (now: string, changes: object = {}) => runAtOf({ ...meta, ...changes }, Date.parse(now));

  test('is the initialisation, ten minutes after it became available', () => {
    expect(run('2027-05-14T02:10Z')).toBe('2027-05-14T00:00:00Z');
    expect(run('2027-05-14T02:09:59Z')).toBe('2027-05-13T21:00:00Z');
    expect(run('2027-05-14T02:09:59Z', { update_interval_seconds: null })).toBeNull();
  });

  test('a run ahead of our clock is told as it is', () => {
    expect(run('2027-05-13T20:00Z')).toBe('2027-05-14T00:00:00Z');
  });

  test.each([
    [{ last_run_initialisation_time: null }], [{ last_run_initialisation_time: '1' }], [{ last_run_initialisation_time: 1.5e12 }], [{ last_run_initialisation_time: 0 }],
    [{ last_run_availability_time: undefined }], [{ last_run_initialisation_time: 1_800_000_000.5 }],
  ])('%j is no run time', (changes) => {
    expect(run('2027-05-14T04:00Z', changes)).toBeNull();
  });

  test.each(['x', null, [], 5])('%j is no meta.json', (json) => {
    expect(runAtOf(json, Date.now())).toBeNull();
  });

  test('of several storage names the older counts', () => {
    expect(olderRun(['2027-05-14T00:00:00Z', '2027-05-13T18:00:00Z'])).toBe('2027-05-13T18:00:00Z');
    expect(olderRun(['2027-05-14T00:00:00Z', null])).toBeNull();
    expect(olderRun([])).toBeNull();
  });
});

test('a pressure step is declared only for a site that has reference points, and lands in its hours', () => {
  const entry = entryOf('open-meteo:icon_d2');
  const read = readAnswer(byHand(), 1);
  const parts = {
    location: read.ok ? read.value[0]! : (null as never), ask, runAt: '2027-05-14T00:00:00Z', fetchedAt: '2027-05-14T02:40:00Z',
    pressures: (_: unknown, validAt: string) => (validAt.includes('T04') ? { a: 1012.5, b: 1016 } : { a: null, b: 1016 }),
  };
  const step = { a: { name: 'north', lonDeg: 11.4, latDeg: 48.1 }, b: { name: 'south', lonDeg: 11.3, latDeg: 46.5 } };
  const withStep = forecastOf(entry, siteAt('a', 47.26, 11.44, { pressureStep: step }), parts);
  const without = forecastOf(entry, siteAt('b', 47.26, 11.44), parts);
  expect(withStep.ok && withStep.value.declares).toContain('referencePressureHpa');
  expect(withStep.ok && withStep.value.members[0]!.map((hour) => hour.referencePressureHpa)).toEqual([{ a: 1012.5, b: 1016 }, { a: null, b: 1016 }]);
  expect(without.ok && without.value.declares).not.toContain('referencePressureHpa');
  expect(without.ok && without.value.members[0]![0]!.referencePressureHpa).toBeUndefined();
});
