/**
 * From columns to hours of conditions. What is wrong with the frame (time, unit) is a failure; what is wrong with a
 * column (absent, all null, unit "undefined", another length than the times, texts for numbers) makes its field missing.
 */
import { directionOf, largerOf, numberOf } from '../values.ts';
import type { AnswerLocation, Column } from './read-answer.ts';
import { columnsFor, HOURLY_FIELDS, memberColumn, SIMPLE_FIELDS, type HourlyField, type SimpleField, type Wanted } from './variables.ts';
import type { ConditionField, Conditions, Level, NearGroundWind, Wind } from '../../../lib/forecast/conditions.ts';
import type { SourceFailure } from '../../../lib/forecast/failure.ts';
import { timesFault } from '../../../lib/forecast/instants.ts';
import { failure, success, type Result } from '../../../lib/result.ts';
import { HOUR_MS, isoUtc } from '../../../lib/time.ts';

export interface Ask extends Wanted {
  readonly model: string;
  readonly members: number;
  /** The instants wanted, both included. */
  readonly fromMs: number;
  readonly toMs: number;
}

/** One list of hours a member. Hours that were not delivered are not there: lib/forecast/frame.ts puts them in, empty. */
export function toMembers(location: AnswerLocation, ask: Ask): Result<readonly (readonly Conditions[])[], SourceFailure> {
  const stamps = stampsOf(location);
  if (!stamps.ok) return stamps;
  const misfit = unitFault(location, ask);
  if (misfit !== null) return failure(misfit);
  const { groundM } = location;
  if (groundM === null) return failure({ kind: 'ground', why: 'missing', byM: null });
  const wanted = stamps.value.filter((at) => at >= ask.fromMs && at <= ask.toMs);
  if (wanted.length === 0 || isShifted(stamps.value, ask)) return failure({ kind: 'times', why: 'wrong-day' });
  const rows = new Map(stamps.value.map((at, row) => [at, row]));
  const members = Array.from({ length: ask.members }, (_, member) => {
    const read = reader(location, ask.model, { rows, member });
    return wanted.map((at) => hourOf(at, groundM, { ask, read }));
  });
  return success(members);
}

/** Epoch ms, from a column that says it is unix time in UTC. */
function stampsOf(location: AnswerLocation): Result<readonly number[], SourceFailure> {
  const time = location.columns.get('time');
  if (time === undefined) return failure({ kind: 'shape', path: '$.hourly.time' });
  const isUtc = time.unit === 'unixtime' && (location.utcOffsetS ?? 0) === 0;
  if (!isUtc) return failure({ kind: 'times', why: 'not-utc' });
  const stamps = time.values.map((value) => (typeof value === 'number' ? value * 1000 : NaN));
  const why = timesFault(stamps);
  return why === null ? success(stamps) : failure({ kind: 'times', why });
}

/**
 * A span as long as what was asked for, an hour more on each side included, but not that span: an answer moved by a zone
 * or a clock change, in which every value would stand at a wrong time. Shorter or longer spans are looked up by stamp.
 */
function isShifted(stamps: readonly number[], ask: Ask): boolean {
  const atStart = (stamps[0] ?? NaN) - (ask.fromMs - HOUR_MS);
  const atEnd = (stamps.at(-1) ?? NaN) - (ask.toMs + HOUR_MS);
  return atStart !== 0 && atStart === atEnd;
}

/** The first column that has a unit other than the one asked for. "undefined" means that the model lacks the variable. */
function unitFault(location: AnswerLocation, ask: Ask): SourceFailure | null {
  for (const [variable, expected] of columnsFor(ask)) {
    for (let member = 0; member < ask.members; member += 1) {
      const column = columnOf(location, memberColumn(variable, member), ask.model);
      if (column === undefined || column.unit === expected || column.unit === 'undefined') continue;
      return { kind: 'unit', field: variable, expected, found: column.unit };
    }
  }
  return null;
}

/** By its name, or by its name and the model that was asked: the service adds that where several models answer. */
function columnOf(location: AnswerLocation, name: string, model: string): Column | undefined {
  return location.columns.get(name) ?? location.columns.get(`${name}_${model}`);
}

type Read = (variable: string, atMs: number) => unknown;

function reader(location: AnswerLocation, model: string, { rows, member }: { rows: ReadonlyMap<number, number>; member: number }): Read {
  const found = new Map<string, readonly unknown[] | null>();
  const valuesOf = (variable: string): readonly unknown[] | null => {
    const known = found.get(variable);
    if (known !== undefined) return known;
    const column = columnOf(location, memberColumn(variable, member), model);
    const isWhole = column !== undefined && column.unit !== 'undefined' && column.values.length === rows.size;
    const values = isWhole ? column.values : null;
    found.set(variable, values);
    return values;
  };
  return (variable, atMs) => {
    const row = rows.get(atMs);
    return row === undefined ? null : valuesOf(variable)?.[row];
  };
}

function hourOf(atMs: number, gridElevationM: number, { ask, read }: { ask: Ask; read: Read }): Conditions {
  const value = (variable: string) => numberOf(read(variable, atMs));
  const wind = (place: string): Wind => ({ speedMps: value(`wind_speed_${place}`), fromDeg: directionOf(read(`wind_direction_${place}`, atMs)) });
  const hour: { -readonly [Field in keyof Conditions]: Conditions[Field] } = { validAt: isoUtc(atMs), gridElevationM };
  const has = (field: ConditionField) => ask.declares.includes(field);
  if (has('wind10m')) hour.wind10m = wind('10m');
  if (has('nearGround')) hour.nearGround = ask.nearGroundM.map((heightAglM): NearGroundWind => ({ heightAglM, ...wind(`${heightAglM}m`) }));
  if (has('levels')) {
    hour.levels = ask.levelsHpa.map((pressureHpa): Level => ({
      pressureHpa,
      altitudeM: value(`geopotential_height_${pressureHpa}hPa`),
      ...wind(`${pressureHpa}hPa`),
      temperatureC: value(`temperature_${pressureHpa}hPa`),
      relativeHumidityPct: value(`relative_humidity_${pressureHpa}hPa`),
    }));
  }
  for (const field of Object.keys(SIMPLE_FIELDS) as SimpleField[]) {
    if (has(field)) hour[field] = value(SIMPLE_FIELDS[field].variable);
  }
  // The stamp closes its hour, so the hours that touch the instant are stamped with it and with the next one.
  for (const field of Object.keys(HOURLY_FIELDS) as HourlyField[]) {
    const { variable } = HOURLY_FIELDS[field];
    if (has(field)) hour[field] = largerOf(value(variable), numberOf(read(variable, atMs + HOUR_MS)));
  }
  return hour;
}
