// Hours that a service has interpolated between a model's own steps are marked, in the data and in the words.
import { expect, test } from 'vitest';
import type { DayInput } from '../../../lib/brief/day-input.ts';
import type { JudgedDay } from '../../../lib/brief/day.ts';
import { judgeDay } from '../../../lib/brief/judge-day.ts';
import { membersCaption, provenance, voteSentence, windBySource } from '../../../lib/brief/words/index.ts';
import { READER } from '../../../lib/brief/words/reader.ts';
import type { Forecast } from '../../../lib/forecast/conditions.ts';
import { isInterpolated } from '../../../lib/forecast/steps.ts';
import { ALPINE, ALPINE_GROUND_M, forecastOf, inputOf, QUIET } from '../../support/typical-days.ts';

function source(name: string, more: Partial<Forecast> = {}): Forecast {
  const plain = forecastOf({ groundM: ALPINE_GROUND_M, day: (hour) => ({ ...QUIET, wind: [1.5 + hour / 100, 250], gustMps: 2.6 + hour / 100, temperatureC: 12 + hour / 100 }), source: name });
  return { ...plain, ...more };
}

const members = ['a', 'b', 'c'].map((name) => source(name).members[0]!);
const ensemble = (more: Partial<Forecast>): Forecast => ({ ...source('open-meteo:ecmwf_ifs025_ensemble'), kind: 'ensemble', declares: ['wind10m', 'gustMps'], members, ...more });
const dayOf = (forecasts: readonly Forecast[], changes: Partial<DayInput> = {}): JudgedDay => judgeDay({ ...inputOf({ site: ALPINE, sheet: 'descent-experienced', forecasts }), ...changes });
const utcHour = (validAt: string) => Number(validAt.slice(11, 13));

// ECMWF open data and GEFS come in steps of three hours (reference/forecast-sources, 1.11); their runs begin at 0, 6, 12 and 18 UTC.
test.each([
  [3, '2027-05-14T06:00:00Z', false], [3, '2027-05-14T07:00:00Z', true], [3, '2027-05-14T08:00:00Z', true], [3, '2027-05-14T09:00:00Z', false],
  [6, '2027-05-14T09:00:00Z', true], [6, '2027-05-14T12:00:00Z', false], [1, '2027-05-14T07:00:00Z', false], [undefined, '2027-05-14T07:00:00Z', false],
])('steps of %s h: %s interpolated: %s', (stepHours, validAt, isBetween) => {
  expect(isInterpolated({ stepHours }, validAt)).toBe(isBetween);
});

test('two hours in three of an ensemble in steps of three hours are marked, and none of an hourly one', () => {
  const day = dayOf([source('one'), ensemble({ stepHours: 3 })]);
  expect(day.hours.length).toBeGreaterThan(9);
  for (const { validAt, ensemble: said } of day.hours) {
    if (utcHour(validAt) % 3 === 0) expect(said).not.toHaveProperty('between');
    else expect(said).toMatchObject({ between: { stepHours: 3 } });
  }
  for (const { ensemble: said } of dayOf([source('one'), ensemble({})]).hours) expect(said).not.toHaveProperty('between');
});

test('a deterministic source in steps is marked in the winds that are laid side by side', () => {
  const day = dayOf([source('open-meteo:icon_d2'), source('open-meteo:ecmwf_ifs025', { stepHours: 3 })]);
  for (const { validAt, wind } of day.hours) {
    const marks = wind?.bySource.map(({ interpolated = false }) => interpolated);
    expect(marks).toEqual([false, utcHour(validAt) % 3 !== 0]);
  }
});

test('the words say so: with the source, with its age, at the hour', () => {
  const day = dayOf([source('open-meteo:icon_d2'), ensemble({ stepHours: 3 })]);
  const vote = day.sources.find(({ kind }) => kind === 'ensemble')!;
  expect(voteSentence(vote, day)).toMatch(/hours between its steps of 3 h interpolated\.$/);
  expect(provenance(day)).toMatch(/ECMWF ensemble \(run \d+ h old, interpolated from steps of 3 h\)/);
  expect(provenance(day)).not.toMatch(/ICON-D2 \([^)]*interpolated/);
  const between = day.hours.find(({ validAt }) => utcHour(validAt) % 3 === 1)!;
  expect(membersCaption(between.ensemble!, '9 h')).toBe('What the ensemble’s members leave at 9 h, interpolated between steps of 3 h');
  const wind = { ...between.wind!.bySource[0]!, interpolated: true } as const;
  expect(windBySource(wind, READER)).toMatch(/interpolated between its own steps\.$/);
});
