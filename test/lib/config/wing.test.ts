import { describe, expect, test } from 'vitest';
import { parseWing } from '../../../lib/config/wing.ts';
import { parseWingClasses } from '../../../lib/config/wing-classes.ts';
import wingClassesJson from '../../../config/wing-classes.json' with { type: 'json' };
import { issuesOf, pathsOf, valueOf, withValue, type Json } from './fixtures.ts';

const classes = valueOf(parseWingClasses(wingClassesJson));
const own = { trimMps: 10.5, glideAtTrim: 9, minSinkMps: 1.1 };

function paths(json: unknown): string[] {
  return pathsOf(parseWing(json, classes, ['wing']));
}

describe('a wing', () => {
  test('by its class has the figures of the class', () => {
    expect(valueOf(parseWing({ class: 'EN B' }, classes))).toEqual({ ...classes['EN B'], referenceMassKg: null, allUpMassKg: null });
  });

  test('by its class and masses keeps both', () => {
    const wing = valueOf(parseWing({ class: 'tandem', referenceMassKg: 160, allUpMassKg: 185 }, classes));
    expect(wing).toEqual({ ...classes.tandem, referenceMassKg: 160, allUpMassKg: 185 });
  });

  test('by its own figures has no class, and stall and top by the common shares of trim', () => {
    expect(valueOf(parseWing(own, classes))).toEqual({ class: null, ...own, stallMps: 0.62 * 10.5, topMps: 1.35 * 10.5, referenceMassKg: null, allUpMassKg: null });
  });

  test('given stall and top win', () => {
    expect(valueOf(parseWing({ ...own, stallMps: 6, topMps: 15 }, classes))).toMatchObject({ stallMps: 6, topMps: 15 });
  });
});

describe('figures that no polar fits are refused with the reason', () => {
  // Vms = 2 minSink glide - trim has to lie between stall and trim (flight model, section 4).
  test('least sink at or above trim', () => {
    const [issue] = issuesOf(parseWing({ ...own, minSinkMps: 1.2 }, classes));
    expect(issue?.path).toBe('$.minSinkMps');
    expect(issue?.problem).toBe('with this glide and trim the wing would sink least at 11.1 m/s, not below its trim of 10.5 m/s');
    expect(issue?.allowed).toBe('between 0.94 and 1.17 m/s for this glide and trim');
  });

  test('least sink at or below the stall', () => {
    expect(issuesOf(parseWing({ ...own, minSinkMps: 0.8 }, classes))[0]?.problem).toContain('least at 3.9 m/s, not above its stall of 6.5 m/s');
  });

  test('exactly on an edge is refused, just inside is not', () => {
    const figures = { trimMps: 10, glideAtTrim: 10, stallMps: 6 };
    expect(paths({ ...figures, minSinkMps: 1 })).toEqual(['$.wing.minSinkMps']);
    expect(paths({ ...figures, minSinkMps: 0.999 })).toEqual([]);
    expect(paths({ ...figures, minSinkMps: 0.8 })).toEqual(['$.wing.minSinkMps']);
    expect(paths({ ...figures, minSinkMps: 0.801 })).toEqual([]);
  });

  test('a stall not below trim, a top speed not above it', () => {
    expect(paths({ ...own, stallMps: 10.5 })).toEqual(['$.wing.stallMps']);
    expect(paths({ ...own, topMps: 10.5 })).toEqual(['$.wing.topMps']);
  });
});

describe('is refused', () => {
  test.each<[string, unknown, string[]]>([
    ['another class', { class: 'EN E' }, ['$.wing.class']],
    ['a class that is a number', { class: 2 }, ['$.wing.class']],
    ['a class with figures', { class: 'EN B', ...own }, ['$.wing.class']],
    ['a misspelt key', { ...own, trimKmh: 38 }, ['$.wing.trimKmh']],
    ['trim in km/h', { ...own, trimMps: 38 }, ['$.wing.trimMps', '$.wing.minSinkMps']],
    ['text', { ...own, glideAtTrim: '9' }, ['$.wing.glideAtTrim']],
    ['null', { ...own, minSinkMps: null }, ['$.wing.minSinkMps']],
    ['no finite number', { ...own, trimMps: Infinity }, ['$.wing.trimMps']],
    ['a mass of a few kilograms', { class: 'EN A', allUpMassKg: 9 }, ['$.wing.allUpMassKg']],
    ['nothing', undefined, ['$.wing']],
    ['an empty object', {}, ['$.wing.trimMps', '$.wing.glideAtTrim', '$.wing.minSinkMps']],
  ])('%s', (_case, json, expected) => {
    expect(paths(json).sort()).toEqual([...expected].sort());
  });
});

describe('the file of classes', () => {
  test('has to hold all five, each possible', () => {
    expect(pathsOf(parseWingClasses(withValue(wingClassesJson as Json, ['EN C'], undefined)))).toEqual(['$["EN C"]']);
    expect(pathsOf(parseWingClasses(withValue(wingClassesJson as Json, ['EN A', 'minSinkMps'], 1.3)))).toEqual(['$["EN A"].minSinkMps']);
    expect(pathsOf(parseWingClasses(withValue(wingClassesJson as Json, ['EN A', 'basis'], undefined)))).toEqual(['$["EN A"].basis']);
  });
});
