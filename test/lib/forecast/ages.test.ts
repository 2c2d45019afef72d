import { expect, test } from 'vitest';
import { isAgeSaid, needsRefetch, runAgeHours } from '../../../lib/forecast/ages.ts';

test('age counts from the run, and is said beyond twelve hours', () => {
  expect(runAgeHours('2027-05-13T18:00:00Z', '2027-05-14T06:30:00Z')).toBe(12.5);
  expect(runAgeHours('2027-05-14T07:00:00Z', '2027-05-14T06:30:00Z')).toBe(-0.5);
  expect(runAgeHours(null, '2027-05-14T06:30:00Z')).toBeNull();
  expect(runAgeHours('yesterday', '2027-05-14T06:30:00Z')).toBeNull();
  expect(isAgeSaid(12)).toBe(false);
  expect(isAgeSaid(12.01)).toBe(true);
});

test('a fetch older than three hours is asked for again, and so is one of unknown age', () => {
  expect(needsRefetch('2027-05-14T03:30:00Z', '2027-05-14T06:30:00Z')).toBe(false);
  expect(needsRefetch('2027-05-14T03:29:59Z', '2027-05-14T06:30:00Z')).toBe(true);
  expect(needsRefetch('', '2027-05-14T06:30:00Z')).toBe(true);
});
