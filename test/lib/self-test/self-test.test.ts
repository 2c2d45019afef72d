import { describe, expect, test } from 'vitest';
import { judgeDay } from '../../../lib/brief/judge-day.ts';
import { clockFaults, KNOWN } from '../../../lib/brief/self-test/clock.ts';
import { canaryFaults, selfTestFaults, type Judge } from '../../../lib/brief/self-test/self-test.ts';
import { PLANTED } from '../../support/planted-faults.ts';
import { thresholds } from '../../support/typical-days.ts';

test('the judge that ships gets everything right', () => {
  expect(selfTestFaults(judgeDay, thresholds)).toEqual([]);
  expect(canaryFaults(judgeDay, thresholds)).toEqual([]);
});

describe('a judge broken on purpose is caught', () => {
  test('there are twenty and more of them', () => expect(Object.keys(PLANTED).length).toBeGreaterThanOrEqual(20));

  test.each(Object.entries<Judge>(PLANTED))('%s', (_, judge) => {
    expect(selfTestFaults(judge, thresholds)).not.toEqual([]);
  });
});

test('the canaries alone catch a judge that has become permissive', () => {
  for (const name of ['everything is within', 'unknown reads as within', 'beyond reads as close', 'm/s are read as km/h', 'it throws']) {
    expect(canaryFaults(PLANTED[name]!, thresholds), name).not.toEqual([]);
  }
});

test('the rules of time of this runtime are those we know, and others are noticed', () => {
  expect(KNOWN).toHaveLength(10);
  expect(clockFaults()).toEqual([]);
  expect(clockFaults([['2026-07-15T03:00:00Z', 'America/Sao_Paulo', '2026-07-15 01:00'], ['2026-07-15T03:00:00Z', 'Atlantis/Nowhere', '2026-07-15 01:00']])).toEqual(['America/Sao_Paulo', 'Atlantis/Nowhere']);
});
