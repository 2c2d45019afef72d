// The wing classes as they ship, against the table of the data shapes: trim km/h, glide at trim, least sink m/s; typical
// figures, common practice, no source.
import { expect, test } from 'vitest';
import { parseWingClasses } from '../../lib/config/wing-classes.ts';
import { parseWing } from '../../lib/config/wing.ts';
import wingClassesJson from '../../config/wing-classes.json' with { type: 'json' };
import { valueOf } from '../lib/config/fixtures.ts';

const table = [
  ['EN A', 36, 8.2, 1.15],
  ['EN B', 38, 9.0, 1.1],
  ['EN C', 39, 9.6, 1.05],
  ['EN D', 40, 10.4, 1.0],
  ['tandem', 38, 8.6, 1.15],
] as const;

const classes = valueOf(parseWingClasses(wingClassesJson));

test.each(table)('%s', (name, trimKmh, glideAtTrim, minSinkMps) => {
  expect(wingClassesJson[name]).toMatchObject({ trimKmh, glideAtTrim, minSinkMps });
  expect(classes[name]).toMatchObject({ class: name, trimMps: trimKmh / 3.6, glideAtTrim, minSinkMps });
});

test('are five, and each says that it is typical', () => {
  expect(Object.keys(wingClassesJson)).toEqual(table.map(([name]) => name));
  for (const { basis } of Object.values(wingClassesJson)) expect(basis).toContain('common practice, no source');
});

// Flight model, section 9: EN B at reference mass.
test('EN B trims at 10.5556 m/s and sinks least at 9.2444 m/s', () => {
  const wing = valueOf(parseWing({ class: 'EN B' }, classes));
  expect(wing.trimMps).toBeCloseTo(10.5556, 4);
  expect(2 * wing.minSinkMps * wing.glideAtTrim - wing.trimMps).toBeCloseTo(9.2444, 4);
});
