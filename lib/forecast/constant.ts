/**
 * Suspicious constants: real wind, gusts and temperature do not keep one value to the last digit for a whole day, stuck
 * feeds and zero-filled columns do. Only these three fields; many others (rain, cloud, radiation at night) do in earnest.
 */
import type { Conditions } from './conditions.ts';
import type { SourceFailure } from './failure.ts';

export type WatchedField = Extract<SourceFailure, { kind: 'constant' }>['field'];

const DAY_HOURS = 24;
/** A frame that holds less (a short spring day, a service that begins with the current hour) counts as a whole from here on. */
const WHOLE_FRAME_HOURS = 18;

const watched: Readonly<Record<WatchedField, (hour: Conditions) => unknown>> = {
  wind10m: (hour) => hour.wind10m?.speedMps,
  gustMps: (hour) => hour.gustMps,
  temperature2mC: (hour) => hour.temperature2mC,
};

/** The first watched field that keeps one value over a day of hourly, sorted conditions; missing hours do not break the run. */
export function constantField(hours: readonly Conditions[]): WatchedField | null {
  const fields = Object.keys(watched) as WatchedField[];
  return fields.find((field) => isStuck(hours.map(watched[field]))) ?? null;
}

function isStuck(values: readonly unknown[]): boolean {
  let first = 0;
  let last = 0;
  let held: number | null = null;
  let changes = 0;
  let longest = 0;
  for (const [index, value] of values.entries()) {
    if (typeof value !== 'number') continue;
    if (value !== held) {
      held = value;
      first = index;
      changes += 1;
    }
    last = index;
    longest = Math.max(longest, last - first + 1);
  }
  return longest >= DAY_HOURS || (changes === 1 && longest >= WHOLE_FRAME_HOURS);
}
