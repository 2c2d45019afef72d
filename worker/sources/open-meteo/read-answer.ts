/**
 * An answer of the Open-Meteo interface as the service writes it, before anything is trusted: one location comes as an
 * object, several as a list in the order asked, keys may be missing, columns may be null or of another length.
 */
import { fieldOf, fieldsOf, listOf, numberOf } from '../values.ts';
import { KNOWN_UNITS, type UnitWord } from './variables.ts';
import type { SourceFailure } from '../../../lib/forecast/failure.ts';
import { failure, success, type Result } from '../../../lib/result.ts';

export interface Column {
  /** null: no unit was given. */
  readonly unit: UnitWord | null;
  readonly values: readonly unknown[];
}

export interface AnswerLocation {
  readonly latDeg: number | null;
  readonly lonDeg: number | null;
  /** The model's ground, for a request with `elevation=nan`. */
  readonly groundM: number | null;
  readonly utcOffsetS: number | null;
  readonly columns: ReadonlyMap<string, Column>;
}

export function readAnswer(json: unknown, locations: number): Result<readonly AnswerLocation[], SourceFailure> {
  if (fieldOf(json, 'error') === true) return failure({ kind: 'refused', status: 200 });
  const list = listOf(json) ?? [json];
  if (list.length !== locations) return failure({ kind: 'shape', path: '$' });
  const read = list.map(readLocation);
  return read.every((location) => location !== null) ? success(read) : failure({ kind: 'shape', path: '$.hourly' });
}

function readLocation(json: unknown, index: number): AnswerLocation | null {
  const hourly = fieldsOf(fieldOf(json, 'hourly'));
  if (hourly === null || !isNumbered(json, index)) return null;
  const units = fieldOf(json, 'hourly_units');
  const columns = new Map<string, Column>();
  for (const [name, values] of Object.entries(hourly)) {
    const list = listOf(values);
    if (list !== null) columns.set(name, { unit: unitWord(fieldOf(units, name)), values: list });
  }
  return {
    latDeg: numberOf(fieldOf(json, 'latitude')),
    lonDeg: numberOf(fieldOf(json, 'longitude')),
    groundM: numberOf(fieldOf(json, 'elevation')),
    utcOffsetS: numberOf(fieldOf(json, 'utc_offset_seconds')),
    columns,
  };
}

/** `location_id` is left out for the first location; where it is given, it is the place in the request. */
function isNumbered(json: unknown, index: number): boolean {
  const id = fieldOf(json, 'location_id');
  return id === undefined || id === index;
}

function unitWord(unit: unknown): UnitWord | null {
  if (unit === undefined || unit === null) return null;
  return KNOWN_UNITS.find((known) => known === unit) ?? 'other';
}
